"""What double precision says, as text: one row a number, then what a reader has to be warned of."""

from __future__ import annotations

from typing import TYPE_CHECKING

from verify.report.layout import heading, table, wrapped

if TYPE_CHECKING:
    from verify.comparison.compare import Comparison


def comparison_text(comparison: Comparison) -> str:
    """Return the fourth section of a report."""
    opinions = comparison.opinions
    lines = [heading(4, "Compared with double precision"), table(_opinion_rows(comparison))]
    lines.append("  (expectation: what the route makes of the side condition of this test)")
    remarks = [(opinion.route, opinion.failure or opinion.note) for opinion in opinions]
    lines += [wrapped(text, first=f"  {route}: ", rest="    ") for route, text in remarks if text]
    lines.append(wrapped(_engine_line(comparison), first="  mpmath: ", rest="    "))
    if comparison.condition is not None:
        lines.append(
            f"  A relative error e in a tail moves these numbers by up to {comparison.condition:.2g} e."
        )
    if comparison.flags:
        lines += [
            wrapped(f"{flag.kind}: {flag.text}", first="  ! ", rest="    ") for flag in comparison.flags
        ]
        return "\n".join(lines)
    trusted = [
        opinion.route for opinion in opinions if any(value is not None for value in opinion.numbers.values())
    ]
    if trusted:
        lines.append(f"  No flag: here double precision ({', '.join(trusted)}) is right to the digits shown.")
    return "\n".join(lines)


def _engine_line(comparison: Comparison) -> str:
    """Say how far mpmath, at full precision, reproduces the proven numbers."""
    engine = comparison.mpmath
    if not engine.digits:
        return engine.note
    found = ", ".join(f"{digits} of {name}" for name, digits in engine.digits.items())
    return f"the same formulas in another engine reproduce {found} (digits of those asked for; checked, not proved)"


def _opinion_rows(comparison: Comparison) -> list[list[str]]:
    """One row a number: what each route says, and how many of its digits are right."""
    names = list(dict.fromkeys(name for opinion in comparison.opinions for name in opinion.numbers))
    rows = [["", *(cell for opinion in comparison.opinions for cell in (opinion.route, "right digits"))]]
    for name in names:
        row = [name]
        for opinion in comparison.opinions:
            value, digits = opinion.numbers.get(name), opinion.digits.get(name)
            row += ["none" if value is None else value, "" if digits is None else str(digits)]
        rows.append(row)
    return rows
