"""What is wrong with a mechanism: findings, the worst first, before it misleads.

`findings/` has one file for each kind; `survey.py` works out the numbers they look at.
"""

from .audit import Audit, audit
from .finding import ERROR, NOTICE, WARNING, Finding
from .findings import CHECKS
from .repair import Change, repaired, repaired_text
from .report import as_json, check_rows_file, summary, write_rows

__all__ = ["CHECKS", "ERROR", "NOTICE", "WARNING", "Audit", "Change", "Finding", "as_json", "audit", "check_rows_file",
           "repaired", "repaired_text", "summary", "write_rows"]
