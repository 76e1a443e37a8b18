"""The equations f and J in the hands of other people's solvers, against the program's own run.

CVODE of SUNDIALS (A.C. Hindmarsh et al., ACM Trans. Math. Softw. 31 (2005) 363) through scikit-sundae, and LSODA
(L.R. Petzold, SIAM J. Sci. Stat. Comput. 4 (1983) 136) through scipy. Neither shares code with the program.
"""

from collections.abc import Callable

import numpy as np
import pytest
from scipy.integrate import solve_ivp
from sksundae.cvode import CVODE

from bothways import Case, Equations, build_case

from .small import bundled, course

RTOL, ATOL = 1e-10, 1e-20
"""Chain branching multiplies the first radicals a billionfold: they count from a mole fraction of 1e-20."""
ALLOWED = 1e-8
"""100 rtol, of the contents or as a lag in time: multistep codes lose a factor of 10 to 100 in an induction period."""

VESSELS = {  # vessel, start, times [s]: across an ignition at 0.5037 ms; radicals growing at constant pressure
    "ignition": ({"heat": "adiabatic", "holds": "volume"},
                 {"temperature": 1000.0, "pressure": "2 atm", "mole_ratio": {"H2": 2.0, "O2": 1.0, "N2": 3.76}},
                 [2e-4, 4.5e-4, 5.02e-4, 5.04e-4, 5.1e-4, 1e-3]),
    "isothermal": ({"heat": "isothermal", "holds": "pressure"},
                   {"temperature": 1500.0, "pressure": "1 atm", "mole_ratio": {"H2": 1.0, "O2": 1.0, "AR": 18.0}},
                   [2e-5, 5e-5, 1e-4, 1e-3])}


def _case(name: str) -> Case:
    vessel, start, times = VESSELS[name]
    return build_case({"vessel": vessel, "start": start, "until": {"time": times[-1]}},
                      mechanism=bundled("hydrogen-oxygen").mechanism)


def _start(case: Case) -> np.ndarray:
    """The plain state: concentrations at constant volume, amounts at constant pressure, and T."""
    part = case.charge.concentration if case.holds == "volume" else case.charge.amount
    return np.append(part, case.charge.temperature)


def _scale(start: np.ndarray) -> np.ndarray:
    """Size of the contents: the total of species and the temperature."""
    return np.append(np.full(start.size - 1, start[:-1].sum()), start[-1])


@pytest.fixture(scope="module", params=VESSELS)
def ours(request) -> tuple[Case, list[float], np.ndarray]:
    """A case, its times and the program's own states there, in the plain form."""
    vessel, start, times = VESSELS[request.param]
    run, at = course(bundled("hydrogen-oxygen").mechanism, vessel, start, times, "BDF", rtol=RTOL, atol=ATOL)
    part = run.amount[at] / (run.volume[at][:, None] if vessel["holds"] == "volume" else 1.0)
    return _case(request.param), times, np.column_stack([part, run.temperature[at]])


def with_cvode(equations: Equations, start: np.ndarray, times: list[float]) -> np.ndarray:
    """States at the times by CVODE with our J."""
    def rates(t, y, yp):
        yp[:] = equations.f(t, y)

    def jacobian(t, y, yp, J):
        J[:] = equations.J(t, y)

    solver = CVODE(rates, jacfn=jacobian, rtol=RTOL, atol=ATOL * _scale(start), max_num_steps=100000)
    solution = solver.solve(np.array([0.0, *times]), start)
    assert solution.success, solution.message
    return solution.y[1:]


def with_cvode_alone(equations: Equations, start: np.ndarray, times: list[float]) -> np.ndarray:
    """The same with CVODE's difference quotients in the place of J."""
    def rates(t, y, yp):
        yp[:] = equations.f(t, y)

    solver = CVODE(rates, rtol=RTOL, atol=ATOL * _scale(start), max_num_steps=100000)
    solution = solver.solve(np.array([0.0, *times]), start)
    assert solution.success, solution.message
    return solution.y[1:]


def with_lsoda(equations: Equations, start: np.ndarray, times: list[float]) -> np.ndarray:
    """States at the times by LSODA with our J."""
    solution = solve_ivp(equations.f, (0.0, times[-1]), start, method="LSODA", jac=equations.J, t_eval=times, rtol=RTOL,
                         atol=ATOL * _scale(start))
    assert solution.success, solution.message
    return solution.y.T


@pytest.mark.parametrize("solve", [with_cvode, with_cvode_alone, with_lsoda], ids=lambda solve: solve.__name__)
def test_another_solver_comes_to_the_same_states(solve: Callable, ours):
    """|Δy| against the size of the contents plus what happens in the elapsed time, t |dy/dt|."""
    case, times, states = ours
    equations, start = case.equations(), _start(case)
    theirs = solve(equations, start, times)
    happening = np.array([t * np.abs(equations.f(t, y)) for t, y in zip(times, states, strict=True)])
    departure = np.abs(theirs - states) / (_scale(start) + happening)
    assert departure.max() < ALLOWED
    assert np.max(np.abs(states[-1] - start) / _scale(start)) > 1e-2  # there was something to integrate


@pytest.mark.parametrize("name", VESSELS)
def test_f_and_J_are_plain_functions(name):
    """No memory, no time, arguments untouched, results not overwritten by the next call; lists and frozen arrays do."""
    equations = _case(name).equations()
    y = _start(_case(name))
    y[:-1] += 1e-3 * y[:-1].sum()
    warmer, frozen = y * 1.1, y.copy()
    frozen.setflags(write=False)
    for function in (equations.f, equations.J):
        first = function(0.0, y)
        kept = first.copy()
        assert not np.array_equal(function(0.0, warmer), kept)
        for again in (y, frozen, y.tolist()):
            assert np.array_equal(function(7.0, again), kept)
        assert np.array_equal(first, kept) and np.array_equal(y, frozen)
