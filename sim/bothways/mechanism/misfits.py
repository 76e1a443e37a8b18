"""What is said of equilibrium constants that contradict one another round a cycle."""

from typing import TYPE_CHECKING

import numpy as np

from ..constants import GAS_CONSTANT as R
from ..entry import Entry
from ..errors import InputError
from .cycles import Cycle, least_squares, suspects, worst_cycle

if TYPE_CHECKING:
    from .stated_equilibria import System

_SHOWN = 6
_NIL = 1e-9


def refuse_misfits(top: Entry, system: "System") -> None:
    """An InputError if ln K, ΔH or ΔCp does not close round some cycle, within the uncertainties."""
    for k in range(3):
        nu, values, allowed = part(system, k)
        cycle = worst_cycle(nu, values, allowed) if values.size else None
        if cycle is not None:
            raise misfit_error(top, system, k, cycle)


def part(system: "System", k: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Stoichiometric numbers of what is open, values at T₀ and what is allowed, of ΔG/RT₀, ΔH/RT₀ or ΔCp/R."""
    values, nu = system.at_one_temperature[k], system.nu_open
    if k == 2:
        values = values - nu.T @ np.nan_to_num(system.fixed_cp)
        nu = nu[np.isnan(system.fixed_cp)]
    return nu, values, system.allowed[k]


def misfit_error(top: Entry, system: "System", k: int, cycle: Cycle) -> InputError:
    """What a cycle that does not close is told as: of ln K (k = 0), ΔH (1) or ΔCp (2)."""
    through = ", ".join(f"{'' if abs(c) == 1 else f'{abs(c)} times '}{'forward' if c > 0 else 'back'} through "
                        f"'{system.reactions[j][1].equation}'" for j, c in _steps(cycle))
    numbers = ", ".join(str(system.reactions[j][0]) for j, _ in _steps(cycle))
    closed_by = " and the species' own data" if np.any(system.nu @ cycle.numbers) else ""
    off = cycle.numbers @ system.at_one_temperature.T
    off = np.where(np.abs(off) > _NIL, off, 0.0)
    RT = R * system.T0
    found = (f"ln K is off by {0.0 - off[0]:.4g} (ΔG by {off[0] * RT / 1e3:.4g} kJ/mol) at {system.T0:g} K, ΔH by "
             f"{off[1] * RT / 1e3:.4g} kJ/mol")
    if k == 2:
        found += f", ΔCp by {off[2] * R:.4g} J/(mol K)"
    unit = (1.0, RT / 1e3, R)[k]
    name = ("ln K", "kJ/mol of ΔH", "J/(mol K) of ΔCp")[k]
    return top.error(f"round the cycle {through}{closed_by} {found}", key=f"reactions {numbers}" if "," in numbers else
                     f"reaction {numbers}", expected=f"nothing, or at most {cycle.allowed * unit:.3g} {name} by the stated "
                     "uncertainties", remedy=_remedy(system, k, cycle))


def _steps(cycle: Cycle) -> list[tuple[int, int]]:
    return [(j, int(cycle.numbers[j])) for j in cycle.reactions]


def _remedy(system: "System", k: int, cycle: Cycle) -> str:
    """The smallest repair, and which single reaction could be the wrong one."""
    changes = smallest_repair(system)
    texts = [_change(system, k, j, changes[k, j]) for j in np.argsort(-np.abs(changes[k]))[:_SHOWN] if abs(changes[k, j]) > _NIL]
    remedy = "the smallest repair: " + ", ".join(texts)
    single = suspects(*part(system, k), cycle)
    if 0 < len(single) < len(cycle.reactions):
        names = " or ".join(f"'{system.reactions[j][1].equation}'" for j in single)
        remedy += f"; left to the others, {names} alone would close all cycles"
    return remedy


def smallest_repair(system: "System") -> np.ndarray:
    """The changes of ln K, ΔH/RT₀ and ΔCp/R, (3, S), that close all cycles, least in terms of the uncertainties."""
    y = least_squares(system.design, system.right, system.spread)
    return (system.design @ y - system.right).reshape(3, -1)


def _change(system: "System", k: int, j: int, change: float) -> str:
    where = f"of '{system.reactions[j][1].equation}'"
    if k == 0:
        return f"K {where} × {np.exp(change):.4g}"
    if k == 1:
        return f"ΔH {where} {change * R * system.T0 / 1e3:+.4g} kJ/mol"
    return f"ΔCp {where} {change * R:+.4g} J/(mol K)"
