"""Filter files for the benchmarks, and the CPU time of judging one."""

from __future__ import annotations

import sys
import time
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path

from nodal_baseline import AMPLIFIERS, CAPACITORS, RESISTORS, TOLERANCE, nominal

from filtercheck.model.verdict import Run
from filtercheck.pipeline import judged

# Rooms whose caches hold what was worked out for a circuit; the others' hold the schemas.
COMPUTING = ("network", "tolerance", "verification", "wiring")


def part(designator: str, value: float, tolerance: float) -> str:
    """Return the line of one part; a tolerance of 0 makes it exact."""
    if designator[0] == "A":
        figure = f"{{typical: {value:.9g} Hz, tolerance: {100 * tolerance:g} %}}"
        return f"{designator}: {{amplifier: {{gain_bandwidth: {figure}, open_loop_gain: ideal}}}}"
    quantity, unit = ("resistance", "ohm") if designator[0] == "R" else ("capacitance", "F")
    spread = f", tolerance: {100 * tolerance:g} %" if tolerance else ""
    return f"{designator}: {{{quantity}: {value:.9g} {unit}{spread}}}"


def cascade(name: str, qualities: Sequence[float], requirements: Iterable[str]) -> str:
    """Return a file of state-variable sections in a row; each has the baseline's values."""
    sections: list[str] = []
    parts: list[str] = []
    for i, q in enumerate(qualities):
        fit = ", ".join(f"{role}: {role}-{i}" for role in (*RESISTORS, *CAPACITORS, *AMPLIFIERS))
        drives = "" if i == len(qualities) - 1 else ", drives: lowpass"
        sections.append(f"- {{circuit: state-variable, name: s{i}, fit: {{{fit}}}{drives}}}")
        parts.extend(part(f"{r}-{i}", value, TOLERANCE[r[0]]) for r, value in nominal(q).items())
    return whole(
        name, f"s{len(qualities) - 1}.lowpass", {"sections": sections}, parts, requirements
    )


def whole(
    name: str,
    output: str,
    circuit: Mapping[str, Iterable[str]],
    parts: Iterable[str],
    requirements: Iterable[str],
) -> str:
    """Return a whole filter file from the lines of its blocks."""
    blocks = {**circuit, "parts": parts, "requirements": requirements}
    head = ["format: filtercheck-filter/1", f"filter: {name}", f"outputs: {{out: {output}}}"]
    body = [line for key, lines in blocks.items() for line in (f"{key}:", *_indented(lines))]
    return "\n".join([*head, *body, ""])


def _indented(lines: Iterable[str]) -> list[str]:
    return [f"  {line}" for line in lines]


def written(folder: Path, name: str, text: str) -> str:
    """Write a file into a folder and return its path."""
    path = folder / f"{name}.filter.yaml"
    path.write_text(text, "utf-8")
    return str(path)


def warmed_up(folder: Path, verify: str) -> None:
    """Judge a filter of another shape, so that every import is done."""
    network = ["R9: [in, out]", "C9: [out, ground]"]
    parts = [part("R9", 10e3, 0.01), part("C9", 10e-9, 0.05)]
    limit = f"{{kind: gain, output: out, band: [0 Hz, 1 kHz], min: -6 dB, verify: {verify}}}"
    text = whole("warm-up", "out", {"connect": network}, parts, [f"WARM: {limit}"])
    cpu_seconds(written(folder, "warm-up", text))


def cpu_seconds(path: str) -> tuple[float, Run]:
    """Return the CPU time of a judgement that starts with nothing known of any circuit."""
    _forget()
    begin = time.process_time()
    run = judged([path])
    seconds = time.process_time() - begin
    if run.faults:
        sys.exit("\n".join(f"{fault}, found {fault.found}" for fault in run.faults))
    return seconds, run


def _forget() -> None:
    """Empty the caches of the computing rooms, as at the start of a process."""
    for name, module in list(sys.modules.items()):
        if name.startswith("filtercheck.") and name.split(".")[1] in COMPUTING:
            for one in vars(module).values():
                if hasattr(one, "cache_clear"):
                    one.cache_clear()
