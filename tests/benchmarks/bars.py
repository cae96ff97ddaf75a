"""Measure every bar and print figure, bound, seed and commit: `python tests/benchmarks/bars.py [ROOM ...]`.

Each room has a module bars_<room>.py beside this one whose measure() yields its bars.
"""

import importlib
import sys
import time
import traceback
from pathlib import Path

from bar import commit

ROOMS = sorted(path.stem.removeprefix("bars_") for path in Path(__file__).parent.glob("bars_*.py"))


def main() -> int:
    """Print all bars of the rooms named on the command line, or of all rooms; the exit code counts misses."""
    print(f"surfdisp bars at commit {commit()}", flush=True)
    missed = 0
    for room in sys.argv[1:] or ROOMS:
        started = time.perf_counter()
        print(f"[{room}]", flush=True)
        try:
            for bar in importlib.import_module(f"bars_{room}").measure():
                print(f"  {bar}", flush=True)
                missed += not bar.met
        except Exception:  # noqa: BLE001 - one broken room must not hide the others
            missed += 1
            traceback.print_exc(file=sys.stdout)
        print(f"  ({time.perf_counter() - started:.0f} s)", flush=True)
    print(f"{missed} missed" if missed else "all met")
    return missed


if __name__ == "__main__":
    sys.exit(main())
