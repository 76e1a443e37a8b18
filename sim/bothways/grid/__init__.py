"""A grid: a base case and what varies, a product of factors, each a list of settings. Read from TOML, checked whole."""

from .model import Factor, Grid, unpacked
from .reader import build_grid, bundled_grids, read_grid

__all__ = ["Factor", "Grid", "build_grid", "bundled_grids", "read_grid", "unpacked"]
