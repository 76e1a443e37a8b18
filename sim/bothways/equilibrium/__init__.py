"""Where a closed vessel must end: Gibbs minimisation by element potentials. Knows nothing of rates.

The potentials of the conserved combinations are found by Newton's method on the dual problem, in the basis of the
most abundant species (`newton`), from a start that linear programming gives (`vertex`), led by continuation where
that fails (`continuation`); species that the charge cannot turn into are found exactly (`possible`).
"""

from .conserved import combination_text, conserved_by_elements, conserved_by_reactions, conserves_more, extra_conserved
from .minimiser import GibbsMinimiser, equilibria, equilibrium
from .result import Equilibrium

__all__ = ["Equilibrium", "GibbsMinimiser", "combination_text", "conserved_by_elements", "conserved_by_reactions",
           "conserves_more", "equilibria", "equilibrium", "extra_conserved"]
