"""CPU time for each file of a folder of 1000 filter files, over that of a folder of 100.

    python tests/benchmarks/many_files.py

The aims are a ratio of at most 1.0 within noise, and less than 15 ms for each file. The files are
copies of the example board's five filters under other names; start-up is taken off by
checking a folder of one file.
"""

from __future__ import annotations

import resource
import statistics
import subprocess
import sys
import tempfile
from pathlib import Path

BOARD = Path(__file__).parent.parent.parent / "filtercheck/demo/board/filters"
SIZES = (1, 100, 1000)
ROUNDS = 5


def folder(root: Path, count: int) -> Path:
    place = root / str(count)
    place.mkdir()
    texts = [path.read_text("utf-8") for path in sorted(BOARD.glob("*.filter.yaml"))]
    for i in range(count):
        text = texts[i % len(texts)].replace("\nfilter: ", f"\nfilter: n{i}-", 1)
        (place / f"{i:04d}.filter.yaml").write_text(text, "utf-8")
    return place


def cpu_seconds(place: Path) -> float:
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    subprocess.run(
        [sys.executable, "-m", "filtercheck", "check", str(place)], check=True, capture_output=True
    )
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    return after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime


def main() -> None:
    with tempfile.TemporaryDirectory() as name:
        places = [folder(Path(name), count) for count in SIZES]
        runs = [[cpu_seconds(place) for place in places] for _ in range(ROUNDS)]
    few = [1e3 * (hundred - one) / 99 for one, hundred, _ in runs]
    many = [1e3 * (thousand - one) / 999 for one, _, thousand in runs]
    ratio = statistics.median(b / a for a, b in zip(few, many, strict=True))
    print(f"1000 files / 100 files, CPU for each file: median {ratio:.2f} of {ROUNDS} pairs")
    each = f"{statistics.median(many):.1f} ms of 1000, {statistics.median(few):.1f} ms of 100"
    print(f"  for each file: {each}")


main()
