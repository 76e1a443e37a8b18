"""What a start costs: modules that are not needed are not loaded, and kernels are compiled once."""

import os
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
                          text=True, check=True, timeout=600)
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
                          text=True, check=True, timeout=600)
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


# ---- kernels stand apart, and the first start compiles in two processes


def run_with(cache: Path, code: str, timeout: float = 600.0) -> subprocess.CompletedProcess:
    path = str(Path(bothways.__file__).parents[1])
    environment = {**os.environ, "NUMBA_CACHE_DIR": str(cache), "PYTHONPATH": path}
    return subprocess.run([sys.executable, "-c", code], env=environment, capture_output=True, text=True, timeout=timeout)


def test_the_shares_of_the_two_processes_are_disjoint_and_complete(monkeypatch):
    """Neither compiles what is the other's: they would write the same files. Together it is all that a run asks for."""
    from bothways import compiling

    shares = []
    for share in (compiling._own_share, lambda: compiling._other_share("Rosenbrock")):
        touched: list[str] = []
        with monkeypatch.context() as patch:
            watch(patch, touched)
            share()
        shares.append(set(touched) - {"_f", "_J"})  # what the method is tried on
    assert not shares[0] & shares[1]
    asked: list[str] = []
    with monkeypatch.context() as patch:
        watch(patch, asked)
        bothways.run(bothways.read_case("hydrogen-kettle"))
    assert set(asked) <= shares[0] | shares[1]
    assert {"jacobian", "judge", "advance", "produce", "columns", "f_of_bordered", "J_of_bordered"} <= shares[0] | shares[1]


def watch(patch, touched):
    """Notes the name of every kernel that is compiled for Python, called from there, or asked for its address."""
    from bothways import apart, compiled

    called, prepared = compiled.Kernel.__call__, compiled.Kernel.prepare
    patch.setattr(compiled.Kernel, "__call__", lambda self, *a: (touched.append(self.__name__), called(self, *a))[1])
    patch.setattr(compiled.Kernel, "prepare", lambda self, *a: (touched.append(self.__name__), prepared(self, *a))[1])
    address = compiled.callback.address.fget
    patch.setattr(compiled.callback, "address",
                  property(lambda self: (touched.append(self._function.__name__), address(self))[1]))
    filled = apart.Apart.fill
    patch.setattr(apart.Apart, "fill", lambda self: (touched.append(self._function.__name__), filled(self))[1])


@pytest.mark.parametrize("executable", ["", "/nowhere/python3", "/bin/false", "fails"])
def test_without_the_other_process_all_is_compiled_here(executable, monkeypatch, tmp_path):
    from bothways import compiling

    if executable == "fails":
        (tmp_path / "python3").write_text("#!/bin/sh\nexit 3\n")
        (tmp_path / "python3").chmod(0o755)
        executable = str(tmp_path / "python3")
    monkeypatch.setattr(sys, "executable", executable)
    compiling.side_by_side("Rosenbrock")


def test_the_other_process_ends_when_this_one_is_interrupted(monkeypatch):
    from bothways import compiling

    others = []
    start = compiling._other_process

    def interrupted():
        raise KeyboardInterrupt

    monkeypatch.setattr(compiling, "_other_process", lambda method: others.append(start(method)) or others[-1])
    monkeypatch.setattr(compiling, "_cores", lambda: 2)
    monkeypatch.setattr(compiling, "_own_share", interrupted)
    with pytest.raises(KeyboardInterrupt):
        compiling.side_by_side("Rosenbrock")
    assert others[0] is not None and others[0].poll() is not None


def test_a_kernel_that_stands_apart_is_fetched_by_the_kernel_that_needs_it():
    """A process that got its arrays from elsewhere, without anybody having filled the cells."""
    code = ("import numpy as np, bothways, bothways.vessel as v\n"
            "v.fill = lambda: None\n"
            "e = bothways.read_case('hydrogen-kettle').equations()\n"
            "y = np.append(np.full(len(e.mechanism.species), 0.5), 1500.0)\n"
            "print(e.f(0.0, y).tobytes().hex(), e.J(0.0, y).tobytes().hex())")
    empty, filled = (subprocess.run([sys.executable, "-c", text], env={**os.environ, "PYTHONPATH": os.pathsep.join(sys.path)},
                                    capture_output=True, text=True, check=True, timeout=600).stdout
                     for text in (code, code.replace("v.fill = lambda: None", "")))
    assert empty == filled and len(filled) > 1000


@pytest.mark.slow
def test_two_processes_fill_a_cache_that_a_run_finds_complete(tmp_path):
    run = f"from bothways.cli import main; main(['run', 'hydrogen-kettle', '--output', {str(tmp_path / 'x.h5')!r}, '--replace'])"
    first = run_with(tmp_path / "cache", run)
    assert "compiling the numerical kernels" in first.stderr
    files = {path.relative_to(tmp_path): path.stat().st_mtime_ns for path in (tmp_path / "cache").rglob("*.nb?")}
    again = run_with(tmp_path / "cache", run)
    assert again.stderr == ""
    assert {path.relative_to(tmp_path): path.stat().st_mtime_ns for path in (tmp_path / "cache").rglob("*.nb?")} == files
