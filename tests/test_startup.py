"""What a start costs: modules that are not needed are not loaded, and kernels are compiled once."""

import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

import bothways
from bothways.roots import zero

HEAVY = ("matplotlib", "numba", "scipy.optimize", "scipy.sparse", "scipy.stats", "h5py", "tqdm", "numpy")


def loaded_by(code: str, *watched: str) -> set[str]:
    """Which of the watched modules a new process has loaded after these lines."""
    asked = f"import contextlib, io, sys\nwith contextlib.redirect_stdout(io.StringIO()):\n    {code}\n" \
        f"print(*(name for name in {watched!r} if name in sys.modules))"
    path = str(Path(bothways.__file__).parents[1])
    done = subprocess.run([sys.executable, "-c", f"import sys; sys.path.insert(0, {path!r})\n{asked}"], capture_output=True,
                          text=True, check=True, timeout=120)
    return set(done.stdout.split())


@pytest.mark.parametrize("code", ["import bothways", "import bothways.cli",
                                  "from bothways.cli import main; main([])",
                                  "from bothways import InputError; import bothways; dir(bothways)"])
def test_what_needs_little_loads_little(code):
    assert loaded_by(code, "matplotlib", "h5py", "scipy.optimize") == set()


@pytest.mark.parametrize("option", ["--help", "--version"])
def test_help_and_version_load_nothing(option):
    code = f"import bothways.cli as c\n    try: c.main(['{option}'])\n    except SystemExit: pass"
    assert loaded_by(code, *HEAVY) == set()


def test_a_run_loads_no_more_than_it_uses(tmp_path):
    code = f"import bothways.cli as c; c.main(['run', 'hydrogen-kettle', '--output', {str(tmp_path / 'x.h5')!r}])"
    found = loaded_by(code, *HEAVY, "bothways.sweep", "bothways.audit", "bothways.compare", "bothways.reduce", "bothways.grid")
    assert found == {"numba", "h5py", "numpy"}


def test_functions_named_as_their_parts_stay_functions():
    code = "import bothways as b, bothways.batch, bothways.reduce; print(*(callable(f) for f in (b.equilibrium, b.compare, " \
        "b.audit, b.sweep, b.reduce)), file=sys.stderr)"
    path = str(Path(bothways.__file__).parents[1])
    done = subprocess.run([sys.executable, "-c", f"import sys; sys.path.insert(0, {path!r})\n{code}"], capture_output=True,
                          text=True, check=True, timeout=120)
    assert done.stderr.split() == ["True"] * 5


def test_names_that_are_not_there():
    with pytest.raises(AttributeError, match="no attribute 'equilibria'"):
        _ = bothways.equilibria
    assert {*bothways.__all__, "plots", "__version__"} <= set(dir(bothways))


@pytest.mark.parametrize("f, exact, near", [
    (lambda x: x**3 - 2.0, 2.0 ** (1 / 3), 0.0), (lambda x: np.cos(x) - x, 0.7390851332151607, 0.0),
    (lambda x: 1e-200 * (x - 0.3), 0.3, 0.0), (lambda x: np.sign(x - 0.77), 0.77, 0.0),
    (lambda x: (x - 0.2) ** 9, 0.2, 1e-9), (lambda x: np.exp(40 * x) - np.exp(20.0), 0.5, 0.0), (lambda x: x, 0.0, 0.0),
    (lambda x: 2.0 - x, 2.0, 0.0)])
def test_zeros(f, exact, near):
    """cos x = x: 0.7390851332151606… (Dottie's number); the others are exact by construction."""
    calls = []

    def counted(x):
        calls.append(x)
        return float(f(x))

    found = zero(counted, 0.0, 2.0, near)
    assert abs(found - exact) <= max(near, 4e-16 * max(exact, 1.0)) * 1.01 and len(calls) < 110
    assert abs(zero(f, 2.0, 0.0, near) - exact) <= max(near, 4e-16 * max(exact, 1.0)) * 1.01


def test_no_zero():
    assert zero(lambda x: x + 1.0, 0.0, 1.0) is None and zero(lambda x: np.nan, 0.0, 1.0) is None
