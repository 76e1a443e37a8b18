"""Figures of runs, for a page (180 mm) or a column (85 mm); needs no display.

One file a figure; the other modules are what they share.
"""

from .approach import approach, save_approach
from .contributions import contributions, save_contributions
from .equilibrium_course import equilibrium_course, save_equilibrium_course
from .saving import check_picture, save
from .timecourse import course, save_course

__all__ = ["approach", "check_picture", "contributions", "course", "equilibrium_course", "save", "save_approach",
           "save_contributions", "save_course", "save_equilibrium_course"]
