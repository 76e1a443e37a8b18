"""The equations once more, in plain NumPy, to hold compiled kernels against.

Written from the formulas alone; nothing of the program is imported. It reads a mechanism as a plain dict
(what ``tomllib`` makes of a mechanism file) and covers gases with these parts:

* species potentials ``NASA 7-coefficient``, ``NASA 9-coefficient``, ``Shomate`` and ``constant heat capacity``,
  joins closed or as published;
* laws ``Arrhenius`` (also with + M), ``Lindemann``, ``Troe`` (three widths), ``SRI``, ``activated``,
  ``pressure table``, ``Chebyshev`` and ``Hougen-Watson``, ``orders`` and ``stoichiometric_number`` beside any of them,
  and lists of terms.

Anything else raises NotImplementedError, so that no test passes by leaving something out.

The real types of NumPy go in and come out: float64, longdouble and their complex partners. Derivatives are
taken by complex step (W. Squire, G. Trapp, SIAM Rev. 40 (1998) 110, doi:10.1137/S003614459631241X), so every
branch looks at real parts only. Constants: the exact ones of the SI (2019).
"""

from dataclasses import dataclass, fields
from typing import Any

import numpy as np

from reference_file import (
    LD,
    PRESSURE,
    Array,
    R,
    Terms,
    boundaries_and_rows,
    cp_of,
    h_of,
    quantity,
    reaction,
    s_of,
    units_of,
)
from reference_laws import ARRHENIUS_WIDTH, CENTRE_WIDTH, activated, arrhenius, broadening, centre, fall_off, front

# ---- the whole


@dataclass(frozen=True)
class Vessel:
    """How the contents are held: ``volume`` or ``pressure`` [Pa]; ``adiabatic`` or ``isothermal``.

    An isothermal one whose temperature is given has a ``ramp`` [K/s], an adiabatic one in a jacket ``transfer`` (UA, in
    W/K per what the heat capacity is per) and ``jacket`` [K].
    """

    holds: str
    heat: str
    pressure: float | None = None
    heat_capacity: float = 0.0  # of the vessel: J/(m3 K), at constant pressure J/K
    ramp: Any = 0.0
    transfer: float = 0.0
    jacket: Any = 0.0

    def __post_init__(self) -> None:
        if self.holds not in ("volume", "pressure") or self.heat not in ("adiabatic", "isothermal"):
            raise NotImplementedError(f"{self.holds}, {self.heat}")
        if self.holds == "pressure" and self.pressure is None:
            raise ValueError("a vessel that holds its pressure needs one")


@dataclass(frozen=True)
class Thermal:
    """What depends on temperature alone."""

    T: Any
    k: Array  # of each term; k_inf of a fall-off term
    k_0: Array  # of each fall-off term
    centre: Array  # F_cent of each fall-off term, or the bracket of SRI
    front: Array  # of each fall-off term
    K_c: Array  # of each reaction
    h: Array  # h/RT
    cp: Array  # cp/R


class Reference:
    """A mechanism, read from the dict ``document``; ``precision`` is the real type of its numbers."""

    def __init__(self, document: dict[str, Any], precision: type = np.float64) -> None:
        if document["mechanism"].get("phase", "ideal gas") != "ideal gas":
            raise NotImplementedError(document["mechanism"]["phase"])
        self.precision, self.R = precision, precision(R)
        self.names = list(document["species"])
        self.n = len(self.names)
        units = units_of(document)
        self._read_species(document, units)
        self._read_reactions(document, units)

    def _read_species(self, document: dict[str, Any], units: dict[str, LD]) -> None:
        head, species = document["mechanism"], list(document["species"].values())
        joins, common = head.get("joins", "closed"), head.get("standard_pressure", "1 bar")
        stated = [one.get("standard_pressure", common) for one in species]
        self._p = self._kept([quantity(p, units["pressure"], PRESSURE) for p in stated])
        fits = [boundaries_and_rows(one["potential"], joins, units) for one in species]
        width = max(len(T) for T, _ in fits)
        self._T = self._kept([np.pad(T, (0, width - len(T)), constant_values=np.inf) for T, _ in fits])
        self._a = self._kept([np.pad(a, ((0, width + 1 - len(a)), (0, 0))) for _, a in fits])

    def _read_reactions(self, document: dict[str, Any], units: dict[str, LD]) -> None:
        self.reactions = [reaction(entry) for entry in document.get("reaction", [])]
        terms = Terms(self.names, units)
        for j, one in enumerate(self.reactions):
            for term in one.terms:
                terms.add(j, one, term)
        self._of = np.array(terms.reaction, dtype=int)
        self._partnered = np.array(terms.partnered, dtype=int)
        self._fall_off = np.array(terms.fall_off, dtype=int)
        self._rate, self._low = (self._kept(rows, ARRHENIUS_WIDTH) for rows in (terms.rate, terms.low))
        self._efficiency = self._kept(terms.efficiency, self.n)
        self._centre, self._front = self._kept(terms.centre, CENTRE_WIDTH), self._kept(terms.front, 2)
        self._width, self._activated = np.array(terms.width, dtype=str), np.array(terms.activated, dtype=bool)
        self._pressure_laws = [(i, self._kept_law(law)) for i, law in terms.pressure]
        self._lumped = [(i, self._kept_law(law)) for i, law in terms.lumped]
        self._read_stoichiometry()

    def _kept_law(self, law: Any) -> Any:
        """A law of temperature and pressure with its numbers in this precision."""
        numbers = {one.name: getattr(law, one.name) for one in fields(law)}
        kept = {name: [*map(self._kept, value)] if name == "rows" else value if name == "clamp"
                else value if name == "adsorbed" else self._kept(value) for name, value in numbers.items()}
        return type(law)(**kept)

    def _read_stoichiometry(self) -> None:
        """Molecules one by one, padded with the place n, whose concentration is 1; net numbers as triples."""
        self._molecules = [self._places([r.reactants for r in self.reactions]),
                           self._places([r.products for r in self.reactions])]
        net = [(j, self.names.index(name), r.products.get(name, 0) - r.reactants.get(name, 0))
               for j, r in enumerate(self.reactions) for name in dict.fromkeys([*r.reactants, *r.products])]
        triples = np.array(net, dtype=int).reshape(-1, 3)
        self._j, self._i = triples[:, 0], triples[:, 1]
        self._nu = triples[:, 2].astype(self.precision)

    def _places(self, sides: list[dict[str, int]]) -> Array:
        lists = [[self.names.index(name) for name, m in one.items() for _ in range(m)] for one in sides]
        width = max((len(one) for one in lists), default=0)
        padded = [one + [self.n] * (width - len(one)) for one in lists]
        return np.array(padded, dtype=int).reshape(len(sides), width)

    def _kept(self, values: Any, width: int | None = None) -> Array:
        array = np.array(values, dtype=LD).astype(self.precision)
        return array if width is None else array.reshape(-1, width)

    # -- species

    def _rows(self, T: Any) -> Array:
        """The row (n, 9) in force at T; at a boundary the lower range."""
        return self._a[np.arange(self.n), (T.real > self._T).sum(axis=1)]

    def _typed(self, T: Any) -> Any:
        return T * self.precision(1)

    def cp_R(self, T: Any) -> Array:
        """Heat capacity at constant pressure cp/R (n,) [-]."""
        return cp_of(self._rows(T), self._typed(T))

    def h_RT(self, T: Any) -> Array:
        """Enthalpy h/RT (n,) [-]."""
        return h_of(self._rows(T), self._typed(T)) / T

    def s_R(self, T: Any) -> Array:
        """Standard entropy s/R (n,) [-]."""
        return s_of(self._rows(T), self._typed(T))

    def g_RT(self, T: Any) -> Array:
        """Standard chemical potential g/RT (n,) [-]."""
        return self.h_RT(T) - self.s_R(T)

    # -- rates

    def _sum(self, places: Array, values: Array, length: int) -> Array:
        total = np.zeros(length, dtype=values.dtype)
        np.add.at(total, places, values)
        return total

    def K_c(self, T: Any) -> Array:
        """Equilibrium constants in concentrations [(mol/m3)^sum(nu)]: exp(-dG/RT) prod (p_i/RT)^nu_i."""
        minus_mu = np.log(self._p / (self.R * T)) - self.g_RT(T)
        return np.exp(self._sum(self._j, self._nu * minus_mu[self._i], len(self.reactions)))

    def _thermal(self, T: Any) -> Thermal:
        T = self._typed(T)
        laws = arrhenius(self._rate, T), arrhenius(self._low, T), centre(self._centre, T), front(self._front, T)
        return Thermal(T, *laws, self.K_c(T), self.h_RT(T), self.cp_R(T))

    def _term_constants(self, at: Thermal, M: Array, p: Any) -> Array:
        """k of each term; ``M`` of each partnered term. A +M term: k of one order higher, not times [M]."""
        k = at.k.astype(np.result_type(at.k, M, p))
        falling, M = self._partnered[self._fall_off], M[self._fall_off]
        k_inf = at.k[falling]
        F = at.front * broadening(self._width, at.centre, at.k_0 * M / k_inf)
        laws = activated(k_inf, at.k_0, F, M), fall_off(k_inf, at.k_0, F, M)
        k[falling] = np.where(self._activated, *laws)
        for i, law in self._pressure_laws:
            k[i] = law.k(at.T, p)
        return k

    def rate_constant(self, j: int, T: Any, M: Any = 0.0, p: Any = np.nan) -> Any:
        """Forward k of reaction j, summed over its terms [mol, m3, s]; [M] [mol/m3] is the same for all; p [Pa].

        A +M reaction has the k of one order higher: its rate is k [M] times the reactants' concentrations.
        """
        M = np.full(len(self._partnered), self._typed(M))
        return self._term_constants(self._thermal(T), M, self._typed(p))[self._of == j].sum()

    def _rates(self, at: Thermal, c: Array, p: Any) -> tuple[Array, Array, Array]:
        """Forward and reverse rates, and the sum of both without regard to sign [mol/(m3 s)]."""
        M = (self._efficiency * c).sum(axis=1)
        k = self._term_constants(at, M, p)
        plain = np.setdiff1d(np.arange(len(M)), self._fall_off)
        k[self._partnered[plain]] *= M[plain]
        padded = np.append(c, c.dtype.type(1))
        forward, reverse = (padded[places].prod(axis=1) for places in self._molecules)
        reverse = reverse / at.K_c
        plain = k.copy()
        plain[[i for i, _ in self._lumped]] = 0
        total, gross = (self._sum(self._of, x, len(self.reactions)) for x in (plain, abs(plain)))
        forward, reverse, size = total * forward, total * reverse, gross * (abs(forward) + abs(reverse))
        for i, law in self._lumped:
            j = self._of[i]
            ahead, back = law.rates(at.T, c, at.K_c[j])
            forward[j], reverse[j] = forward[j] + k[i] * ahead, reverse[j] + k[i] * back
            size[j] = size[j] + abs(k[i]) * (abs(ahead) + abs(back))
        return forward, reverse, size

    def net_rates(self, c: Array, T: Any) -> tuple[Array, Array]:
        """Forward and reverse rate of each reaction [mol/(m3 s)] at concentrations c (n,) [mol/m3]; p = C R T."""
        at, c = self._thermal(T), self._typed(np.asarray(c))
        return self._rates(at, c, c.sum() * self.R * at.T)[:2]

    # -- the vessel

    def _change(self, at: Thermal, y: Array, vessel: Vessel) -> tuple[Array, Array]:
        amounts, constant_volume = y[:-1], vessel.holds == "volume"
        total = amounts.sum() * self.R * at.T  # p V
        volume, p = (1, total) if constant_volume else (total / vessel.pressure, self._typed(vessel.pressure))
        forward, reverse, size = self._rates(at, amounts / volume, p)
        made = volume * self._sum(self._i, self._nu * (forward - reverse)[self._j], self.n)
        gross = abs(volume) * self._sum(self._i, abs(self._nu) * size[self._j], self.n)
        if vessel.heat == "isothermal":
            return np.append(made, vessel.ramp + 0 * at.T), np.append(gross, abs(vessel.ramp) + 0 * at.T.real)
        energy = self.R * at.T * (at.h - constant_volume)  # u or h of each species [J/mol]
        capacity = self.R * ((at.cp - constant_volume) @ amounts) + vessel.heat_capacity
        received = vessel.transfer * (vessel.jacket - at.T)
        return (np.append(made, (received - energy @ made) / capacity),
                np.append(gross, (abs(received) + abs(energy) @ gross) / abs(capacity)))

    def derivative(self, y: Array, holds: str, heat: str, pressure: float | None = None,
                   vessel_heat_capacity: float = 0.0, **outside: Any) -> tuple[Array, Array]:
        """dy/dt (n + 1,) and, of the same shape, the sum of the absolute contributions to it.

        holds = "volume": y = (c_1 ... c_n [mol/m3], T [K]), the vessel's heat capacity in J/(m3 K).
        holds = "pressure": y = (n_1 ... n_n [mol], T [K]), the vessel's heat capacity in J/K.
        outside : what ``Vessel`` says of a ramp or a jacket.
        """
        y = self._typed(np.asarray(y))
        return self._change(self._thermal(y[-1]), y, Vessel(holds, heat, pressure, vessel_heat_capacity, **outside))

    def jacobian(self, y: Array, holds: str, heat: str, pressure: float | None = None,
                 vessel_heat_capacity: float = 0.0) -> Array:
        """d(dy/dt)/dy (n + 1, n + 1) by complex step; arguments as those of ``derivative``."""
        y, vessel = self._typed(np.asarray(y)), Vessel(holds, heat, pressure, vessel_heat_capacity)
        at, J = self._thermal(y[-1]), np.empty((self.n + 1, self.n + 1), dtype=y.dtype)
        for k in range(self.n + 1):
            h = y.dtype.type(1e-30) * max(abs(y[k]), y.dtype.type(1e-20))
            z = y + 1j * h * (np.arange(self.n + 1) == k)
            here = at if k < self.n else self._thermal(z[-1])
            J[:, k] = self._change(here, z, vessel)[0].imag / h
        return J
