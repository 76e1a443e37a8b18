"""bothways: closed batch reactors by kinetics that cannot contradict thermodynamics.

Every reverse rate is made from the forward rate and K(T); see `run`, `read_case`, `read_mechanism`. Figures are in
`bothways.plots`. Each part is loaded when a name of it is first used.
"""

import sys
from importlib import import_module
from types import ModuleType
from typing import TYPE_CHECKING, Any

from .version import program_version

if TYPE_CHECKING:
    from .along import Contributions, contributions
    from .audit import Audit, audit  # type: ignore[no-redef]
    from .batch import run
    from .case import Case, build_case, read_case
    from .collisions import implied_reverse_area
    from .compare import Comparison, compare
    from .endpoint import Verdict, verdict
    from .equilibrium import Equilibrium, equilibrium
    from .errors import BothwaysError, InputError, SolverError
    from .grid import Grid, build_grid, read_grid
    from .mechanism import Mechanism, bundled_cases, bundled_mechanisms, read_mechanism, write_mechanism
    from .mechanism import build as build_mechanism
    from .reduce import Reduced, reduce
    from .remarks import Remark
    from .sweep import Sweep, read_sweep, sweep
    from .trajectory import Trajectory, read_trajectory, write_trajectory
    from .vessel import Equations

__all__ = ["Audit", "BothwaysError", "Case", "Comparison", "Contributions", "Equations", "Equilibrium", "Grid",
           "InputError", "Mechanism", "Reduced", "Remark", "SolverError", "Sweep", "Trajectory", "Verdict", "audit",
           "build_case", "build_grid", "build_mechanism", "bundled_cases", "bundled_mechanisms", "compare",
           "contributions", "equilibrium", "implied_reverse_area", "read_case", "read_grid", "read_mechanism",
           "read_sweep", "read_trajectory", "reduce", "run", "sweep", "verdict", "write_mechanism", "write_trajectory"]

_PARTS = {
    "along": ("Contributions", "contributions"),
    "audit": ("Audit", "audit"),
    "batch": ("run",),
    "case": ("Case", "build_case", "read_case"),
    "collisions": ("implied_reverse_area",),
    "compare": ("Comparison", "compare"),
    "endpoint": ("Verdict", "verdict"),
    "equilibrium": ("Equilibrium", "equilibrium"),
    "errors": ("BothwaysError", "InputError", "SolverError"),
    "grid": ("Grid", "build_grid", "read_grid"),
    "mechanism": ("Mechanism", "bundled_cases", "bundled_mechanisms", "read_mechanism", "write_mechanism", "build_mechanism"),
    "reduce": ("Reduced", "reduce"),
    "remarks": ("Remark",),
    "sweep": ("Sweep", "read_sweep", "sweep"),
    "trajectory": ("Trajectory", "read_trajectory", "write_trajectory"),
    "vessel": ("Equations",),
}
"""Which part holds which of the names above. What the import of a part takes, only those who use it shall pay."""
_PART_OF = {name: part for part, names in _PARTS.items() for name in names}
_ITS_NAME = {"build_mechanism": "build"}


def __getattr__(name: str) -> Any:
    """A public name, from its part, which is loaded now."""
    if name == "__version__":
        value: Any = program_version()
    elif name == "plots":
        return import_module(f"{__name__}.plots")
    elif name in _PART_OF:
        value = getattr(import_module(f"{__name__}.{_PART_OF[name]}"), _ITS_NAME.get(name, name))
    else:
        raise AttributeError(f"module '{__name__}' has no attribute '{name}'")
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__, "__version__", "plots"})


class _Package(ModuleType):
    """Keeps the function where a part is called as its function is, such as `equilibrium`: loading a part puts it here."""

    def __setattr__(self, name: str, value: object) -> None:
        if not (isinstance(value, ModuleType) and name in __all__):
            super().__setattr__(name, value)


sys.modules[__name__].__class__ = _Package
