"""The rule in plain NumPy, against the independent statement and against the kernels' rates."""

import numpy as np

from bothways import Equations, build_mechanism
from bothways.balance import affinities, log_concentration_constants
from bothways.constants import GAS_CONSTANT
from bothways.contents import Contents
from invented import building_blocks
from reference import Reference


def test_constants_agree_with_the_reference():
    document = building_blocks()
    contents, reference = Contents(build_mechanism(document)), Reference(document, np.longdouble)
    for T in (350.0, 900.0, 2400.0):
        ours = log_concentration_constants(contents.mechanism.stoichiometry, contents.molar(T)[0], 1e5 / (GAS_CONSTANT * T))
        assert np.allclose(ours, np.log(reference.K_c(np.longdouble(T))).astype(float), rtol=0, atol=1e-11)


def test_reverse_constants_are_what_the_kernels_use():
    """Reverse rate over the product of the products' concentrations, one step at a time."""
    mechanism = build_mechanism(building_blocks())
    T, c = 1100.0, np.linspace(0.5, 2.0, len(mechanism.species))
    _, reverse = Equations(mechanism, "volume", "isothermal").reaction_rates(np.append(c, T))
    derived = Contents(mechanism).reverse_constants(T)
    for j, reaction in enumerate(mechanism.reactions):
        if all(term.partner is None for term in reaction.terms):
            product = np.prod([c[mechanism.index(name)] ** count for name, count in reaction.equation.products])
            assert abs(reverse[j] / (derived[j] * product) - 1) < 1e-12
    assert np.allclose(np.log(Contents(mechanism).equilibrium_constants(T)),
                       -(mechanism.stoichiometry.T @ Contents(mechanism).molar(T)[0]))


def test_affinities_know_what_is_absent():
    nu = np.array([[-1.0, 1.0], [1.0, -1.0], [0.0, 1.0]])
    assert np.allclose(affinities(nu, np.array([3.0, 1.0, 0.5])), [2.0, -2.5])
    assert np.array_equal(affinities(nu, np.array([-np.inf, 1.0, 0.5])), [-np.inf, np.inf])
    assert np.array_equal(affinities(nu, np.array([3.0, -np.inf, -np.inf])), [np.inf, np.nan], equal_nan=True)
