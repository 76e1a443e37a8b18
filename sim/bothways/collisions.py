"""What the reverse of a reaction would be as a hard-sphere collision: the P·d² that detailed balance implies."""

import numpy as np

from .constants import GAS_CONSTANT as R
from .contents import Contents
from .errors import InputError
from .mechanism import Mechanism, Reaction
from .rates.collision import per_area, reduced_mass
from .rates.participants import energy_at_zero


def implied_reverse_area(mechanism: Mechanism, reaction: int, temperature: float) -> float:
    """P·d² [m2] that the derived reverse rate constant of a reaction (by its place) implies at a temperature [K].

    The reverse constant is divided by N_A π √(8 k_B T/(π μ)) e^(-E/RT) of the products (½ of that for like ones). E is the
    forward law's threshold less ΔE0, the products' energy above the reactants' at 0 K. Of A T^n e^(-Ea/RT) the threshold at T
    is Ea + (n - ½) R T, which is E0 for a hard-sphere collision. Of structureless particles the result is the forward P·d²
    times μ_AB/μ_CD, at any temperature; where it changes much with temperature or exceeds the size of molecules, the forward
    law asks for a second look.
    Raises InputError where the products are not two molecules, a partner takes part, or the law is not one exponential.
    """
    this, contents = mechanism.reactions[reaction], Contents(mechanism)
    pair = [mechanism.species[mechanism.index(name)] for name, count in this.equation.products for _ in range(count)]
    if len(pair) != 2 or this.equation.partner:
        raise InputError(f"'{this.equation}' has one molecule, or three and more, as products, or a partner",
                         expected="two products, which collide in the reverse")
    energy = _threshold(this, temperature) - _rise(mechanism, this)
    per = per_area(reduced_mass(pair), pair[0].name == pair[1].name) * np.sqrt(temperature)
    reverse = contents.reverse_constants(temperature)[reaction]
    return float(reverse / per * np.exp(energy / (R * temperature)))


def _threshold(reaction: Reaction, temperature: float) -> float:
    """Ea + (n - ½) R T [J/mol] of a law of one exponential."""
    law = reaction.terms[0].law
    if len(reaction.terms) > 1 or law.part() is not None:
        raise InputError(f"the law of '{reaction.equation}' is not one exponential",
                         expected="a single term: hard-sphere collision, Arrhenius or Eyring")
    only = law.expressions()[0]
    return R * (only.theta + (only.n - 0.5) * temperature)


def _rise(mechanism: Mechanism, reaction: Reaction) -> float:
    """ΔE0 [J/mol]."""
    sides = ([(mechanism.species[mechanism.index(name)], count) for name, count in side]
             for side in (reaction.equation.reactants, reaction.equation.products))
    reactants, products = map(energy_at_zero, sides)
    return products - reactants
