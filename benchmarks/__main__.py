"""All benchmarks of the integrator, into benchmarks/results: tables as Markdown, figures as PNG, the machine named.

    python -m benchmarks [folder]

Some half an hour; run it on an idle machine. Existing files of the folder are replaced.
"""

import os
import platform
import sys
import warnings
from collections.abc import Iterable
from importlib.metadata import version
from pathlib import Path

from matplotlib.figure import Figure

from . import controllers, family, parts, solvers

MARKERS = "os^vDXP*"
PACKAGES = ("numpy", "scipy", "numba", "scikit-sundae")


def processor() -> str:
    """What the system calls its processor."""
    try:
        lines = Path("/proc/cpuinfo").read_text(encoding="utf-8").splitlines()
        return next(line.split(":", 1)[1].strip() for line in lines if line.startswith("model name"))
    except (OSError, StopIteration):
        return platform.processor() or platform.machine()


def machine() -> str:
    """One line on where the figures come from."""
    packages = ", ".join(f"{name} {version(name)}" for name in PACKAGES)
    return (f"{processor()}, {os.cpu_count()} cores, {platform.system()}, Python {platform.python_version()}, {packages}; "
            f"load {os.getloadavg()[0]:.1f} at the start")


def write(folder: Path, name: str, title: str, lines: Iterable[str]) -> None:
    """A Markdown file."""
    where = machine()
    text = "\n".join([f"# {title}", "", where, "", *lines, ""])
    (folder / f"{name}.md").write_text(text, encoding="utf-8")
    print(text, flush=True)


def diagram(folder: Path, name: str, found: dict[str, list[tuple[float, float, str]]]) -> None:
    """Time against achieved error, a line for each solver."""
    figure = Figure(figsize=(6.5, 4.5), layout="constrained")
    axes = figure.add_subplot()
    for marker, (solver, rows) in zip(MARKERS, found.items(), strict=False):
        kept = sorted((e, 1e3 * s) for e, s, _ in rows if 0.0 < e < 1.0)
        own = solver in ("Rosenbrock", "BDF")
        axes.loglog(*zip(*kept, strict=True), marker=marker, markersize=4, linewidth=1.8 if own else 0.9,
                    label=f"{solver} (ours)" if own else solver)
    axes.set(xlabel="achieved relative error of T and major species", ylabel="time / ms", title=f"{name}: work and precision")
    axes.invert_xaxis()
    axes.grid(alpha=0.3)
    axes.legend(fontsize=7, ncols=2)
    figure.savefig(folder / f"work-precision-{name}.png", dpi=150)


def precision(folder: Path) -> Iterable[str]:
    """The tables of work and precision, drawing each as it comes."""
    yield f"An empty callback takes {solvers.empty_callback():.2f} µs."
    for name in solvers.CASES:
        found = solvers.course(name, solvers.SOLVERS)
        diagram(folder, name, found)
        yield "".join(solvers.table(name, found))


def main(folder: Path) -> None:
    """Measures and writes everything."""
    warnings.simplefilter("ignore")
    folder.mkdir(parents=True, exist_ok=True)
    write(folder, "parts", "Parts of a step", parts.report())
    write(folder, "family", "Time of a step against the number of species", family.report())
    write(folder, "controllers", "Rules for the step length", controllers.lines(list(controllers.SETS)))
    write(folder, "solvers", "Work and precision of the integrators", precision(folder))


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent / "results")
