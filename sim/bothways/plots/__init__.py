"""Figures of runs, for a page (180 mm) or a column (85 mm); needs no display.

One file a figure; the other modules are what they share.
"""

from .approach import approach, save_approach
from .audit_figure import audit_figure, save_audit_figure
from .contributions import contributions, save_contributions
from .delays import parity
from .equilibrium_course import equilibrium_course, save_equilibrium_course
from .error_map import error_map
from .ignition import ignition, save_ignition
from .saving import check_picture, save
from .timecourse import course, save_course
from .worst_courses import worst_courses

__all__ = ["approach", "audit_figure", "check_picture", "contributions", "course", "equilibrium_course", "error_map",
           "ignition", "parity", "save", "save_approach", "save_audit_figure", "save_contributions", "save_course",
           "save_equilibrium_course", "save_ignition", "worst_courses"]
