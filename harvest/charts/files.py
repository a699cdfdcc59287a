"""Pictures as files: SVG and PNG of a fixed size with title, sentence and caution line, and their data as CSV.

Everything is made in this process by vl-convert: no network and no browser.
"""

from __future__ import annotations

import re
import textwrap
from typing import Any
from xml.etree import ElementTree

import vl_convert

from harvest.charts.palette import FILE_FONT, INK, PAPER, REFERENCE, look
from harvest.charts.picture import Picture
from harvest.errors import CAUTION
from harvest.plan.csv_files import csv_bytes

WIDTH, HEIGHT = 760, 500
_VEGA_LITE = "6.4"
_EDGE, _LINE, _SENTENCE_SIZE, _LETTERS = 20, 16, 12, 122
_SVG = "http://www.w3.org/2000/svg"


def svg(picture: Picture, width: int = WIDTH, height: int = HEIGHT, *, bare: bool = False) -> bytes:
    """The picture as SVG, UTF-8: title and sentence above, caution line below.

    Parameters
    ----------
    width, height : int
        Pixels; the plot gets what the texts leave, so a long sentence wants a higher picture.
    bare : bool
        The plot alone, for a document that has these texts around it.
    """
    ElementTree.register_namespace("", _SVG)
    root = ElementTree.Element(
        f"{{{_SVG}}}svg",
        {"width": str(width), "height": str(height), "viewBox": f"0 0 {width} {height}", "role": "img"},
    )
    ElementTree.SubElement(root, f"{{{_SVG}}}title").text = picture.title
    ElementTree.SubElement(root, f"{{{_SVG}}}desc").text = picture.description
    ElementTree.SubElement(root, f"{{{_SVG}}}rect", {"width": "100%", "height": "100%", "fill": PAPER})
    if bare:
        root.append(ElementTree.fromstring(_plot(picture, width, height)))
        return ElementTree.tostring(root, encoding="utf-8", xml_declaration=True)
    letters = max(20, int(_LETTERS * (width - 2 * _EDGE) / (WIDTH - 2 * _EDGE)))
    _text(root, picture.title, _EDGE, 32, INK, 16, bold=True)
    lines = textwrap.wrap(picture.sentence, letters, break_long_words=True)
    top = 36
    for line in lines:
        top += _LINE
        _text(root, line, _EDGE, top, REFERENCE, _SENTENCE_SIZE)
    top += 10
    inside = ElementTree.fromstring(_plot(picture, width - 2 * _EDGE + 10, height - top - 30))
    inside.set("x", str(_EDGE - 6))
    inside.set("y", str(top))
    root.append(inside)
    _text(root, CAUTION, _EDGE, height - 14, REFERENCE, 10)
    return ElementTree.tostring(root, encoding="utf-8", xml_declaration=True)


def png(picture: Picture, scale: float = 2.0, width: int = WIDTH, height: int = HEIGHT, *, bare: bool = False) -> bytes:
    """The same as PNG, ``scale`` × ``width`` by ``scale`` × ``height`` pixels."""
    return vl_convert.svg_to_png(svg(picture, width, height, bare=bare).decode("utf-8"), scale=scale)


def csv(picture: Picture) -> bytes:
    """The data behind the picture as CSV with a last column ``caution``; probabilities 0..1."""
    return csv_bytes(picture.table)


def spec(picture: Picture, width: int, height: int) -> dict[str, Any]:
    """The chart as Vega-Lite of a fixed size in pixels, in the fonts of files."""
    made = picture.chart.to_dict()
    return made | {"width": width, "height": height, "config": look(FILE_FONT)}


def _plot(picture: Picture, width: int, height: int) -> str:
    """The chart alone as SVG; its clips are numbered anew, as vl-convert counts on from chart to chart."""
    drawn = vl_convert.vegalite_to_svg(spec(picture, width, height), vl_version=_VEGA_LITE)
    numbers: dict[str, int] = {}
    return re.sub(
        r'(id="|"url\(#)clip(\d+)', lambda m: f"{m[1]}{picture.name}-{numbers.setdefault(m[2], len(numbers))}", drawn
    )


def _text(
    parent: ElementTree.Element, text: str, x: int, y: int, colour: str, size: int, *, bold: bool = False
) -> None:
    style = {"x": str(x), "y": str(y), "fill": colour, "font-size": f"{size}px", "font-family": FILE_FONT}
    ElementTree.SubElement(parent, f"{{{_SVG}}}text", style | ({"font-weight": "bold"} if bold else {})).text = text
