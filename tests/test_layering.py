"""Imports run downwards only: read from the source, also where an import hides in a function.

A part is a module or package of bothways. It may import parts of the layers below its own, never one of its own
layer or above. A part that no layer names fails the test: it must be given its place here.
"""

import ast
import sys
import tomllib
from collections.abc import Iterator, Mapping
from functools import lru_cache
from pathlib import Path
from types import ModuleType

import pytest

import bothways

LAYERS = (  # the lowest first; "" is the package itself with its public names
    ("constants", "errors", "compiled", "roots", "version"),
    ("units", "outfile", "schedule", "components", "sums", "apart", "lanes"),
    ("entry", "hdf5"),
    ("kernels",),
    ("thermo",),
    ("rates",),
    ("balance",),
    ("mechanism",),
    ("integrate",),
    ("compiling",),
    ("vessel", "contents"),
    ("equilibrium", "trajectory"),
    ("along", "charge", "collisions", "course", "exchange", "heating", "reach", "relaxation", "solver_keys"),
    ("case",),
    ("surfaces",),
    ("endpoint", "monitored", "recorder", "remarks", "milestones"),
    ("safety",),
    ("batch", "grid"),
    ("outcome",),
    ("report",),
    ("audit",),
    ("compare", "sweep"),
    ("reduce",),
    ("plots",),
    ("",),
    ("cli",),
    ("__main__",),
)
RANK = {part: rank for rank, layer in enumerate(LAYERS) for part in layer}
ISLANDS = {"integrate": {"compiled", "lanes", "sums"}, "kernels": {"apart", "compiled", "constants", "lanes", "sums"}}
"""Parts that may import only these: solvers and kernels know no chemistry's objects."""
NEVER = {"equilibrium": ("rates", "balance", "kernels.rates", "kernels.equations", "vessel", "integrate")}
"""Modules that a part may not import though they stand below it: the equilibrium shares no kinetics with a run."""
THIRD_PARTY = {"numpy": None, "scipy": None, "numba": {"apart", "compiled", "compiling", "kernels", "lanes"},
               "llvmlite": {"apart", "compiled", "lanes"}, "h5py": {"hdf5"}, "matplotlib": {"plots"},
               "tqdm": {"cli"}, "distributed": {"cli"}}
"""Libraries, and the parts that are their doors (None: any). llvmlite comes with numba."""
OPTIONAL = {"distributed": "cluster"}
"""Libraries that are imported where they are asked for, and the extra that brings them."""

ROOT = Path(bothways.__file__).parent
Sources = Mapping[str, str]


def sources() -> dict[str, str]:
    """Every file of the package, by its path within it."""
    return {path.relative_to(ROOT).as_posix(): path.read_text(encoding="utf-8") for path in ROOT.rglob("*.py")}


def module_of(file: str) -> str:
    """The dotted name within the package: "" for its own __init__, "cli" for cli/__init__.py, "cli.run"."""
    return file.removesuffix(".py").replace("/", ".").removesuffix("__init__").removesuffix(".")


def part_of(module: str) -> str:
    return module.partition(".")[0]


@lru_cache(None)
def nodes(text: str) -> tuple[ast.AST, ...]:
    """Whatever in a source may import."""
    return tuple(n for n in ast.walk(ast.parse(text)) if isinstance(n, (ast.Import, ast.ImportFrom, ast.Call)))


def imports(file: str, text: str, modules: set[str]) -> Iterator[tuple[int, str, bool]]:
    """Line, dotted name and whether it is one of our own, for every import of a file."""
    package = module_of(file) if file.endswith("__init__.py") else module_of(file).rpartition(".")[0]
    for node in nodes(text):
        if isinstance(node, ast.Import):
            yield from ((node.lineno, *_absolute(alias.name)) for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            name, own = _absolute(node.module or "") if node.level == 0 else (_relative(package, node), True)
            for alias in node.names:
                inner = f"{name}.{alias.name}".lstrip(".")
                yield node.lineno, inner if own and inner in modules else name, own
        elif isinstance(node, ast.Call) and _dynamic(node.func) and file != "__init__.py":
            yield node.lineno, "an import by name", False


def _absolute(name: str) -> tuple[str, bool]:
    own = name == "bothways" or name.startswith("bothways.")
    return (name.removeprefix("bothways").lstrip("."), True) if own else (name, False)


def _relative(package: str, node: ast.ImportFrom) -> str:
    base = package.split(".") if package else []
    kept = base[: len(base) - (node.level - 1)]
    return ".".join([*kept, *filter(None, [node.module])])


def _dynamic(function: ast.expr) -> bool:
    name = function.attr if isinstance(function, ast.Attribute) else getattr(function, "id", "")
    return name in ("__import__", "import_module")


def faults(files: Sources) -> list[str]:
    """One line for each import that breaks the order, and for each part without a place."""
    modules = {module_of(file) for file in files}
    found = [f"{part}: no layer names it" for part in sorted({part_of(m) for m in modules} - set(RANK))]
    for file, text in files.items():
        for line, target, own in imports(file, text, modules):
            check = _own_fault if own else _library_fault
            problem = check(part_of(module_of(file)), target)
            if problem:
                found.append(f"{file}:{line}: {problem}")
    return found


def _own_fault(part: str, target: str) -> str:
    other = part_of(target)
    if part not in RANK or (part == other and part):
        return ""
    if other not in RANK:
        return f"imports {target}, which no layer names"
    if RANK[other] >= RANK[part]:
        return f"imports {target or 'the package itself'}, which is not below {part or 'the package itself'}"
    if part in ISLANDS and other not in ISLANDS[part]:
        return f"{part} is an island and imports {target}"
    if any(target == name or target.startswith(f"{name}.") for name in NEVER.get(part, ())):
        return f"{part} must not know {target}"
    return ""


def _library_fault(part: str, target: str) -> str:
    library = part_of(target)
    if library in sys.stdlib_module_names:
        return ""
    if library not in THIRD_PARTY:
        return f"{target} is not among the libraries of a run"
    doors = THIRD_PARTY[library]
    return "" if doors is None or part in doors else f"{library} has its door in {' and '.join(sorted(doors))}"


def test_imports_run_downwards() -> None:
    assert faults(sources()) == []


def test_the_package_loads_by_name_what_it_imports_for_type_checkers() -> None:
    """Its public names are loaded by name, when first used: from where, the imports that only type checkers carry out say."""
    package = sources()["__init__.py"]
    stated = {alias.asname or alias.name: node.module for node in nodes(package) if isinstance(node, ast.ImportFrom)
              for alias in node.names if node.level and alias.name != "program_version"}
    assert stated == bothways._PART_OF
    for name, part in stated.items():
        found = getattr(bothways, name)
        assert not isinstance(found, ModuleType) and found.__module__.startswith(f"bothways.{part}")


def test_every_file_was_read() -> None:
    files = sources()
    assert len(files) > 40 and {"__init__.py", "cli/run.py", "mechanism/reader.py", "integrate/__init__.py"} <= set(files)


def test_libraries_are_those_the_package_asks_for() -> None:
    project = tomllib.loads((Path(__file__).parents[1] / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    asked = {requirement.partition(">")[0].strip() for requirement in project["dependencies"]}
    assert asked == set(THIRD_PARTY) - {"llvmlite", *OPTIONAL}
    for library, extra in OPTIONAL.items():
        assert library in " ".join(project["optional-dependencies"][extra])


# ---- the check itself can fail

BROKEN = [
    ("mechanism/reader.py", "from ..vessel import Equations", "imports vessel, which is not below mechanism"),
    ("mechanism/reader.py", "def f():\n    from ..vessel import E", "reader.py:2: imports vessel, which is not below"),
    ("mechanism/reader.py", "import bothways.cli.run", "imports cli.run, which is not below mechanism"),
    ("mechanism/reader.py", "from .. import case", "imports case, which is not below mechanism"),
    ("mechanism/reader.py", "from bothways import run", "imports the package itself, which is not below mechanism"),
    ("vessel.py", "from .contents import Contents", "imports contents, which is not below vessel"),
    ("thermo/shomate.py", "from ..rates.law import Law", "imports rates.law, which is not below thermo"),
    ("integrate/bdf.py", "from ..errors import InputError", "integrate is an island and imports errors"),
    ("integrate/bdf.py", "from ..mechanism.model import Mechanism", "integrate is an island and imports mechanism.model"),
    ("kernels/rates.py", "from ..errors import InputError", "kernels is an island and imports errors"),
    ("equilibrium/newton.py", "from ..rates import Law", "equilibrium must not know rates"),
    ("equilibrium/newton.py", "from ..kernels import rates", "equilibrium must not know kernels.rates"),
    ("equilibrium/newton.py", "import bothways.rates.law as law", "equilibrium must not know rates.law"),
    ("case.py", "import pandas", "pandas is not among the libraries of a run"),
    ("report.py", "import matplotlib.pyplot", "matplotlib has its door in plots"),
    ("report.py", "def f():\n    from h5py import File", "report.py:2: h5py has its door in hdf5"),
    ("case.py", "import importlib\nimportlib.import_module('bothways.cli')", "case.py:2: an import by name"),
    ("novelty.py", "import math", "novelty: no layer names it"),
    ("batch.py", "from .novelty import x", "imports novelty, which no layer names"),
    ("errors.py", "from . import constants", "imports constants, which is not below errors"),
]


def added_faults(file: str, text: str) -> list[str]:
    """What the check finds with `text` as the content of a file that it does not find without."""
    whole = sources()
    before = faults({name: "" if name == file else content for name, content in whole.items()})
    return [line for line in faults(whole | {file: text}) if line not in before]


@pytest.mark.parametrize("file, text, expected", BROKEN)
def test_a_broken_order_is_found(file: str, text: str, expected: str) -> None:
    assert [line for line in added_faults(file, text) if expected in line]


SOUND = [("mechanism/reader.py", "from . import model\nfrom .model import Species\nfrom ..rates import law"),
         ("cli/run.py", "from .. import __version__, batch\nfrom ..plots import save\nfrom . import DONE"),
         ("integrate/bdf.py", "from .interface import Problem\nfrom ..compiled import compiled\nimport scipy.linalg"),
         ("equilibrium/newton.py", "from ..contents import Contents\nfrom ..mechanism.model import Mechanism"),
         ("plots/a.py", "import matplotlib.pyplot as plt\nfrom ..report import notable")]


@pytest.mark.parametrize("file, text", SOUND)
def test_a_sound_order_is_not_reported(file: str, text: str) -> None:
    assert added_faults(file, text) == []
