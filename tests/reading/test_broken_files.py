"""Broken files: each gives just the errors that its author needs, at line and column.

A case is an edit of one sound file: what stands there, what it becomes, and the errors that
this must give, as "line:column problem".
"""

from __future__ import annotations

from pathlib import Path

import pytest

from filtercheck import pipeline

SOUND = """\
format: filtercheck-filter/1
filter: sound
sections:
  - circuit: one-pole-lowpass
    name: pole
    fit: {R: R1, C: C1, A: U1}
  - circuit: state-variable
    name: pair
    fit: {Rin: R2, Rhp: R3, Rlp: R4, Rbp: R5, Rg: R6, R1: R7, C1: C2, R2: R8, C2: C3,
          A0: U2, A1: U3, A2: U4}
parts:
  R1: {resistance: 10k, series: E96, tolerance: 1 %}
  R2: {resistance: 10k}
  R3: {resistance: 10k}
  R4: {resistance: 10k}
  R5: {resistance: 20k}
  R6: {resistance: 10k}
  R7: {resistance: 10k}
  R8: {resistance: 10k}
  C1: {capacitance: 10 nF, series: E12}
  C2: {capacitance: 10 nF}
  C3: {capacitance: 10 nF}
  U1: {amplifier: ideal}
  U2: {amplifier: {gain_bandwidth: 10 MHz, open_loop_gain: 110 dB}}
  U3: {amplifier: ideal}
  U4: {amplifier: ideal}
outputs: {low: pair.lowpass, band: pair.bandpass}
requirements:
  A-1: {kind: gain, output: low, band: [0 Hz, 500 Hz], min: -1 dB, max: 1 dB, verify: nominal}
  A-2: {kind: corner, output: low, fall: 3 dB, side: above, reference: 1, within: [1k, 2k], verify: nominal}
"""
CONNECTED = """\
format: filtercheck-filter/1
filter: sound
connect:
  R1: [in, a]
  C1: [a, ground]
  U1: {plus: a, minus: out, out: out}
parts:
  R1: {resistance: 10k}
  C1: {capacitance: 10 nF}
  U1: {amplifier: ideal}
outputs: {low: out}
requirements:
  A-1: {kind: gain, output: low, band: [0 Hz, 500 Hz], min: -1 dB, verify: nominal}
"""
BROKEN: dict[str, tuple[str, str, tuple[str, ...]]] = {
    "unknown key": (
        "resistance: 10k, series",
        "resistence: 10k, series",
        ("12:8 unknown key 'resistence'",),
    ),
    "missing key": ("filter: sound\n", "", ("1:1 the file has no 'filter'",)),
    "wrong unit": (
        "R5: {resistance: 20k}",
        "R5: {resistance: 20 nF}",
        ("16:20 the unit F does not fit a resistance",),
    ),
    "not a number": (
        "R5: {resistance: 20k}",
        "R5: {resistance: 1:30}",
        ("16:20 this is not a resistance",),
    ),
    "negative": (
        "R5: {resistance: 20k}",
        "R5: {resistance: -20k}",
        ("16:20 the value is out of range",),
    ),
    "outside its series": (
        "{resistance: 10k, series",
        "{resistance: 10k6, series",
        ("12:20 R1 is not an E96 value",),
    ),
    "unknown series": ("series: E96", "series: E95", ("12:33 'E95' is not known here",)),
    "key twice": ("  R3:", "  R2:", ("14:3 'R2' is given twice",)),
    "alias": ("R2: {resistance: 10k}", "R2: *other", ("13:7 an alias is not allowed",)),
    "anchor": (
        "R2: {resistance: 10k}",
        "R2: &it {resistance: 10k}",
        ("13:7 an anchor is not allowed",),
    ),
    "tag": (
        "R2: {resistance: 10k}",
        "R2: {resistance: !!float 10k}",
        ("13:20 a tag is not allowed",),
    ),
    "merge key": (
        "R2: {resistance: 10k}",
        "R2: {<<: x, resistance: 10k}",
        ("13:8 a merge key is not allowed",),
    ),
    "unknown designator": (
        "R: R1, C",
        "R: R99, C",
        ("6:14 there is no part 'R99'", "12:3 R1 is used nowhere"),
    ),
    "part never used": (
        "outputs:",
        "  R9: {resistance: 10k}\noutputs:",
        ("27:3 R9 is used nowhere",),
    ),
    "role left out": ("Rbp: R5, ", "", ("9:5 sections.item 2.fit has no 'Rbp'",)),
    "unknown role": ("Rbp: R5, ", "Rbp: R5, Rx: R1, ", ("9:47 unknown key 'Rx'",)),
    "no such output": (
        "kind: gain, output: low",
        "kind: gain, output: lo",
        ("29:29 there is no output 'lo'",),
    ),
    "no such section output": (
        "pair.lowpass",
        "pair.lopass",
        ("27:16 there is no output 'pair.lopass'",),
    ),
    "part in two places": (
        "Rhp: R3",
        "Rhp: R2",
        ("9:25 the part 'R2' stands twice in the circuit", "14:3 R3 is used nowhere"),
    ),
    "part of the wrong kind": (
        "Rhp: R3",
        "Rhp: C2",
        ("9:67 the part 'C2' stands twice in the circuit", "14:3 R3 is used nowhere"),
    ),
    "capacitor as resistor": (
        "R3: {resistance: 10k}",
        "R3: {capacitance: 10n}",
        ("9:25 R3 does not fit that role",),
    ),
    "section twice": (
        "name: pair",
        "name: pole",
        ("8:11 the section 'pole' stands twice in the circuit",),
    ),
    "unknown circuit": (
        "circuit: one-pole-lowpass",
        "circuit: one-pole-lopass",
        ("4:14 'one-pole-lopass' is not known here",),
    ),
    "unknown kind": ("kind: corner", "kind: cornor", ("30:15 'cornor' is not known here",)),
    "key of another kind": (
        "min: -1 dB, max: 1 dB",
        "min: -1 dB, fall: 1 dB",
        ("29:68 unknown key 'fall'",),
    ),
    "verify left out": (
        ", max: 1 dB, verify: nominal",
        ", max: 1 dB",
        ("29:3 requirements.A-1 has no 'verify'",),
    ),
    "dB left out": ("min: -1 dB", "min: -1", ("29:61 the unit is missing",)),
    "band backwards": (
        "[0 Hz, 500 Hz]",
        "[500 Hz, 0 Hz]",
        ("29:40 A-1: the ends are not in rising order",),
    ),
    "band of three": (
        "[0 Hz, 500 Hz]",
        "[0 Hz, 1 Hz, 500 Hz]",
        ("29:40 requirements.A-1.band is not acceptable",),
    ),
    "limits crossed": ("max: 1 dB", "max: -2 dB", ("29:61 A-1: the floor lies above the ceiling",)),
    "no limit": ("min: -1 dB, max: 1 dB, ", "", ("29:3 A-1: has no limit",)),
    "slope too short": (
        "max: 1 dB",
        "max: {10 Hz: 1 dB, 400 Hz: 2 dB}",
        ("29:73 A-1: the limit is given from 10 Hz to 400 Hz only",),
    ),
    "slope backwards": (
        "max: 1 dB",
        "max: {900 Hz: 1 dB, 400 Hz: 2 dB}",
        ("29:73 A-1: the frequencies are not in rising order",),
    ),
    "slope of one point": (
        "max: 1 dB",
        "max: {900 Hz: 1 dB}",
        ("29:73 requirements.A-1.max is not acceptable",),
    ),
    "slope with a bad frequency": (
        "max: 1 dB",
        "max: {900 F: 1 dB, 1 MHz: 2 dB}",
        ("29:74 the unit F does not fit a frequency",),
    ),
    "two references": (
        "reference: 1,",
        "reference: 1, passband: [1, 2],",
        ("30:72 A-2: has two references",),
    ),
    "no reference": ("reference: 1, ", "", ("30:3 A-2: has no reference to measure from",)),
    "tolerance of everything": (
        "tolerance: 1 %",
        "tolerance: [-100 %, 5 %]",
        ("12:49 the tolerance of R1 leaves no range of positive values",),
    ),
    "figures out of order": (
        "gain_bandwidth: 10 MHz",
        "gain_bandwidth: {min: 2 MHz, typical: 1 MHz, max: 3 MHz}",
        ("24:19 the figures are not in rising order",),
    ),
    "figure left out": (
        ", open_loop_gain: 110 dB",
        "",
        ("24:8 parts.U2.amplifier has no 'open_loop_gain'",),
    ),
    "two values": (
        "R2: {resistance: 10k}",
        "R2: {resistance: 10k, ideal: 10k}",
        ("13:3 R2 must state one value",),
    ),
    "no value": ("R2: {resistance: 10k}", "R2: {series: E96}", ("13:3 R2 must state one value",)),
    "ideal without a series": (
        "R2: {resistance: 10k}",
        "R2: {ideal: 10k}",
        ("13:15 R2 states an ideal value without a series",),
    ),
    "ideal of the wrong unit": (
        "R2: {resistance: 10k}",
        "R2: {ideal: 10 nF, series: E96}",
        ("13:15 the unit F does not fit a resistance",),
    ),
    "wrong form": (
        "outputs: {low: pair.lowpass, band: pair.bandpass}",
        "outputs: [pair.lowpass]",
        ("27:10 outputs has the wrong form",),
    ),
    "circuit missing": (
        SOUND[SOUND.index("sections:") : SOUND.index("parts:")],
        "",
        ("1:1 the circuit is missing",),
    ),
    "circuit twice": (
        "parts:",
        "connect: {R1: [in, a]}\nparts:",
        ("11:1 the circuit is given twice",),
    ),
    "format": ("filter/1", "filter/9", ("1:9 'filtercheck-filter/9' is not known here",)),
    "second document": ("outputs:", "---\noutputs:", ("27:1 a second document is not allowed",)),
    "driving output missing": (
        "parts:",
        "  - {circuit: unity-gain, name: end, fit: {A: U5}}\nparts:\n  U5: {amplifier: ideal}",
        ("8:11 section 'pair' does not say which output drives the next",),
    ),
    "driving output unknown": (
        "parts:",
        "    drives: lopass\n  - {circuit: unity-gain, name: end, fit: {A: U5}}\n"
        "parts:\n  U5: {amplifier: ideal}",
        ("11:13 there is no output 'lopass'",),
    ),
}
CONNECTED_BROKEN: dict[str, tuple[str, str, tuple[str, ...]]] = {
    "no such node": ("{low: out}", "{low: outt}", ("11:16 there is no node 'outt'",)),
    "both ends at one node": (
        "R1: [in, a]",
        "R1: [a, a]",
        ("4:3 R1 is connected to one node only",),
    ),
    "connected like another part": (
        "R1: [in, a]",
        "R1: {plus: in, minus: a, out: b}",
        ("4:3 R1 is connected like another kind of part",),
    ),
    "floating node": (
        "C1: [a, ground]",
        "C1: [b, ground]",
        ("5:3 node 'b' floats: nothing but C1 is connected to it",),
    ),
    "no path for direct current": (
        "R1: {resistance: 10k}",
        "R1: {capacitance: 10n}",
        ("4:3 node 'a' floats: no path for direct current leads to it",),
    ),
    "no signal": ("[in, a]", "[inn, a]", ("4:3 no part is connected to the signal's node",)),
    "shorted source": (
        "out: out}\nparts",
        "out: in}\nparts",
        ("6:3 the output of U1 shorts another source",),
    ),
    "no feedback": ("minus: out", "minus: ground", ("6:3 the loop of U1 has no solution",)),
    "unknown terminal": (
        "plus: a",
        "plas: a",
        ("6:3 connect.U1 has no 'plus'", "6:8 unknown key 'plas'"),
    ),
    "three nodes": ("R1: [in, a]", "R1: [in, a, b]", ("4:7 connect.R1 is not acceptable",)),
}


def errors(text: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> list[str]:
    monkeypatch.chdir(tmp_path)
    Path("x.filter.yaml").write_text(text, "utf-8")
    run = pipeline.judged(["x.filter.yaml"])
    for fault in run.faults:
        line = text.splitlines()[fault.at.line - 1] if text else ""
        assert fault.at.text == line
        assert fault.at.file == "x.filter.yaml"
        assert fault.found
        assert fault.allowed
        assert fault.fix
        shown = str(fault).splitlines()
        assert (
            shown[0] == f"x.filter.yaml:{fault.at.line}:{fault.at.column}: error: {fault.problem}"
        )
    return [f"{fault.at.line}:{fault.at.column} {fault.problem}" for fault in run.faults]


@pytest.mark.parametrize("text", [SOUND, CONNECTED])
def test_the_sound_file_is_sound(
    text: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    assert errors(text, tmp_path, monkeypatch) == []


CASES = [
    pytest.param(base, *edit, id=name)
    for base, edits in ((SOUND, BROKEN), (CONNECTED, CONNECTED_BROKEN))
    for name, edit in edits.items()
]


@pytest.mark.parametrize(("base", "old", "new", "wanted"), CASES)
def test_broken(
    base: str,
    old: str,
    new: str,
    wanted: tuple[str, ...],
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    assert old in base
    assert wanted

    assert tuple(errors(base.replace(old, new, 1), tmp_path, monkeypatch)) == wanted


def test_all_errors_of_a_file_are_given_at_once(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    text = SOUND
    for name in ("unknown key", "wrong unit", "unknown series", "unknown kind", "dB left out"):
        old, new, _ = BROKEN[name]
        text = (
            text.replace(old.split(",")[0], new.split(",")[0], 1) if name == "unknown key" else text
        )
        text = text.replace(old, new, 1)

    found = errors(text, tmp_path, monkeypatch)
    assert len(found) == 5
    assert found == sorted(found, key=lambda error: [int(n) for n in error.split()[0].split(":")])


@pytest.mark.parametrize(
    ("broken", "text"),
    [
        ("", "the file is empty"),
        ("# only a comment\n", "the file is empty"),
        ("a: [b\n", "the file is not well-formed YAML"),
        ("a: 'b\n", "the file is not well-formed YAML"),
        ("a:\n\t- b\n", "the file is not well-formed YAML"),
        ("? [a]\n: b\n", "a key that is no word is not allowed"),
        ("just words\n", "the file has the wrong form"),
    ],
)
def test_files_that_are_no_mapping(
    broken: str, text: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    found = errors(broken, tmp_path, monkeypatch)

    assert found
    assert found[0].partition(" ")[2] == text


def test_the_message_shows_the_line_a_mark_and_a_way_out(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    old, new, _ = BROKEN["outside its series"]
    monkeypatch.chdir(tmp_path)
    Path("x.filter.yaml").write_text(SOUND.replace(old, new, 1), "utf-8")
    (fault,) = pipeline.judged(["x.filter.yaml"]).faults

    assert (
        str(fault)
        == """\
x.filter.yaml:12:20: error: R1 is not an E96 value
 12 |   R1: {resistance: 10k6, series: E96, tolerance: 1 %}
    |                    ^^^^
  found    10.6 kΩ
  allowed  E96 values (IEC 60063); the nearest are 10.5 kΩ and 10.7 kΩ
  fix      write 10.5 kΩ or 10.7 kΩ, or mend `series`"""
    )


def test_the_mark_stands_under_its_place_after_wide_signs_and_tabs(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    text = SOUND.replace("R5: {resistance: 20k}", "R5: {ideal: 4.7 kΩ,\tseries: E95}")
    Path("x.filter.yaml").write_text(text, "utf-8")
    (fault,) = pipeline.judged(["x.filter.yaml"]).faults
    _, line, mark, *_ = str(fault).splitlines()

    assert line.index("E95") == mark.index("^")
    assert line[: line.index("E95")].count("\t") == mark.count("\t") == 1


def test_the_same_filter_twice_names_both_places(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    for name in ("a", "b"):
        Path(f"{name}.filter.yaml").write_text(SOUND, "utf-8")
    run = pipeline.judged([])

    assert [judged.name for judged in run.filters] == ["sound"]
    (fault,) = run.faults
    assert str(fault.at) == "b.filter.yaml:2:9"
    assert fault.found == "first at a.filter.yaml:2:9"
