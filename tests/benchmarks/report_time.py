"""How long a report takes beside importing matplotlib and saving as many empty figures.

Run on demand: ``python -m tests.benchmarks.report_time``. Prints seconds of processor time and
their ratio for every invented study; each measurement runs in an interpreter of its own.
"""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

DATASETS = Path(__file__).parent.parent.parent / "datasets"

REPORT = """
import sys, tempfile, time
from pathlib import Path
from knought.study import run_study
with tempfile.TemporaryDirectory() as folder:
    run_study(sys.argv[1], Path(folder) / "out")
    print(len(list((Path(folder) / "out" / "figures").rglob("*.svg"))) // 2, time.process_time())
"""

EMPTY = """
import io, sys, time
from matplotlib.figure import Figure
for _ in range(int(sys.argv[1])):
    for width in (86 / 25.4, 178 / 25.4):
        figure = Figure(figsize=(width, 0.62 * width))
        if sys.argv[2] == "axes":
            figure.add_subplot()
        for kind in ("svg", "pdf", "png"):
            figure.savefig(io.BytesIO(), format=kind, dpi=600)
print(time.process_time())
"""


def _run(code: str, *arguments: str) -> list[str]:
    # Threads of the linear algebra that wait for work would count as processor time.
    alone = os.environ | {"OPENBLAS_NUM_THREADS": "1", "OMP_NUM_THREADS": "1"}
    done = subprocess.run(
        [sys.executable, "-c", code, *arguments],
        capture_output=True,
        text=True,
        check=True,
        env=alone,
    )
    return done.stdout.split()


def main() -> None:
    """Print one line a study."""
    for study in sorted(DATASETS.glob("*/study.toml")):
        figures, seconds = _run(REPORT, str(study))
        empty = {kind: float(_run(EMPTY, figures, kind)[0]) for kind in ("blank", "axes")}
        ratios = ", ".join(
            f"{float(seconds) / spent:.2f} times {figures} {kind} figures ({spent:.1f} s)"
            for kind, spent in empty.items()
        )
        print(f"{study.parent.name}: {float(seconds):.1f} s; {ratios}")


if __name__ == "__main__":
    main()
