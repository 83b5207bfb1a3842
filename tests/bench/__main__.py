"""All benches in one run: ``python -m tests.bench [NAME ...]``. Ratios within the run count, absolute times do not."""

from __future__ import annotations

import importlib
import sys

BENCHES = ("starts", "plane_waves", "batches", "sweeps", "plates")


def main(names: list[str]) -> None:
    """Print every row as it is found."""
    for name in names or BENCHES:
        print(name)
        for what, value, how in importlib.import_module(f"tests.bench.{name}").rows():
            print(f"  {what}: {value:.3g}  ({how})", flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])
