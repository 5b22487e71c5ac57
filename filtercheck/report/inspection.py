"""What `inspect` shows, at 80 columns."""

from __future__ import annotations

from collections.abc import Iterator

from filtercheck.model.inspection import Budget, Inspection, Root
from filtercheck.quantities import rounded
from filtercheck.report import sentences
from filtercheck.wording import visible, wrapped

MOST = 6  # parts that are named

NOTE = (
    "Ranges are over all boards that the tolerances allow, as far as a search finds them. "
    "A sensitivity is the per cent by which f0 or Q changes for 1 % more of the part, about the "
    "board as fitted. The shares of a budget are those about the worst board: what the tolerance "
    "of each part alone takes of the margin, to first order."
)


def render(found: Inspection) -> str:
    """Return the text."""
    lines = wrapped(f"{found.name}: {visible(found.title)}" if found.title else found.name)
    lines += ["", "poles", *_roots(found.poles)]
    for output, zeros in found.zeros:
        lines += ["", f"zeros of {output}", *_roots(zeros)]
    lines += ["", "budgets", *(line for one in found.budgets for line in _budget(one))]
    if not found.budgets:
        lines.append("  none: not every board is stable, or nothing is required")
    lines += ["", *wrapped(NOTE), "", *wrapped(sentences.CAUTION)]
    return "\n".join(lines) + "\n"


def _roots(roots: tuple[Root, ...]) -> Iterator[str]:
    if not roots:
        yield "  none, but those at 0 and infinity"
    for root in roots:
        low, high = (rounded(end, "frequency") for end in root.freq_range_hz)
        text = f"f0 {rounded(root.freq_hz, 'frequency')} ({low} to {high}), "
        if root.q is None or root.q_range is None:
            yield from wrapped(f"{text}real", "  ")
        else:
            ends = " to ".join(rounded(end, "number") for end in root.q_range)
            yield from wrapped(f"{text}Q {rounded(root.q, 'number')} ({ends})", "  ")
        yield from _sensitive(root)


def _sensitive(root: Root) -> Iterator[str]:
    ranked = sorted(root.sensitivities, key=lambda one: (-abs(one[1]) - abs(one[2]), one[0]))
    shown = [one for one in ranked[:MOST] if abs(one[1]) + abs(one[2]) > 1e-6]
    named = (
        f"{name} {size:+.2f}" + ("" if root.q is None else f"/{q:+.2f}") for name, size, q in shown
    )
    if shown:
        what = "f0" if root.q is None else "f0/Q"
        yield from wrapped(f"sensitivity of {what} to {', '.join(named)}", "    ")


def _budget(one: Budget) -> Iterator[str]:
    nominal, worst = (rounded(m, one.quantity, digits=3) for m in (one.nominal, one.worst))
    yield from wrapped(
        f"{one.requirement}, {one.limit}: margin {nominal} as fitted, {worst} at worst", "  "
    )
    shares = [f"{name} {rounded(share, one.quantity, digits=2)}" for name, share in one.shares]
    if shares:
        rest = len(shares) - MOST
        more = f", {rest} more" if rest > 0 else ""
        yield from wrapped(f"taken by {', '.join(shares[:MOST])}{more}", "    ")
