"""Whole runs: accuracy against a far tighter run, conservation, milestones, repeatability from the file."""

import warnings
from pathlib import Path

import numpy as np
import pytest

from bothways import (
    InputError,
    Remark,
    build_case,
    build_mechanism,
    bundled_cases,
    read_case,
    read_trajectory,
    run,
    write_trajectory,
)
from bothways.integrate import METHODS, OWN_METHODS
from bothways.mechanism.files import parse_toml
from bothways.recorder import repaired

FUELS = {"hydrogen-oxygen": ({"H2": 1}, "1000 K"), "methane": ({"CH4": 1}, "1500 K")}
CLOSURES = [(holds, heat) for holds in ("volume", "pressure") for heat in ("isothermal", "adiabatic")]


def ignition(mechanism, holds="volume", heat="adiabatic", **solver_and_output):
    fuel, temperature = FUELS[mechanism]
    also = solver_and_output.pop("also_at", [])
    return build_case({
        "case": {"mechanism": mechanism}, "vessel": {"holds": holds, "heat": heat},
        "start": {"temperature": temperature, "pressure": "2 atm", "fuel": fuel, "oxidiser": {"O2": 1, "N2": 3.76},
                  "equivalence_ratio": 1.0},
        "until": {"time": "3 ms"}, "solver": solver_and_output, "output": {"also_at": also}})


@pytest.mark.parametrize("method", OWN_METHODS)
@pytest.mark.parametrize("mechanism", FUELS)
def test_runs_agree_with_a_much_tighter_one(mechanism, method):
    """rtol 1e-8 against 1e-11: T and species above mole fraction 1e-6 to 1e-6, ignition time to 1e-6.

    Times from 0.98 to 1.02 of the ignition time are left out: there a relative shift of 1e-7 in time alone, in a
    front that lasts 1e-3 of it, moves species by 1e-4.
    """
    rough = run(ignition(mechanism, rtol=1e-8)).milestones["steepest temperature rise"]
    also = [rough * factor for factor in (0.2, 0.4, 1.1, 1.3, 2.0)]
    ours = run(ignition(mechanism, rtol=1e-8, also_at=also, method=method))
    tight = run(ignition(mechanism, rtol=1e-11, atol=1e-15, method="Radau", also_at=also))
    instant = tight.milestones["steepest temperature rise"]
    assert abs(ours.milestones["steepest temperature rise"] / instant - 1) < 1e-6
    for t in also:
        i, j = (int(np.flatnonzero(r.time == t)[0]) for r in (ours, tight))
        assert abs(ours.temperature[i] / tight.temperature[j] - 1) < 1e-6
        x, exact = ours.mole_fraction[i], tight.mole_fraction[j]
        assert np.all((np.abs(x - exact) < 1e-6 * exact)[exact > 1e-6]), t


@pytest.mark.parametrize("method", METHODS)
@pytest.mark.parametrize("holds, heat", CLOSURES)
def test_balances_of_every_closure(holds, heat, method):
    """Elements 1e-12 by the solver itself, energy 1e-10 on reported states, nothing negative, potential falls."""
    case = ignition("methane", holds, heat, method=method)
    result = run(case)
    assert result.complete and np.all(result.amount >= 0)
    assert np.max(np.abs(result.element_residual)) < 1e-12
    atoms = case.mechanism.element_matrix
    start = atoms @ case.charge.amount
    departure = np.abs(result.amount @ atoms.T - start)
    assert np.max(departure / np.where(start > 0, start, np.sum(start))) < 1e-12
    check_energy(case, result)
    scale = np.max(np.abs(result.potential))
    assert np.max(np.diff(result.potential)) < 1e-12 * scale
    assert result.entropy_produced[-1] > 0


def check_energy(case, result):
    from bothways.contents import Contents

    contents = Contents(case.mechanism)
    if case.heat == "isothermal":
        assert np.all(result.temperature == case.charge.temperature)
        return
    energies = [contents.energy(n, T, case.holds) for n, T in zip(result.amount, result.temperature, strict=True)]
    thermal = 8.314 * result.temperature * np.sum(result.amount, axis=1)
    assert np.max(np.abs(np.array(energies) - energies[0]) / thermal) < 1e-10


@pytest.mark.parametrize("holds, heat", CLOSURES)
def test_rest_is_reached_in_growing_steps(holds, heat):
    """A million seconds after an ignition of milliseconds: steps grow by twelve decades, and round-off refuses few."""
    case = ignition("methane", holds, heat, method="BDF")
    result = run(build_case({**case.document, "until": {"time": 1e6}}))
    steps, counts = np.diff(result.time), result.statistics
    assert np.max(steps) > 1e4 and np.min(steps[20:]) < 1e-8 and len(steps) < 2500
    assert counts["rejected"] < 0.03 * counts["steps"] and counts["rejected_by_second_law"] <= 5


@pytest.mark.parametrize("name", FUELS)
def test_ignition_times_of_the_default_tolerances(name):
    """BDF at rtol 1e-6 as it comes: within 1e-5 of Radau at 1e-10 (radicals grow from nothing: atol matters there)."""
    exact = run(ignition(name, rtol=1e-10, atol=1e-18, method="Radau")).milestones["steepest temperature rise"]
    assert abs(run(ignition(name, method="BDF")).milestones["steepest temperature rise"] / exact - 1) < 1e-5


def test_constant_volume_and_pressure_hold_what_they_say():
    volume, pressure = (run(ignition("hydrogen-oxygen", holds)) for holds in ("volume", "pressure"))
    assert np.ptp(volume.volume) == 0 and volume.pressure[-1] > 2 * volume.pressure[0]
    assert np.ptp(pressure.pressure) == 0 and pressure.volume[-1] > 2 * pressure.volume[0]
    total = pressure.amount.sum(axis=1)
    assert np.allclose(pressure.pressure * pressure.volume, total * 8.31446261815324 * pressure.temperature, rtol=1e-13)


def test_a_run_crosses_the_joins_of_the_fits():
    """C1-C4 as published has joins that do not meet; closed, a run from 900 K passes 1000 K with its energy kept."""
    case = read_case("ethylene-cracker")
    assert case.charge.temperature == 900.0 and case.mechanism.join_shifts
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result = run(case)
    assert result.complete and result.temperature[-1] > 2500
    assert np.max(np.abs(result.element_residual)) < 1e-12
    check_energy(case, result)


@pytest.mark.parametrize("name", [n for n in bundled_cases() if n != "heptane-bench"])
def test_bundled_cases_run(name):
    """With either of the own methods, to verdicts of the same kind and the same times within 2e-4."""
    case, ends, times = read_case(name), [], []
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        for method in OWN_METHODS:
            result = run(build_case({**case.document, "solver": {"method": method}}, mechanism=case.mechanism))
            assert result.complete and np.max(np.abs(result.element_residual)) < 1e-12
            ends.append(result.extra["verdict"].partition(":")[0])
            times.append([t for n, t in result.milestones.items() if n.startswith(("half", "steepest"))])
    assert ends[0] == ends[1] and np.allclose(times[0], times[1], rtol=2e-4)
    assert "invented" in read_case(name).document["case"]["title"]


def test_also_at_times_are_reported_and_do_not_change_the_rest():
    plain, with_times = run(ignition("hydrogen-oxygen")), run(ignition("hydrogen-oxygen", also_at=["0.1 ms", 1e-3]))
    assert {1e-4, 1e-3} <= set(with_times.time) and not {1e-4, 1e-3} & set(plain.time)
    assert np.allclose(plain.mole_fraction[-1], with_times.mole_fraction[-1], rtol=1e-5, atol=1e-10)


def test_the_file_alone_repeats_the_run(tmp_path):
    first = run(ignition("hydrogen-oxygen"))
    write_trajectory(tmp_path / "run.h5", first)
    stored = read_trajectory(tmp_path / "run.h5")
    mechanism = build_mechanism(parse_toml(stored.mechanism_text))
    again = run(build_case(parse_toml(stored.case_text), mechanism=mechanism))
    assert np.array_equal(again.time, stored.time) and np.array_equal(again.amount, stored.amount)


def test_thermal_inertia_shares_the_heat():
    """φ = 2 at the start halves the rise at first; the conserved energy includes the vessel's."""
    case = ignition("hydrogen-oxygen")
    heavy = build_case({**case.document, "vessel": {"heat": "adiabatic", "holds": "volume", "thermal_inertia": 3.0}})
    light, slow = run(case), run(heavy)
    assert 1.5 < np.ptp(light.temperature) / np.ptp(slow.temperature) < 3.5
    with pytest.raises(InputError, match="thermal_inertia"):
        build_case({**case.document, "vessel": {"heat": "isothermal", "thermal_inertia": 2.0}})


def test_milestones_are_where_they_should_be():
    result = run(ignition("hydrogen-oxygen", rtol=1e-9))
    slope = np.diff(result.temperature) / np.diff(result.time)
    k = int(np.argmax(slope))
    assert result.time[k - 1] <= result.milestones["steepest temperature rise"] <= result.time[k + 2]
    h2 = result.of("H2")
    half = np.interp(-0.5 * h2[0], -h2, result.time)
    assert abs(result.milestones["half-conversion of H2"] / half - 1) < 1e-3
    peak = result.milestones["peak of HO2"]
    near = int(np.argmax(result.of("HO2")))
    assert result.time[near - 1] <= peak <= result.time[near + 1]
    assert result.milestones["peak mole fraction of HO2"] >= np.max(result.mole_fraction[:, result.species.index("HO2")]) * 0.999


def test_repaired_amounts_keep_elements_and_sign():
    atoms = np.array([[2.0, 0.0, 2.0, 1.0], [0.0, 2.0, 1.0, 1.0]])
    true = np.array([1.0, 0.5, 1e-3, 1e-9])
    raw = true + np.array([0.0, 0.0, 0.0, -3e-9])
    mended = repaired(np.array([raw, true]), atoms, raw)
    assert np.all(mended >= 0) and np.allclose(atoms @ mended[0], atoms @ raw, rtol=1e-15)
    assert np.max(np.abs(mended[0] - np.maximum(raw, 0))) < 1e-8
    assert np.array_equal(mended[1], true)


def test_remarks_name_species_outside_their_data():
    with pytest.warns(Remark, match="outside the range of the thermochemical data of"):
        run(read_case("ethylene-cracker"))


@pytest.mark.skipif(not Path("/proc/self/status").exists(), reason="the kernel tells the peak there")
def test_peak_memory_of_the_largest_set(tmp_path):
    """A whole n-alkane run stays under 600 MB (resident peak of its own process)."""
    import subprocess
    import sys

    code = ("import warnings; warnings.simplefilter('ignore'); from bothways import run, read_case, build_case;"
            "c = read_case('heptane-bench'); d = {**c.document, 'until': {'time': 1e-6}}; r = run(build_case(d));"
            "print(r.complete, [line for line in open('/proc/self/status') if line.startswith('VmHWM')][0].split()[1])")
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=tmp_path)
    complete, kilobytes = done.stdout.split()
    assert complete == "True" and int(kilobytes) < 600_000
