"""What a start costs, as Markdown tables on stdout: imports, whole commands, the first start with an empty cache of kernels.

    python benchmarks/startup.py [repeats]

Every line is a new process; least and median of the repeats, by the clock and by processor time. The first start is measured
once, with both cores, and once more held to one core where the system can do that.
"""

import os
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Sequence
from pathlib import Path

import numpy as np

RUN = "from bothways.cli import main; main(['run', 'hydrogen-kettle', '--output', {file!r}, '--replace'])"
COMMANDS = {"python alone": "pass", "NumPy and numba": "import numpy, numba",
            "numba, ready to load or compile": "from numba.core.registry import cpu_target as t\n"
            "t.typing_context.refresh(); t.target_context.refresh()",
            "import bothways": "import bothways", "every public name": "from bothways import *",
            "bothways --version": "from bothways.cli import main; main(['--version'])",
            "bothways --help": "from bothways.cli import main; main(['--help'])",
            "bothways run --help": "from bothways.cli import main; main(['run', '--help'])",
            "bothways equilibrium hydrogen-kettle": "from bothways.cli import main; main(['equilibrium', 'hydrogen-kettle'])",
            "bothways run hydrogen-kettle": RUN}


def timed(code: str, cache: Path | None = None, before: Sequence[str] = ()) -> tuple[float, float]:
    """Seconds by the clock and of processors (children included) that a new process takes for these lines."""
    environment = dict(os.environ) if cache is None else {**os.environ, "NUMBA_CACHE_DIR": str(cache)}
    start, used = time.perf_counter(), resource.getrusage(resource.RUSAGE_CHILDREN)
    subprocess.run([*before, sys.executable, "-c", code], env=environment, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL,
                   check=True)
    now = resource.getrusage(resource.RUSAGE_CHILDREN)
    return time.perf_counter() - start, now.ru_utime + now.ru_stime - used.ru_utime - used.ru_stime


def warm(folder: Path, repeats: int) -> None:
    """The table of what has its kernels."""
    print("| | clock, least / s | median / s | processor, least / s | median / s |\n|---|---|---|---|---|")
    for name, code in COMMANDS.items():
        code = code.format(file=str(folder / "run.h5")) if "{file" in code else code
        timed(code)
        least, median = (f(np.array([timed(code) for _ in range(repeats)]), axis=0) for f in (np.min, np.median))
        print(f"| {name} | {least[0]:.2f} | {median[0]:.2f} | {least[1]:.2f} | {median[1]:.2f} |", flush=True)


def cold(folder: Path) -> None:
    """The table of the first start."""
    print("\n| first start, the run included | clock / s | processors / s |\n|---|---|---|")
    ways: dict[str, tuple[str, ...]] = {"all cores": (), "one core": ("taskset", "-c", "0")}
    for k, (name, before) in enumerate(ways.items()):
        if not before or hasattr(os, "sched_setaffinity"):
            clock, used = timed(RUN.format(file=str(folder / "run.h5")), folder / f"cache-{k}", before)
            print(f"| {name} | {clock:.1f} | {used:.1f} |", flush=True)


def main(repeats: int) -> None:
    """Prints both tables."""
    with tempfile.TemporaryDirectory() as name:
        warm(Path(name), repeats)
        cold(Path(name))


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 7)
