"""The version of the installed program."""


def program_version() -> str:
    """The version of the installed program."""
    from importlib.metadata import PackageNotFoundError, version  # takes longer to load than most of what asks for it

    try:
        return version("bothways")
    except PackageNotFoundError:
        return "0 (not installed)"
