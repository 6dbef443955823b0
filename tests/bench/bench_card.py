"""Whole ``whirlcard card`` in a fresh process, as a multiple of its libraries' own cost.

The yardstick, also in a fresh process: import numpy, scipy.linalg, reportlab and typer and write
an empty six-page PDF. Both in turn, CPU seconds, medians.

Run: python tests/bench/bench_card.py [runs]
"""

from __future__ import annotations

import pathlib
import resource
import statistics
import subprocess
import sys
import tempfile

ROOT = pathlib.Path(__file__).resolve().parent.parent.parent
YARDSTICK = """
import numpy, scipy.linalg, typer, reportlab.platypus
from reportlab.pdfgen import canvas
page = canvas.Canvas({target!r})
for _ in range(6):
    page.showPage()
page.save()
"""


def cpu_seconds(command: list[str]) -> float:
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    subprocess.run(command, check=True, capture_output=True)
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    return after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime


def main(runs: int) -> None:
    with tempfile.TemporaryDirectory() as folder:
        yardstick = [sys.executable, "-c", YARDSTICK.format(target=f"{folder}/empty.pdf")]
        card = [
            sys.executable,
            "-c",
            "from planner.cli import run; run()",
            "card",
            str(ROOT / "sample_plans" / "articulated-run-up"),
            "--out",
            f"{folder}/card.pdf",
        ]
        pairs = [(cpu_seconds(yardstick), cpu_seconds(card)) for _ in range(runs + 1)][1:]
    base = statistics.median(pair[0] for pair in pairs)
    whole = statistics.median(pair[1] for pair in pairs)
    ratio = statistics.median(pair[1] / pair[0] for pair in pairs)
    print(f"libraries and an empty PDF {base:.2f} s, whole card {whole:.2f} s, ratio {ratio:.2f}")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 5)
