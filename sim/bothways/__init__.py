"""bothways: closed batch reactors by kinetics that cannot contradict thermodynamics.

Every reverse rate is made from the forward rate and K(T); see `run`, `read_case`, `read_mechanism`. Figures are in
`bothways.plots`, which is loaded when it is first used.
"""

from typing import Any

from .along import Contributions, contributions
from .audit import Audit, audit
from .batch import program_version, run
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

__version__ = program_version()

__all__ = ["Audit", "BothwaysError", "Case", "Comparison", "Contributions", "Equations", "Equilibrium", "Grid",
           "InputError", "Mechanism", "Reduced", "Remark", "SolverError", "Sweep", "Trajectory", "Verdict", "audit",
           "build_case", "build_grid", "build_mechanism", "bundled_cases", "bundled_mechanisms", "compare",
           "contributions", "equilibrium", "implied_reverse_area", "read_case", "read_grid", "read_mechanism",
           "read_sweep", "read_trajectory", "reduce", "run", "sweep", "verdict", "write_mechanism", "write_trajectory"]


def __getattr__(name: str) -> Any:
    """`plots` when it is first asked for: matplotlib takes longer to load than a run takes."""
    if name != "plots":
        raise AttributeError(f"module 'bothways' has no attribute '{name}'")
    import bothways.plots as plots

    return plots
