"""Whether to start anew where fits meet with a corner in cp alone (joins closed), as a Markdown table on stdout.

    python benchmarks/joins.py

Adiabatic ignitions at constant volume from below 1000 K, where most fits meet: steps taken and refused, and the error in the
time of steepest temperature rise against a run at rtol 1e-12, with joins passed over and with each one located.
"""

import warnings

from bothways import Remark, build_case
from bothways.case import Case
from bothways.endpoint import target_of
from bothways.integrate import integrate
from bothways.milestones import milestones
from bothways.monitored import monitored
from bothways.recorder import Recorder

CASES = {"hydrogen-oxygen": (900.0, 2e5, {"H2": 2, "O2": 1, "N2": 3.76}, 0.2),
         "c1-c4": (950.0, 2e6, {"C2H4": 1, "O2": 3, "N2": 11.28}, 0.1)}


def case_of(name: str, method: str, rtol: float) -> Case:
    """The ignition of a set."""
    T, p, ratio, end = CASES[name]
    return build_case({"case": {"mechanism": name}, "vessel": {"heat": "adiabatic", "holds": "volume"}, "until": {"time": end},
                       "start": {"temperature": T, "pressure": p, "mole_ratio": ratio},
                       "solver": {"method": method, "rtol": rtol, "atol": 1e-20}})


def run(case: Case, everywhere: bool) -> tuple[float, int, int]:
    """Time of steepest rise [s], steps, and steps refused."""
    equations = case.equations()
    target_of(case)
    recorder = Recorder(case, equations)
    done = integrate(monitored(case, equations, everywhere=everywhere).problem, case.method, recorder)
    found = milestones(case, equations, recorder.course(), ())
    return found["steepest temperature rise"], int(done.counts["steps"]), int(done.counts["rejected"])


def main() -> None:
    """Prints the table."""
    print("| set | method | rtol | passed over: steps (refused) | error | located: steps (refused) | error |")
    print("|---|---|---|---|---|---|---|")
    for name in CASES:
        exact = run(case_of(name, "Rosenbrock", 1e-12), True)[0]
        for method in ("Rosenbrock", "BDF"):
            for rtol in (1e-6, 1e-8, 1e-10):
                cells = []
                for everywhere in (False, True):
                    t, steps, refused = run(case_of(name, method, rtol), everywhere)
                    cells += [f"{steps} ({refused})", f"{abs(t / exact - 1):.1e}"]
                print(f"| {name} | {method} | {rtol:g} | " + " | ".join(cells) + " |", flush=True)


if __name__ == "__main__":
    warnings.simplefilter("ignore", Remark)
    main()
