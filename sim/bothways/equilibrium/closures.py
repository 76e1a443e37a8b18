"""The equilibrium of a charge where T and V, T and p, U and V, or H and p are given; of solutions T and V, or H and V."""

from dataclasses import dataclass, replace

import numpy as np

from ..components import Components
from ..constants import GAS_CONSTANT as R
from ..contents import Contents
from ..errors import InputError, SolverError
from ..mechanism.phase import GAS, SOLUTION
from .continuation import compose
from .newton import Point, Task, balances, jacobian, log_amounts, log_sides, solved

LOWEST, HIGHEST = 50.0, 20000.0
"""Where the temperature of an adiabatic vessel is sought [K]."""
_FIRST_GUESS = {GAS: 2000.0, SOLUTION: 350.0}
_MOST_TEMPERATURES = 200
_CLOSE = 1e-13
_ROUND_OFF = 4 * np.finfo(float).eps


@dataclass(frozen=True)
class Stock:
    """A charge over the species it can turn into.

    possible : (N) mask. charge : (n) amounts, scaled by a power of two to a sum near 1. scale : that power [mol].
    components : any, over the n possible species.
    """

    contents: Contents
    possible: np.ndarray
    charge: np.ndarray
    scale: float
    components: Components

    def molar(self, temperature: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """g°/RT, h°/RT and cp°/R of the possible species [-], (n) each."""
        g, h, cp = self.contents.molar(temperature)
        return g[self.possible], h[self.possible], cp[self.possible]


@dataclass(frozen=True)
class Held:
    """What is held besides temperature or energy: "volume" [m3] or "pressure" [Pa]."""

    what: str
    value: float


@dataclass(frozen=True)
class State:
    """An equilibrium of a stock: temperature [K], ln of the scaled amounts (n), and what finding it took.

    energy : U at held volume, H at held pressure and of solutions, over R and the scale [K]; heat_capacity : its slope [-].
    round_off : of the energy, as a relative change of temperature [-]. shift : d(η, ζ)/d ln T, (r) or (r + 1).
    """

    temperature: float
    point: Point
    log_amount: np.ndarray
    energy: float
    heat_capacity: float
    round_off: float
    shift: np.ndarray
    iterations: int
    energy_misfit: float = 0.0


def state_near(components: Components, amount: np.ndarray, temperature: float) -> State | None:
    """A state to start from that is no equilibrium: scaled amounts (n) at a temperature [K]; None if a component is nil."""
    if not np.all(amount[components.basis] > 0):
        return None
    log_component = np.log(amount[components.basis])
    point = Point(components, log_component, float(np.log(np.sum(amount))))
    return State(temperature, point, np.empty(0), 0.0, 0.0, 0.0, np.zeros(log_component.size + 1), 0)


def at_temperature(stock: Stock, held: Held, temperature: float, near: State | None = None) -> State:
    """The equilibrium at a given temperature [K]."""
    g, h, cp = stock.molar(temperature)
    task = Task(g + _unit(stock, held, temperature), stock.charge, stock.contents.shared(held.what))
    point, iterations = compose(task, stock.components, _moved(near, temperature))
    less = stock.contents.less(held.what)
    return _with_energy(point, task, temperature, h - less, cp - less, iterations)


def _unit(stock: Stock, held: Held, temperature: float) -> float:
    """What ln a holds besides ln n of the scaled amounts, or ln x where the mixture swells."""
    contents = stock.contents
    if held.what == "pressure":
        return float(np.log(held.value / contents.mechanism.standard_pressure))
    if contents.shared(held.what):
        return 0.0
    return float(contents.log_activity_unit(1.0, temperature, held.value) + np.log(stock.scale))


def _moved(near: State | None, temperature: float) -> Point | None:
    """The point of a state, shifted to another temperature to first order where that is a small shift."""
    if near is None:
        return None
    shift = near.shift * np.log(temperature / near.temperature)
    if np.max(np.abs(shift)) > 1.0:
        return near.point
    n_rows = near.point.log_component.size
    total = near.point.log_total + float(np.sum(shift[n_rows:]))
    return Point(near.point.components, near.point.log_component + shift[:n_rows], total)


def _with_energy(point: Point, task: Task, temperature: float, energy: np.ndarray, heat_capacity: np.ndarray,
                 iterations: int) -> State:
    """The state with its energy and heat capacity, that of shifting composition included.

    energy (n): u/RT or h/RT; heat_capacity (n): cv/R or cp/R, of the species. At fixed η and ζ, d ln n_j/d ln T is the
    energy of forming j from the components; η and ζ then follow the balances.
    """
    components = point.components
    log_n = log_amounts(point, task)
    _, weight, fraction = balances(point, task, log_n, log_sides(components.totals(task.charge)))
    formation = energy - energy[components.basis] @ components.formation
    forced = weight @ formation
    if task.swells:
        forced = np.append(forced, fraction @ formation)
    shift = -solved(jacobian(point, task, weight, fraction), forced)
    slope = formation + shift[: components.basis.size] @ components.formation
    if task.swells:
        slope += components.expansion * shift[-1]
    n = np.exp(log_n)
    total = float(n @ (energy * slope + heat_capacity))
    round_off = _ROUND_OFF * float(n @ np.abs(energy)) / total if total else 0.0
    return State(temperature, point, log_n, float(temperature * (n @ energy)), total, round_off, shift, iterations)


def at_energy(stock: Stock, held: Held, energy: float, own_heat_capacity: float, reference: float,
              near: State | None = None) -> State:
    """The equilibrium at a given U or H [J], own_heat_capacity [J/K] × (T - reference [K]) of the vessel included.

    Entropy is concave, so the energy rises with temperature: Newton's method within a bracket.
    """
    wanted, own = energy / (R * stock.scale), own_heat_capacity / (R * stock.scale)
    low, high, last = 0.0, np.inf, np.inf
    T = near.temperature if near else _FIRST_GUESS[stock.contents.mechanism.phase]
    iterations = 0
    for _ in range(_MOST_TEMPERATURES):
        near = at_temperature(stock, held, T, near)
        iterations += near.iterations
        excess = near.energy + own * (T - reference) - wanted
        step = -excess / (near.heat_capacity + own)
        if abs(step) <= max(_CLOSE, near.round_off) * T or high - low <= _ROUND_OFF * T:
            return replace(near, iterations=iterations, energy_misfit=abs(step) / T)
        if (T == LOWEST and excess > 0) or (T == HIGHEST and excess < 0):
            word = "internal energy" if stock.contents.less(held.what) else "enthalpy"
            raise _out_of_reach(word, held, energy, T, excess * R * stock.scale)
        low, high = (T, high) if excess < 0 else (low, T)
        new = _next(T, step, low, high, last)
        T, last = new, abs(new - T)
    raise SolverError(f"no temperature found for energy {energy:.6g} J", remedy="please report this case")


def _next(T: float, step: float, low: float, high: float, last: float) -> float:
    """Newton's temperature, within a factor 2 of T; between `low` and `high`, once both are known, their middle where
    Newton's steps leave them or do not shorten. `last` is the length of the step before."""
    newton = min(max(T + step, 0.5 * T, LOWEST), 2.0 * T, HIGHEST)
    if low > 0 and high < np.inf and not (low < newton < high and abs(newton - T) < 0.5 * last):
        return float(np.sqrt(low * high))
    return newton


def _out_of_reach(word: str, held: Held, energy: float, temperature: float, excess: float) -> InputError:
    least = "at least" if excess > 0 else "at most"
    return InputError(f"{word} {energy:.6g} J is out of reach at constant {held.what}",
                      expected=f"{least} {energy + excess:.6g} J, that of the equilibrium at {temperature:g} K")
