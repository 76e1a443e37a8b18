"""Figures of runs, for a page (180 mm) or a column (85 mm); needs no display.

One file a figure; `style`, `views`, `labels`, `selection`, `words` and `saving` are what they share.
"""

from .approach import approach, save_approach
from .saving import check_picture, save
from .timecourse import course, save_course

__all__ = ["approach", "check_picture", "course", "save", "save_approach", "save_course"]
