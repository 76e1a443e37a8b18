"""The door: what is asked for, checked, then answered."""

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from ..components import Components
from ..contents import Contents
from ..errors import InputError
from ..mechanism.model import Mechanism
from ..mechanism.phase import GAS, SOLUTION
from .closures import Held, State, Stock, at_energy, at_temperature, state_near
from .conserved import conserved_by_elements, conserved_by_reactions
from .possible import possible_species
from .result import Equilibrium, finish

Amounts = np.ndarray | Sequence[float] | Mapping[str, float]
_PAIRS = {GAS: ({"temperature", "volume"}, {"temperature", "pressure"}, {"internal_energy", "volume"},
                {"enthalpy", "pressure"}),
          SOLUTION: ({"temperature", "volume"}, {"enthalpy", "volume"})}
_STATED = {GAS: "temperature with volume, temperature with pressure, internal_energy with volume, or enthalpy with pressure",
           SOLUTION: "temperature with volume, or enthalpy with volume, in a solution"}
_POSITIVE = ("temperature", "pressure", "volume")
_KEPT = 64
_LEADING = 8
"""Species of a guess that choose its basis, if they are enough."""
_LARGEST = 1e300  # mol: sums stay finite


class GibbsMinimiser:
    """Equilibria of one mechanism's species under one set of conserved combinations; keeps what they share.

    conserved : "elements", "reactions" (what no reaction of the mechanism changes) or an integer matrix (m, N).
    """

    def __init__(self, mechanism: Mechanism, conserved: str | np.ndarray = "elements") -> None:
        self.mechanism = mechanism
        # the species alone: an equilibrium knows nothing of rates
        self._contents = Contents(replace(mechanism, reactions=()))
        self._led: dict[bytes, Components] = {}
        self._known: dict[bytes, tuple[np.ndarray, Components]] = {}
        self.conserved = _rows(mechanism, conserved)
        _check_columns(mechanism, self.conserved)

    def solve(self, amount: Amounts, *, temperature: float | None = None, pressure: float | None = None,
              volume: float | None = None, internal_energy: float | None = None, enthalpy: float | None = None,
              own_heat_capacity: float = 0.0, reference_temperature: float = 298.15,
              near: Equilibrium | None = None, guess: tuple[np.ndarray, float] | None = None) -> Equilibrium:
        """The equilibrium of a charge; the arguments of `equilibrium`, and `near`, one to start from."""
        asked = {"temperature": temperature, "pressure": pressure, "volume": volume,
                 "internal_energy": internal_energy, "enthalpy": enthalpy}
        given = {name: value for name, value in asked.items() if value is not None}
        held = _checked(given, self.mechanism.phase)
        _check_vessel(own_heat_capacity, reference_temperature)
        charged = self._amounts(amount)
        stock = self._stock(charged)
        start = near.state if near is not None and self._is_alike(near, stock) else self._guessed(stock, guess)
        if temperature is not None:
            state = at_temperature(stock, held, float(temperature), start)
        else:
            energy = float(given["internal_energy"] if enthalpy is None else enthalpy)
            state = at_energy(stock, held, energy, own_heat_capacity, reference_temperature, start)
        return finish(self.mechanism, stock, held, state, self.conserved, charged)

    def _guessed(self, stock: Stock, guess: tuple[np.ndarray, float] | None) -> State | None:
        """A guess as a state, in the basis of its most abundant species; None where one of these is absent."""
        if guess is None:
            return None
        amount = np.maximum(guess[0][stock.possible], 0.0) / stock.scale
        order = np.argsort(-amount, kind="stable")[:_LEADING]
        key = stock.possible.tobytes() + order.tobytes()
        if key not in self._led:
            if len(self._led) >= _KEPT:
                self._led.clear()
            rest = np.setdiff1d(np.arange(amount.size), order)
            self._led[key] = Components(self.conserved[:, stock.possible], np.concatenate([order, rest]))
        components = self._led.get(key)
        return None if components is None else state_near(components.copy(), amount, guess[1])

    def _is_alike(self, near: Equilibrium, stock: Stock) -> bool:
        return near.conserved is self.conserved and np.array_equal(near.log_mole_fraction > -np.inf, stock.possible)

    def _amounts(self, amount: Amounts) -> np.ndarray:
        if isinstance(amount, Mapping):
            values = np.zeros(len(self.mechanism.species))
            for name, value in amount.items():
                values[self.mechanism.index(name)] = value
        else:
            values = np.array(amount, dtype=float)
        if values.shape != (len(self.mechanism.species),):
            raise InputError(f"amounts of shape {values.shape}",
                             expected=f"one for each of the {len(self.mechanism.species)} species")
        wrong = np.flatnonzero(~((values >= 0) & (values <= _LARGEST)))
        if wrong.size:
            k = int(wrong[0])
            raise InputError(f"amount {values[k]:g} mol of {self.mechanism.names[k]}",
                             expected="a finite amount, not negative")
        if not np.any(values > 0):
            raise InputError("the charge is empty", expected="at least one species in a positive amount")
        return values

    def _stock(self, charged: np.ndarray) -> Stock:
        possible, components = self._possible(charged)
        exponent = int(np.frexp(np.sum(charged))[1])
        scaled = np.ldexp(charged[possible], -exponent)
        return Stock(self._contents, possible, scaled, float(np.ldexp(1.0, exponent)), components)


    def _possible(self, charged: np.ndarray) -> tuple[np.ndarray, Components]:
        """`possible_species`, kept for charges with the same zeros and the same order: nothing else matters to it."""
        key = (charged > 0).tobytes() + np.argsort(-charged, kind="stable").tobytes()
        if key not in self._known:
            if len(self._known) >= _KEPT:
                self._known.clear()
            self._known[key] = found = possible_species(self.conserved, charged)
            return found
        return self._known[key]


def equilibrium(mechanism: Mechanism, amount: Amounts, *, temperature: float | None = None,
                pressure: float | None = None, volume: float | None = None, internal_energy: float | None = None,
                enthalpy: float | None = None, conserved: str | np.ndarray = "elements", own_heat_capacity: float = 0.0,
                reference_temperature: float = 298.15, near: Equilibrium | None = None,
                guess: tuple[np.ndarray, float] | None = None) -> Equilibrium:
    """The equilibrium composition of an ideal-gas mixture or an ideal solution, by minimising the Gibbs energy.

    Parameters
    ----------
    mechanism : its species and their potentials are used; its reactions only where `conserved` is "reactions".
    amount : of each species in the charge, (N) or by name [mol].
    temperature [K] with volume [m3] or pressure [Pa], or internal_energy [J] with volume, or enthalpy [J] with pressure; of a
        solution temperature or enthalpy with volume.
    conserved : "elements"; "reactions": all that no reaction changes, which may be more; or an integer matrix (m, N).
    own_heat_capacity [J/K], reference_temperature [K] : of an adiabatic vessel that shares the temperature; the energy given
        then includes own_heat_capacity × (T - reference_temperature).
    near : an equilibrium to start from, which only saves time. guess : amounts (N) [mol] and temperature [K], likewise.

    Charges are taken as the exact numbers they are: 2 mol H2 with 1 mol O2 leave no excess, 2/3 with 1/3 one of 1e-17.

    >>> from bothways import read_mechanism
    >>> at = equilibrium(read_mechanism("hydrogen-oxygen"), {"H2": 2, "O2": 1}, temperature=3000.0, pressure=101325.0)
    >>> round(at.fraction("H2O"), 2)
    0.64
    """
    return _minimiser(mechanism, conserved).solve(
        amount, temperature=temperature, pressure=pressure, volume=volume, internal_energy=internal_energy,
        enthalpy=enthalpy, own_heat_capacity=own_heat_capacity, reference_temperature=reference_temperature, near=near,
        guess=guess)


def equilibria(mechanism: Mechanism, amount: Amounts, *, conserved: str | np.ndarray = "elements",
               own_heat_capacity: float = 0.0, reference_temperature: float = 298.15,
               **given: float | Sequence[float] | np.ndarray | None) -> list[Equilibrium]:
    """Equilibria of one charge along a list: one of the two quantities given, or both, may be a sequence.

    As `equilibrium`; each starts from the one before.
    """
    stated = {name: value for name, value in given.items() if value is not None}
    lengths = {np.size(value) for value in stated.values() if np.ndim(value) > 0}
    if len(lengths) > 1:
        raise InputError(f"lists of {' and '.join(map(str, sorted(lengths)))} values", expected="lists of one length")
    length, minimiser = max(lengths, default=1), _minimiser(mechanism, conserved)
    lists = {name: np.broadcast_to(np.asarray(value, dtype=float), length) for name, value in stated.items()}
    found: list[Equilibrium] = []
    for k in range(length):
        at = {name: float(values[k]) for name, values in lists.items()}
        found.append(minimiser.solve(amount, **at, own_heat_capacity=own_heat_capacity,  # type: ignore[arg-type]
                                     reference_temperature=reference_temperature, near=found[-1] if found else None))
    return found


def _minimiser(mechanism: Mechanism, conserved: str | np.ndarray) -> GibbsMinimiser:
    """The minimiser of a mechanism: made once for each kind of conservation, which threads may share."""
    if not isinstance(conserved, str):
        return GibbsMinimiser(mechanism, conserved)
    kept = mechanism.__dict__.setdefault("_minimisers", {})
    if conserved not in kept:
        kept[conserved] = GibbsMinimiser(mechanism, conserved)
    return kept[conserved]


def _rows(mechanism: Mechanism, conserved: str | np.ndarray) -> np.ndarray:
    if isinstance(conserved, str):
        makers = {"elements": conserved_by_elements, "reactions": conserved_by_reactions}
        if conserved not in makers:
            raise InputError(f"conserved '{conserved}'", expected="elements, reactions or a matrix")
        return makers[conserved](mechanism)
    values = np.array(conserved, dtype=float)
    if values.ndim != 2 or values.shape[1] != len(mechanism.species):
        raise InputError(f"a conserved matrix of shape {values.shape}",
                         expected=f"rows of {len(mechanism.species)} integers")
    if not np.all(values == np.rint(values)):
        raise InputError("a conserved matrix with entries that are no integers", expected="integers: ranks are exact")
    rows = values.astype(np.int64)
    _check_elements(mechanism, rows)
    return rows


def _check_columns(mechanism: Mechanism, rows: np.ndarray) -> None:
    empty = np.flatnonzero(~np.any(rows != 0, axis=0))
    if empty.size:
        raise InputError(f"species '{mechanism.names[empty[0]]}' holds nothing that is conserved",
                         expected="species made of elements")


def _check_elements(mechanism: Mechanism, rows: np.ndarray) -> None:
    order = np.arange(rows.shape[1])
    rank = Components(rows, order).basis.size
    labels = [f"element {e}" for e in mechanism.used_elements] + ["charge"]
    for label, row in zip(labels, conserved_by_elements(mechanism), strict=False):
        if Components(np.vstack([rows, row]), order).basis.size > rank:
            raise InputError(f"a conserved matrix that does not conserve {label}", expected="rows that imply every element")


def _checked(given: Mapping[str, float], phase: str) -> Held:
    """What is held, once exactly one of the pairs of this phase is given, in numbers that make sense."""
    if set(given) not in _PAIRS[phase]:
        raise InputError(f"given: {', '.join(given) or 'nothing'}", expected=_STATED[phase])
    for name, value in given.items():
        if isinstance(value, str):
            raise InputError(f"{name.replace('_', ' ')} '{value}' is a text", expected="a number, in SI units")
        if not np.isfinite(value) or (name in _POSITIVE and value <= 0):
            raise InputError(f"{name.replace('_', ' ')} {value:g}",
                             expected="a positive number" if name in _POSITIVE else "a finite number")
    what = "volume" if "volume" in given else "pressure"
    return Held(what, float(given[what]))


def _check_vessel(own_heat_capacity: float, reference_temperature: float) -> None:
    if not (np.isfinite(own_heat_capacity) and own_heat_capacity >= 0):
        raise InputError(f"heat capacity of the vessel {own_heat_capacity:g} J/K", expected="zero or a positive number")
    if not np.isfinite(reference_temperature):
        raise InputError(f"reference temperature {reference_temperature:g} K", expected="a finite number")
