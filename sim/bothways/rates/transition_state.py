"""Conventional transition-state theory: k = κ (k_B T/h) (q‡/Πq) e^(-E0/RT), all q per volume.

H. Eyring, J. Chem. Phys. 3 (1935) 107, doi:10.1063/1.1749604; M.G. Evans, M. Polanyi, Trans. Faraday Soc. 31 (1935) 875,
doi:10.1039/TF9353100875. With E = (p°/RT) e^(-g/RT) of reactants and of the complex, which has the same elements, that is
k = κ (k_B T/h) E‡/ΠE; divided by K it is the same expression for the products. Tunnelling: none; Wigner's
κ = 1 + (h c ν‡/k_B T)²/24 (E. Wigner, Z. phys. Chem. B 19 (1932) 203), good while κ is near 1; or Eckart's (eckart.py). No
recrossing, no variation of the dividing surface; symmetry numbers and optical isomers count the equivalent ways.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

from ..constants import BOLTZMANN, GAS_CONSTANT, PLANCK
from ..entry import Entry
from ..thermo import Functions, Modes, Potential, Substance
from ..thermo.rotor import KELVIN_PER_WAVENUMBER
from ..thermo.statistical import StatisticalMechanics
from ..thermo.statistical_reader import read_energy, read_molecule
from ..thermo.structureless import check_gas
from .eckart import thresholds
from .law import IN_EQUATION, Complex, Expression, Fault, Law, LawContext
from .participants import check_orders, energy_at_zero, functions_of, lowest_data, molecules

NAME = "transition state"
PARTNER = IN_EQUATION
TUNNELLING = ("none", "Wigner", "Eckart")
LARGEST_LOG = 460.0
"""ln k above this [m3, mol, s] is taken for a slip."""
_LARGEST_IMAGINARY = 5000.0


@dataclass(frozen=True)
class TransitionState(Law):
    """complex : its energy is that of the top [J/mol]; imaginary [cm⁻¹].

    reactants : potential and standard pressure [Pa] of each molecule. sides : Σ h(0 K) of reactants and of products [J/mol].
    """

    complex: StatisticalMechanics
    imaginary: float
    tunnelling: str
    reactants: tuple[tuple[Potential, float], ...]
    sides: tuple[float, float]
    joins: str

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k at a temperature [K]."""
        return math.exp(self.log_k(temperature))

    def log_k(self, temperature: float) -> float:
        """ln k, k in (m3/mol)^(order-1)/s."""
        ratio = _log_scale(self._functions, self.complex.standard_pressure, temperature)
        ratio -= sum(_log_scale(functions, p, temperature) for functions, p in self._reactants)
        wigner = (self._quantum / temperature) ** 2 / 24 if self.tunnelling == "Wigner" else 0.0
        return math.log(BOLTZMANN * temperature / PLANCK) + ratio + math.log1p(wigner)

    @property
    def _quantum(self) -> float:
        return KELVIN_PER_WAVENUMBER * self.imaginary

    @cached_property
    def _functions(self) -> Functions:
        """Of the complex; Eckart's thresholds count from the higher side, as one more sum over levels."""
        if self.tunnelling != "Eckart":
            return Functions(self.complex.ranges(), self.complex.modes())
        V1, V2 = ((self.complex.energy - side) / GAS_CONSTANT for side in self.sides)
        own = self.complex.modes()
        modes = Modes(own.oscillators, (*own.ladders, thresholds(V1, V2, self._quantum)))
        return Functions(replace(self.complex, energy=max(self.sides)).ranges(), modes)

    @cached_property
    def _reactants(self) -> list[tuple[Functions, float]]:
        return [(functions_of(potential, self.joins), p) for potential, p in self.reactants]

    def expressions(self) -> tuple[Expression, ...]:
        """A neutral one, which holds the term's place: the complex says it all."""
        return (Expression(0.0, 0.0, 0.0, 1.0),)

    def part(self) -> Complex:
        """The complex as the thermal tables take it."""
        wigner = self._quantum if self.tunnelling == "Wigner" else 0.0
        return Complex(self._functions.ranges, self._functions.modes, self.complex.standard_pressure, wigner)

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Overflow, at either end of the range."""
        for temperature in (temperatures[0], temperatures[-1]):
            if not self.log_k(temperature) < LARGEST_LOG:
                return Fault("k overflows", temperature, "a rate constant below 1e+200")
        return None


def _log_scale(functions: Functions, standard_pressure: float, temperature: float) -> float:
    """ln of (p°/RT) e^(-g/RT) [mol/m3]."""
    _, h, s = functions.cp_h_s(temperature)
    return math.log(standard_pressure / (GAS_CONSTANT * temperature)) - h + s


def read(entry: Entry, context: LawContext) -> TransitionState:
    """The law from its table; errors: M, what no complex can have, energies missing or not comparable at 0 K."""
    if context.partner_in_equation:
        raise entry.error("M takes part", key="law", expected="named reactants, whose complex is stated",
                          remedy="leave M out, or take another law")
    check_orders(entry, context.order, context.reactants)
    tunnelling = entry.text("tunnelling", "none", choices=TUNNELLING)
    inner, substance = entry.table("complex"), _substance(context)
    check_gas(entry, substance.standard_pressure, key="law")
    molecule = read_molecule(inner, substance, imaginary=1)
    imaginary = _imaginary(inner)
    energy = _energy(entry, inner, context, substance, molecule)
    inner.done()
    sides = energy_at_zero(context.reactants), energy_at_zero(context.products)
    if tunnelling == "Eckart" and not energy > max(sides):
        raise entry.error(f"the top lies {energy - max(sides):.6g} J/mol above the higher side", key="tunnelling",
                          expected="a barrier seen from either side", remedy="raise E0, or take none or Wigner")
    reactants = tuple((s.potential, s.standard_pressure) for s in molecules(context.reactants))
    return TransitionState(replace(molecule, energy=energy), imaginary, tunnelling, reactants, sides,
                           context.setting.joins)


def _substance(context: LawContext) -> Substance:
    """What the complex is made of: all reactants."""
    composition: dict[str, int] = {}
    for s in molecules(context.reactants):
        for symbol, count in s.composition.items():
            composition[symbol] = composition.get(symbol, 0) + count
    mass, charge = (sum(values) for values in zip(*((s.molar_mass, s.charge) for s in molecules(context.reactants)), strict=True))
    return Substance(composition, int(charge), mass, context.setting.standard_pressure, context.setting.atomic_numbers)


def _imaginary(inner: Entry) -> float:
    value = inner.number("imaginary")
    if not 0 < value <= _LARGEST_IMAGINARY:
        raise inner.error(f"{value:g} is not the one imaginary wavenumber of a transition state", key="imaginary",
                          expected=f"its size, a number above 0 and up to {_LARGEST_IMAGINARY:g} cm⁻¹",
                          remedy="state it without sign and without i")
    return float(value)


def _energy(entry: Entry, inner: Entry, context: LawContext, substance: Substance, molecule: StatisticalMechanics) -> float:
    """The enthalpy at 0 K of the top [J/mol]."""
    own = "H0" in inner.data or "H298" in inner.data
    if own == ("E0" in entry.data):
        raise entry.error("E0 and the complex's own enthalpy are " + ("both stated" if own else "both missing"), key="E0",
                          expected="one of E0 (above the reactants, at 0 K) and H0 or H298 of the complex")
    if own:
        return read_energy(inner, substance, molecule)
    name, start = lowest_data(context.reactants)
    if start > 0:
        raise entry.error(f"E0 counts from the reactants at 0 K, and the data of {name} begin at {start:g} K", key="E0",
                          expected="reactants whose data reach 0 K", remedy="state H298 or H0 of the complex instead")
    return energy_at_zero(context.reactants) + entry.quantity("E0", "molar energy")
