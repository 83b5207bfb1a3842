"""Start of the command line against the start of numpy."""

from __future__ import annotations

import subprocess
import sys
import time
from collections.abc import Iterator
from pathlib import Path

__all__ = ["rows"]

TANK = Path(__file__).parents[2] / "demo_configs" / "oil_tank_overfill.toml"
RUNS = 7


def rows() -> Iterator[tuple[str, float, str]]:
    """`--help` and `budget`, each over `import numpy`."""
    numpy = _least([sys.executable, "-c", "import numpy"])
    how = f"least of {RUNS} runs each, whole processes"
    yield "--help, per import numpy (at most 0.8)", _least([sys.executable, "-m", "outcouple", "--help"]) / numpy, how
    budget = [sys.executable, "-m", "outcouple", "budget", str(TANK)]
    yield "budget, per import numpy (at most 3)", _least(budget) / numpy, how


def _least(command: list[str]) -> float:
    found = []
    for _ in range(RUNS):
        begun = time.perf_counter()
        subprocess.run(command, stdout=subprocess.DEVNULL, check=False)
        found.append(time.perf_counter() - begun)
    return min(found)
