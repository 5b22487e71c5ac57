"""Wall time of a plain `check` of one file over that of importing what it needs, in pairs.

    python tests/benchmarks/start_up.py

The aim is a ratio of at most 2.0.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import time
from pathlib import Path

FILE = Path(__file__).parent.parent.parent / "filtercheck/demo/board/filters/gear-tone.filter.yaml"
CHECK = [sys.executable, "-m", "filtercheck", "check", str(FILE)]
IMPORTS = [sys.executable, "-c", "import numpy, yaml, jsonschema, junit_xml"]
PAIRS = 21


def seconds(command: list[str]) -> float:
    begin = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True)
    return time.perf_counter() - begin


def main() -> None:
    seconds(CHECK)
    seconds(IMPORTS)
    pairs = [(seconds(CHECK), seconds(IMPORTS)) for _ in range(PAIRS)]
    ratios = sorted(check / imports for check, imports in pairs)
    middle = statistics.median(ratios)
    print(f"check of one file / imports alone: median {middle:.2f} of {PAIRS} pairs")
    print(
        f"  from {ratios[0]:.2f} to {ratios[-1]:.2f}; imports alone "
        f"{1e3 * statistics.median(b for _, b in pairs):.0f} ms"
    )


main()
