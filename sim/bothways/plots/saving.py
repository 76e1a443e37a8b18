"""Figures as files: whole or not at all."""

import io
from pathlib import Path

from matplotlib.figure import Figure

from ..errors import InputError
from ..outfile import StrPath, check_writable, write_whole
from .style import settings

FORMATS = {".png": "png", ".svg": "svg", ".pdf": "pdf"}
DPI = 300


def check_picture(path: StrPath, replace: bool = False) -> str:
    """The format that the file's suffix asks for; an InputError if there is none or the file cannot be written."""
    suffix = Path(path).suffix.lower()
    if suffix not in FORMATS:
        found = f"the suffix is '{suffix}'" if suffix else "the file name has no suffix"
        raise InputError(found, expected=", ".join(FORMATS), file=path)
    check_writable(path, replace)
    return FORMATS[suffix]


def save(figure: Figure, path: StrPath, replace: bool = False) -> None:
    """Writes a figure as PNG (300 dpi), SVG or PDF, by the suffix; one that exists is an InputError unless `replace`."""
    kind = check_picture(path, replace)
    content = io.BytesIO()
    with settings():
        figure.savefig(content, format=kind, dpi=DPI, metadata=_undated(kind))
    write_whole(path, content.getvalue(), replace)


def _undated(kind: str) -> dict[str, None]:
    """Metadata without the time of writing: the same run gives the same file."""
    return {"svg": {"Date": None}, "pdf": {"CreationDate": None}}.get(kind, {})
