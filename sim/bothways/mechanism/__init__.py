"""What a mechanism is, how a file or a dict becomes one, and the tables made of it for the kernels."""

from .files import bundled_cases, bundled_mechanisms, read_mechanism, write_mechanism
from .model import Mechanism, Partner, Reaction, Species, Term
from .reader import build
from .tables import Tables, build_tables, table_view

__all__ = ["Mechanism", "Partner", "Reaction", "Species", "Tables", "Term", "build", "build_tables", "bundled_cases",
           "bundled_mechanisms", "read_mechanism",
           "table_view",
           "write_mechanism"]
