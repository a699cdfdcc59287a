"""Colours, fonts and the look of every chart: one colour, one meaning, on screen and in files."""

from __future__ import annotations

from typing import Any

ABUNDANCE = "#1B6B72"
TAKE = "#94600B"
RISK = "#7A2E5D"
CEILING = "#4A5B8C"
INK = "#22292D"
REFERENCE = "#5C656A"
PAPER = "#FCFBF8"
RULE = "#D9D4C7"
GRID = "#ECE8DD"
COLOURS = frozenset({ABUNDANCE, TAKE, RISK, CEILING, INK, REFERENCE, PAPER, RULE, GRID})

#: Opacity of the 90% and of the 50% band; the second lies on the first.
LIGHT, DARK = 0.16, 0.26
#: Dashes as pixels on and off; None is a full line.
Dash = tuple[float, float] | None
DASHED, DOTTED, LONG = (6.0, 4.0), (1.5, 3.0), (10.0, 4.0)

#: Names that begin a word with a digit would have to be quoted, and make a browser drop the whole list.
SCREEN_FONT = "Source Sans, Source Sans Pro, Segoe UI, Helvetica, Arial, sans-serif"
#: Liberation Sans is built into vl-convert and as wide as Arial and Helvetica, so a file looks the same elsewhere.
FILE_FONT = "Liberation Sans, Arial, Helvetica, sans-serif"
FONT_SIZE = 12


def look(font: str = SCREEN_FONT) -> dict[str, Any]:
    """The Vega-Lite configuration of every chart."""
    axis = {
        "domainColor": RULE,
        "tickColor": RULE,
        "gridColor": GRID,
        "labelColor": REFERENCE,
        "titleColor": INK,
        "labelFontSize": FONT_SIZE,
        "titleFontSize": FONT_SIZE,
        "titleFontWeight": "normal",
        "labelPadding": 6,
        "titlePadding": 10,
    }
    return {
        "background": PAPER,
        "font": font,
        "view": {"stroke": None},
        "axis": axis,
        "axisX": {"grid": False},
        "axisY": {"grid": True, "domain": False, "ticks": False},
        "line": {"strokeWidth": 2.2},
        "rule": {"strokeWidth": 1.3},
        "text": {"fontSize": FONT_SIZE, "color": INK},
    }
