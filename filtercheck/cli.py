"""The command line: arguments, writing files, exit status; the only room that prints.

Exit status: 0 everything holds; 1 a requirement fails or is undecided; 2 the files, the
arguments or the program are at fault. Nothing else.
"""

from __future__ import annotations

import argparse
import os
import sys
import tempfile
import traceback
from collections.abc import Sequence
from pathlib import Path

from filtercheck import __version__, pipeline
from filtercheck.errors import FiltercheckError, QuantityError, UsageError
from filtercheck.model.reach import WORDS, within_reach
from filtercheck.model.verdict import Outcome, Run
from filtercheck.quantities import parse

STATUS = "exit status: 0 everything holds; 1 a requirement fails or is undecided; 2 at fault"


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command and return the exit status."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):  # units hold Ω and µ, whatever the locale
            stream.reconfigure(encoding="utf-8", errors="backslashreplace")
    try:
        arguments = _parser().parse_args(argv)
        status: int = arguments.command(arguments)
        sys.stdout.flush()
    except FiltercheckError as error:
        print(error, file=sys.stderr)
    except BrokenPipeError:
        # The reader has gone; without this the interpreter complains again when it ends.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    except Exception:
        # Python's own status for a crash is 1, which here means "a requirement fails".
        traceback.print_exc()
    else:
        return status
    return 2


def run() -> None:
    """Run the console script."""
    sys.exit(main())


def status(run: Run) -> int:
    """Judge the judgements; an empty run proves nothing, so it is no success."""
    if run.faults:
        return 2
    return 0 if {verdict.outcome for verdict in run.verdicts} == {Outcome.PASS} else 1


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="filtercheck",
        description="Check that the active filters of a board meet their requirements.",
        epilog=STATUS,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"filtercheck {__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")

    check = commands.add_parser("check", help="judge every filter found", allow_abbrev=False)
    check.add_argument("paths", nargs="*", metavar="PATH", help="files or folders; the board here")
    _outputs(check)
    _settings(check)
    check.add_argument("--jobs", type=int, default=1, metavar="N", help="processes (default 1)")
    check.set_defaults(command=_check)

    response = commands.add_parser(
        "response", help="compute the response of a filter as CSV", allow_abbrev=False
    )
    response.add_argument("file", metavar="FILE")
    response.add_argument("--output", metavar="NAME", help="one output; all where left out")
    where = response.add_mutually_exclusive_group()
    where.add_argument("--at", metavar="FREQ,…", help="frequencies, such as 100,1k,10k")
    where.add_argument("--band", nargs=2, metavar=("LOW", "HIGH"), default=["10", "1M"])
    response.add_argument("--points", type=int, default=200, help="of the band (default 200)")
    _settings(response)
    response.set_defaults(command=_response)

    inspect = commands.add_parser(
        "inspect", help="show poles, zeros and what takes up the margins", allow_abbrev=False
    )
    inspect.add_argument("file", metavar="FILE")
    _settings(inspect)
    inspect.set_defaults(command=_inspect)

    explain = commands.add_parser("explain", help="show the manual of a topic")
    explain.add_argument("topic", nargs="?", metavar="TOPIC", help="all topics where left out")
    explain.set_defaults(command=_explain)

    demo = commands.add_parser("demo", help="write an example board and check it")
    demo.add_argument("folder", nargs="?", default="filtercheck-demo", metavar="FOLDER")
    demo.set_defaults(command=_demo)
    return parser


def _outputs(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("--junit", metavar="FILE", help="write the verdicts as JUnit XML")
    parser.add_argument("--evidence", metavar="FILE", help="write all figures as JSON")


def _settings(parser: argparse.ArgumentParser) -> None:
    parser.add_argument(
        "--set",
        dest="settings",
        action="append",
        default=[],
        metavar="R4=11k5",
        help="fit another value, to ask what would be; may be given again",
    )


def _check(arguments: argparse.Namespace) -> int:
    targets = {"junit": arguments.junit, "evidence": arguments.evidence}
    files = {name: Path(target) for name, target in targets.items() if target is not None}
    _clear(list(files.values()), arguments.paths)
    if not 1 <= arguments.jobs <= 256:
        raise UsageError("--jobs: a number from 1 to 256")
    return _judge(arguments.paths, arguments.settings, files, arguments.jobs)


def _judge(
    paths: Sequence[str], settings: Sequence[str], files: dict[str, Path], jobs: int = 1
) -> int:
    from filtercheck.report import REPORTERS, console

    run = pipeline.judged(paths, settings, jobs)
    print(console.render(run), end="")
    for fault in run.faults:
        print(f"\n{fault}", file=sys.stderr)
    for name, target in files.items():
        _write(target, REPORTERS[name](run))
    return status(run)


def _response(arguments: argparse.Namespace) -> int:
    from filtercheck.report import curve
    from filtercheck.sampling import spaced

    if arguments.at is not None:
        freq_hz = [_frequency(text, "--at") for text in arguments.at.split(",")]
    else:
        low, high = (_frequency(text, "--band") for text in arguments.band)
        if not 0.0 < low < high or not 2 <= arguments.points <= 1_000_000:
            raise UsageError("--band: two rising frequencies above 0 Hz, 2 points or more")
        freq_hz = spaced(low, high, arguments.points)
    curves = pipeline.curves(arguments.file, arguments.output, freq_hz, arguments.settings)
    print(curve.render(curves.samples), end="")
    if not curves.stable:
        print("warning: not shown stable, so no response will be measured", file=sys.stderr)
    return 0


def _inspect(arguments: argparse.Namespace) -> int:
    from filtercheck.report import inspection

    print(inspection.render(pipeline.inspected(arguments.file, arguments.settings)), end="")
    return 0


def _frequency(text: str, option: str) -> float:
    try:
        value = parse(text.strip(), "frequency")
    except QuantityError as error:
        raise UsageError(f"{option} {text}: {error.problem}; {error.fix}") from error
    if value < 0.0 or not within_reach(value):
        raise UsageError(f"{option} {text}: a frequency is not negative; {WORDS}")
    return value


def _explain(arguments: argparse.Namespace) -> int:
    from filtercheck import explain

    print(explain.manual(arguments.topic) if arguments.topic else explain.topics(), end="")
    return 0


def _demo(arguments: argparse.Namespace) -> int:
    from filtercheck import demo

    folder = Path(arguments.folder)
    demo.write(folder)
    files = {
        "junit": folder / "results" / "junit.xml",
        "evidence": folder / "results" / "evidence.json",
    }
    reached = _judge([str(folder)], [], files)
    print(f"\n{demo.guide(folder.as_posix())}", end="")
    return reached


def _clear(targets: Sequence[Path], paths: Sequence[str]) -> None:
    """Refuse to write over a file under check, or two reports into one file."""
    places = [target.resolve() for target in targets]
    if any(not target.name for target in targets):
        raise UsageError("a report needs the name of a file")
    if len(set(places)) < len(places):
        raise UsageError("two reports cannot be written to the same file")
    for target in places:
        if target.name.endswith((".yaml", ".yml")) or target in [Path(p).resolve() for p in paths]:
            raise UsageError(f"{target.name}: a report is not written over a file under check")


def _write(target: Path, text: str) -> None:
    """Write a file whole or not at all: aside first, then put in place of the old one."""
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
        handle, aside = tempfile.mkstemp(dir=target.parent, prefix=f".{target.name}.")
        try:
            with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as stream:
                stream.write(text)
            Path(aside).chmod(0o644)
            Path(aside).replace(target)
        except BaseException:
            Path(aside).unlink(missing_ok=True)
            raise
    except OSError as error:
        raise UsageError(f"{target}: cannot be written, {error.strerror}") from error
