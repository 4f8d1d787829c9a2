"""The two figures of a page, drawn with Matplotlib as SVG without a clock, a network or a style of the user's."""

from __future__ import annotations

import io
import re
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from verify.report.figure_data import LawsFigure, PowerFigure

WIDTH, HEIGHT = 6.3, 3.1
INK, GREY, PALE = "#111111", "#6b6b6b", "#e3e3e3"
STYLE: dict[str, Any] = {
    "svg.hashsalt": "sidecheck",
    "svg.fonttype": "path",
    "font.family": "DejaVu Serif",
    "font.size": 8.5,
    "axes.linewidth": 0.7,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.edgecolor": INK,
    "xtick.major.width": 0.7,
    "ytick.major.width": 0.7,
    "legend.frameon": False,
    "hatch.linewidth": 0.4,
}
LEGEND: dict[str, Any] = {"loc": "lower center", "bbox_to_anchor": (0.5, 1.0), "ncols": 4, "handlelength": 3.2}
MARGINS = {"left": 0.1, "right": 0.985, "top": 0.9, "bottom": 0.135}
LINES: tuple[dict[str, Any], ...] = (
    {"linestyle": "-", "marker": "o", "color": INK, "markerfacecolor": INK},
    {"linestyle": (0, (4, 2)), "marker": "o", "color": GREY, "markerfacecolor": "white"},
)


def draw_laws(data: LawsFigure, symbol: str, prefix: str) -> str:
    """Draw the critical function above, the laws at the limits below, over the same axis of V.

    Parameters
    ----------
    data : LawsFigure
        The numbers.
    symbol : str
        How the parameter is written.
    prefix : str
        In front of every id, so that two figures can stand on one page.

    Returns
    -------
    str
        An ``<svg>`` element without ids that clash and without references to anything outside.
    """

    def paint(figure: Any) -> None:
        top, bottom = figure.subplots(2, 1, sharex=True, gridspec_kw={"height_ratios": [1, 2.4], "hspace": 0.2})
        _critical(top, data)
        marks = data.lattice and len(data.x) <= 90
        for law, style in zip(data.laws, LINES, strict=False):
            label = f"at {symbol} = {law.label}"
            shown = style if marks else {**style, "marker": ""}
            bottom.plot(law.x, law.y, label=label, linewidth=0.9, markersize=2.6, markeredgewidth=0.7, **shown)
        bottom.set_ylabel("mass" if data.lattice else "density")
        bottom.set_xlabel("V", style="italic")
        bottom.set_ylim(bottom=0, top=ceiling(data))
        top.legend(*bottom.get_legend_handles_labels(), **LEGEND)
        for axes in (top, bottom):
            _shade(axes, data)

    return _svg(paint, prefix)


def ceiling(data: LawsFigure) -> float | None:
    """Where a density that rises without bound at an end of its support is cut off; None when it does not."""
    if data.lattice:
        return None
    edge = len(data.x) // 25
    inner = max(max(law.y[edge:-edge]) for law in data.laws)
    outer = max(max(*law.y[:2], *law.y[-2:]) for law in data.laws)
    highest = max(max(law.y) for law in data.laws)
    return 1.6 * inner if outer == highest > 2.5 * inner else None


def _critical(axes: Any, data: LawsFigure) -> None:
    if data.lattice and len(data.x) <= 90:
        axes.vlines(data.x, 0, data.phi, color=INK, linewidth=1.0)
        axes.plot(data.x, data.phi, "o", color=INK, markersize=2.2)
    else:
        axes.plot(data.x, data.phi, color=INK, linewidth=1.0, drawstyle="steps-mid")
    axes.set_ylim(-0.06, 1.12)
    axes.set_yticks([0, 1])
    axes.set_ylabel("φ(V)", style="italic")


def _shade(axes: Any, data: LawsFigure) -> None:
    """Lay a pale ground under the region of rejection."""
    axes.margins(x=0.015)
    rejected = [value > 0 for value in data.phi]
    start = None
    for place, inside in enumerate([*rejected, False]):
        if inside and start is None:
            start = place
        if not inside and start is not None:
            half = (data.x[1] - data.x[0]) / 2 if data.lattice else 0.0
            axes.axvspan(data.x[start] - half, data.x[place - 1] + half, color=PALE, zorder=0, linewidth=0)
            start = None


def draw_power(data: PowerFigure, symbol: str, prefix: str) -> str:
    """Draw the power function with the level and the limits marked, and the null shaded."""

    def paint(figure: Any) -> None:
        axes = figure.subplots()
        axes.plot(data.t, data.power, color=INK, linewidth=1.2, label="power")
        for place, level in enumerate(sorted(set(data.levels))):
            axes.axhline(level, color=INK, linewidth=0.8, linestyle=(0, (1, 1.6)), label=None if place else "level")
        for place, limit in enumerate(data.limits):
            axes.axvline(limit, color=GREY, linewidth=0.8, linestyle=(0, (4, 2)), label=None if place else "limit")
        for place, (low, high) in enumerate(data.null):
            if high > low:
                axes.axvspan(low, high, color=PALE, zorder=0, linewidth=0, label=None if place else "null")
        axes.set_ylim(0, max(1.02 * max(data.power), 1.6 * max(data.levels)))
        axes.margins(x=0)
        axes.set_xlabel(symbol)
        axes.set_ylabel("probability of rejection")
        axes.legend(**LEGEND)

    return _svg(paint, prefix)


def _svg(paint: Any, prefix: str) -> str:
    import matplotlib
    from matplotlib.backends.backend_svg import FigureCanvasSVG
    from matplotlib.figure import Figure

    with matplotlib.rc_context():
        matplotlib.rcdefaults()
        settings: Any = matplotlib.rcParams
        settings.update(STYLE)
        figure = Figure(figsize=(WIDTH, HEIGHT))
        figure.subplots_adjust(**MARGINS)
        FigureCanvasSVG(figure)
        paint(figure)
        stream = io.StringIO()
        figure.savefig(stream, format="svg", metadata={"Date": None, "Creator": None})
    return tidy_svg(stream.getvalue(), prefix)


def tidy_svg(text: str, prefix: str) -> str:
    """Return the ``<svg>`` element alone: no prologue, no metadata, every id behind a prefix.

    Examples
    --------
    >>> tidy_svg('<?xml version="1.0"?><svg xmlns:xlink="y"><g id="a"/><use xlink:href="#a"/></svg>', "f-")
    '<svg><g id="f-a"/><use href="#f-a"/></svg>'
    """
    text = text[text.index("<svg") :].strip()
    text = re.sub(r"\s*<metadata>.*?</metadata>", "", text, flags=re.DOTALL)
    text = re.sub(r"\s*<!--.*?-->", "", text, flags=re.DOTALL)
    text = re.sub(r'\s+xmlns:[a-z]+="[^"]*"', "", text)
    text = re.sub(r'\bid="', f'id="{prefix}', text)
    text = re.sub(r'(?:xlink:)?href="#', f'href="#{prefix}', text)
    return re.sub(r"url\(#", f"url(#{prefix}", text)
