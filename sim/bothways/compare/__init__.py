"""Reduced mechanisms held against their parent: in what they depart from it, how far, and what they gain."""

from .comparison import Comparison, Condition, Judged, Outcome, compare_cases, digest
from .conditions import cases_of, compare
from .correspondence import read_mapping
from .limits import Limit, read_limits
from .measures import MEASURES, Measure

__all__ = ["MEASURES", "Comparison", "Condition", "Judged", "Limit", "Measure", "Outcome", "cases_of", "compare",
           "compare_cases", "digest", "read_limits", "read_mapping"]
