"""The summary of a run as text: vessel, charge, milestones, end, balances, cautions."""

from collections.abc import Iterable

import numpy as np

from .case import Case, charged
from .endpoint import Kind, Verdict
from .mechanism.phase import FRACTION, LITRE, PER_LITRE, SOLUTION
from .safety import TMR
from .trajectory import Trajectory

NOTABLE_RISE = {"temperature": 50.0, "pressure": 1.2}
"""A temperature rise above this [K] or a pressure ratio above this [-] calls for the caution (our own thresholds)."""
CAUTION = ("a model is not a safety case: a rise of temperature or pressure like this can hurt people. Measure it "
           "(calorimetry), follow the local codes, and have a licensed or otherwise competent person judge it.")
NOTABLE_PEAK = 1.0
"""A temperature this far above those of start and end [K] is told."""
_SHOWN = 8
ACTIVITIES = {PER_LITRE: "activities are concentrations over 1 mol/L", FRACTION: "activities are mole fractions"}
"""What stands for the activities of a solution, by its standard state."""


def summary(case: Case, run: Trajectory, verdict: Verdict, title: str = "") -> str:
    """The summary of a run, a line a fact, about 80 columns wide."""
    sections = [("mechanism", wrapped(_mechanism(case))), ("vessel", wrapped(_vessel(case))), ("charge", [_charge(case)]),
                ("milestones", _milestones(run)),
                ("safety", _safety(case, run)), ("end", _end(run)), ("equilibrium", _equilibrium(verdict)),
                ("balances", [_balances(run)]), ("second law", wrapped(_second_law(case, run))),
                ("solver", [_solver(run)])]
    lines = [title] if title else []
    for name, content in sections:
        if name == "safety" and not content:
            continue
        lines += _section(name, content or ["none: nothing steep, half-converted or peaking by the end"])
    if notable(run) or case.runaway_from:
        lines += _section("caution", wrapped(CAUTION))
    return "\n".join(lines)


def _section(name: str, content: Iterable[str]) -> list[str]:
    return [f"{name if k == 0 else '':<12}{line}" for k, line in enumerate(content)]


def wrapped(text: str, width: int = 68) -> list[str]:
    lines = [""]
    for word in text.split():
        if len(lines[-1]) + len(word) + 1 > width:
            lines.append("")
        lines[-1] += (" " if lines[-1] else "") + word
    return lines


def notable(run: Trajectory) -> bool:
    """Whether temperature or pressure rises so far that a caution belongs beside it."""
    hotter = float(np.max(run.temperature) - run.temperature[0])
    pressed = float(np.max(run.pressure) / run.pressure[0])
    return hotter > NOTABLE_RISE["temperature"] or pressed > NOTABLE_RISE["pressure"]


def _mechanism(case: Case) -> str:
    m = case.mechanism
    state = f" ({ACTIVITIES[m.standard_state]})" if m.standard_state else ""
    return f"{m.name}: {len(m.species)} species, {counted(len(m.reactions), 'reaction')}, {m.phase}{state}"


def _vessel(case: Case) -> str:
    held = f"constant volume {volume_text(case.charge.volume)}"
    if case.holds == "pressure":
        held = f"constant pressure {pressure_text(case.charge.pressure)}, {volume_text(case.charge.volume)} at the start"
    inertia = f", thermal inertia {case.thermal_inertia:g}" if case.thermal_inertia != 1 else ""
    inert = f", inert heat capacity {case.inert_heat_capacity / 1e3:.5g} kJ/K" if case.inert_heat_capacity else ""
    return f"closed, {held}, {_heat(case)}{inertia}{inert}"


def _heat(case: Case) -> str:
    if case.schedule is None:
        return case.heat
    values, last = case.schedule.values, case.schedule.end
    course = f"{values[0]:.6g} K" if case.schedule.constant else (
        f"{values[0]:.6g} to {values[-1]:.6g} K within {time_text(last)}, {len(values)} points")
    return f"given temperature, {course}" if case.heat == "given temperature" else (
        f"jacket of {course}, UA {case.transfer:.4g} W/K")


def _charge(case: Case) -> str:
    shares, c = sorted(charged(case).items(), key=lambda item: -item[1]), case.charge
    more = f" and {len(shares) - _SHOWN} more" if len(shares) > _SHOWN else ""
    if case.mechanism.phase == SOLUTION:
        total = float(np.sum(c.concentration)) / LITRE
        parts = ", ".join(f"{name} {x * total:.4g}" for name, x in shares[:_SHOWN])
        return f"{c.temperature:.6g} K; in mol/L {parts}{more}"
    parts = ", ".join(f"{name} {100 * x:.4g} %" for name, x in shares[:_SHOWN])
    return f"{c.temperature:.6g} K, {pressure_text(c.pressure)}; by amount {parts}{more}"


def _milestones(run: Trajectory) -> list[str]:
    rows = [(name, t) for name, t in run.milestones.items() if not name.startswith(("peak", TMR.partition("{")[0]))]
    heights = {name.removeprefix("peak mole fraction of "): x for name, x in run.milestones.items()
               if name.startswith("peak mole fraction of ")}
    lines = [f"{name:<34}{time_text(t):>12}" for name, t in rows]
    for name, x in sorted(heights.items(), key=lambda item: -item[1])[:_SHOWN]:
        lines.append(f"{'peak of ' + name:<34}{time_text(run.milestones['peak of ' + name]):>12}   at mole fraction {x:.3g}")
    if len(heights) > _SHOWN:
        lines.append(f"and {len(heights) - _SHOWN} smaller peaks, in the file")
    return lines


def _safety(case: Case, run: Trajectory) -> list[str]:
    """Figures of process safety, where a rise is notable or they were asked for."""
    e = run.extra
    lines = []
    if notable(run) and "adiabatic_temperature_rise" in e:
        rise = float(e["adiabatic_temperature_rise"])
        lines.append(f"{'adiabatic temperature rise':<34}{rise:>10.5g} K    of the contents alone, "
                     f"to {rise + run.temperature[0]:.6g} K")
    if notable(run) and "cooling_failure_temperature" in e:
        worst = float(e["cooling_failure_temperature"])
        lines.append(f"{'if the jacket fails at the worst':<34}{worst:>10.6g} K    at equilibrium")
    for name, factor, unit in (("temperature", 1.0, "K/s"), ("pressure", 1e-5, "bar/s")):
        if notable(run) and f"largest_{name}_rate" in e:
            lines.append(f"{f'largest rate of {name} rise':<34}{float(e[f'largest_{name}_rate']) * factor:>10.4g} {unit:<5} "
                         f"at {time_text(float(e[f'largest_{name}_rate_time']))}")
    return lines + [_runaway(run, T) for T in case.runaway_from]


def _runaway(run: Trajectory, temperature: float) -> str:
    """A line on the time to maximum rate, adiabatic and without the vessel's heat capacity."""
    name = TMR.format(temperature)
    if name not in run.milestones:
        return f"{name:<34}{'it does not heat up' if run.complete else 'not worked out':>12}"
    return f"{name:<34}{time_text(run.milestones[name]):>12}   fresh and adiabatic, φ = 1"


def _end(run: Trajectory) -> list[str]:
    state = f"{time_text(float(run.time[-1]))}: {run.temperature[-1]:.6g} K{_at_pressure(float(run.pressure[-1]))}"
    if run.volume[-1] != run.volume[0]:
        state += f", {volume_text(float(run.volume[-1]))}"
    lines = [state if run.complete else f"{state} (incomplete: {run.reason})"]
    k = int(np.argmax(run.temperature))
    if run.temperature[k] > max(run.temperature[0], run.temperature[-1]) + NOTABLE_PEAK:
        lines.append(f"highest temperature {run.temperature[k]:.6g} K, near {time_text(float(run.time[k]))}")
    x, unit, what = run.mole_fraction[-1], 1.0, "mole fractions"
    if np.isnan(run.pressure[-1]):
        unit, what = float(np.sum(run.concentration[-1])) / LITRE, "concentrations in mol/L"
    shown = [f"{run.species[k]} {x[k] * unit:.4g}" for k in np.argsort(-x)[: _SHOWN + 4] if x[k] > 1e-12]
    return lines + wrapped(f"{what} " + ", ".join(shown))


def _equilibrium(verdict: Verdict) -> list[str]:
    """The verdict, and the species of the end beside those of the equilibrium."""
    own, full = verdict.target.own, verdict.target.full
    lines = wrapped(f"{verdict.kind.value}: {verdict.sentence}")
    if verdict.apart:
        lines.append(f"(the elements' equilibrium: {full.temperature:.6g} K{_at_pressure(full.pressure)})")
    lines.append(f"{'':<18}{'run':>12}{'equilibrium':>13}{'deviation':>11}")
    lines.append(f"{'temperature':<18}{own.temperature * (1 + verdict.temperature_deviation):>12.6g}{own.temperature:>13.6g}"
                 f"{verdict.temperature_deviation:>11.1e}")
    for row in verdict.table()[:_SHOWN]:
        lines.append(f"{row['species']:<18}{row['run']:>12.4g}{row['equilibrium']:>13.4g}{row['deviation']:>11.1e}")
    if verdict.kind is Kind.NOT_YET:
        lines += [f"A/RT {affinity:>10.3g}  {equation}" for equation, affinity in verdict.least_relaxed()]
    return lines


def _balances(run: Trajectory) -> str:
    text = f"elements within {np.max(np.abs(run.element_residual)):.1e}"
    if np.any(run.energy_residual):
        text += f", energy within {np.max(np.abs(run.energy_residual)):.1e} in the states of the solver"
    if run.statistics.get("surfaces_crossed") and float(run.statistics["largest_jump_of_energy"]) > 0:
        text += f", where fits do not meet it jumps by up to {float(run.statistics['largest_jump_of_energy']):.1e} RT"
    if "heat_received" in run.extra:
        text += f"; heat received {energy_text(float(run.extra['heat_received'][-1]))}"
    return text + f"; entropy produced {run.entropy_produced[-1]:.4g} J/K"


def _second_law(case: Case, run: Trajectory) -> str:
    """How the second law was kept: steps, those refused, the largest rise refused, and mendings of the totals."""
    s, unit = run.statistics, "RT" if case.heat == "isothermal" else "R"  # of a free energy, or of an entropy
    if "mendings" not in s:
        return (f"not watched by {s['method']}; {run.potential_name} rose by {s['largest_potential_rise']:.1e} "
                f"{run.potential_units} at most in a step")
    refused, amounts = int(s["rejected_by_second_law"]), run.concentration[0] if case.holds == "volume" else run.amount[0]
    largest = float(s["largest_rise_refused"]) / float(np.sum(amounts))
    rise = f", the largest rise {largest:.1e} {unit} per mole" if refused else ""
    kinds = {"backward_Euler_steps": "backward Euler", "graded_steps": "by reactions, as rates many decades apart ask for"}
    others = [f"{int(s[key])} {kind}" for key, kind in kinds.items() if s.get(key)]
    special = f" (of them {' and '.join(others)})" if others else ""
    return (f"kept at {counted(int(s['steps']), 'step')}{special}, {refused} more refused by it{rise}; totals mended "
            f"{counted(int(s['mendings']), 'time')}")


def _solver(run: Trajectory) -> str:
    s = run.statistics
    return f"{s['method']}, relative tolerance {s['rtol']:g}, {s['steps']} steps in {float(s['seconds']):.2g} s"


def counted(count: int, noun: str) -> str:
    """"1 reaction", "2 reactions"."""
    return f"{count} {noun}{'' if count == 1 else 's'}"


def time_text(seconds: float) -> str:
    """A time with a unit of fitting size."""
    for factor, unit in ((86400.0, "d"), (3600.0, "h"), (60.0, "min"), (1.0, "s"), (1e-3, "ms"), (1e-6, "µs")):
        if abs(seconds) >= factor:
            return f"{seconds / factor:.5g} {unit}"
    return f"{seconds / 1e-9:.5g} ns"


def _at_pressure(pascals: float) -> str:
    """A pressure behind a comma; nothing where there is none, as in a solution."""
    return "" if np.isnan(pascals) else f", {pressure_text(pascals)}"


def energy_text(joules: float) -> str:
    """A heat with a unit of fitting size."""
    for factor, unit in ((1e6, "MJ"), (1e3, "kJ")):
        if abs(joules) >= factor:
            return f"{joules / factor:.5g} {unit}"
    return f"{joules:.5g} J"


def pressure_text(pascals: float) -> str:
    """A pressure in bar."""
    return f"{pascals / 1e5:.5g} bar"


def volume_text(cubic_metres: float) -> str:
    """A volume in L below 1 m3."""
    return f"{cubic_metres * 1e3:.5g} L" if cubic_metres < 1 else f"{cubic_metres:.5g} m3"
