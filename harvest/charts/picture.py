"""A picture: a chart with its title, what it says for this record, its data as a table and its words for the blind."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import altair as alt
import pandas as pd

from harvest.charts.marks import Layer
from harvest.charts.palette import PAPER, look
from harvest.charts.phrases import plain

#: Height of a chart on the screen, in pixels; its width is its container's.
HEIGHT = 340


@dataclass(frozen=True)
class Picture:
    """A chart and all that goes with it.

    Attributes
    ----------
    name : str
        Stem of its files' names.
    title : str
        What is seen. It is not part of the chart, so that it can wrap on a narrow screen.
    sentence : str
        What it says for this record: numbers, units, uncertainty.
    chart : LayerChart
        As wide as its container; :mod:`harvest.charts.files` gives it a fixed size. Show it with its own look
        (``theme=None`` in Streamlit).
    table : DataFrame
        The data behind the chart, not rounded.
    columns : tuple of (str, str)
        Heading and kind of each column of ``table``; kinds as in :class:`harvest.plan.layout.Part`.
    description : str
        The chart in words, for those who do not see it; the chart carries it too.
    """

    name: str
    title: str
    sentence: str
    chart: alt.LayerChart
    table: pd.DataFrame
    columns: tuple[tuple[str, str], ...]
    description: str


def assemble(
    name: str,
    title: str,
    sentence: str,
    layers: Sequence[Layer],
    columns: Sequence[tuple[str, str, Any]],
) -> Picture:
    """A picture of layers that share their axes.

    Parameters
    ----------
    layers : sequence of dict
        From back to front; see :mod:`harvest.charts.marks`.
    columns : sequence of (str, str, values)
        Heading, kind and values of each column of the table.
    """
    title, sentence = plain(title, 200), plain(sentence, 2000)
    description = f"{title}. {sentence} The data are in a table of their own."
    chart = alt.LayerChart(
        layer=[_unit(layer) for layer in layers],
        width="container",
        height=HEIGHT,
        background=PAPER,
        padding={"left": 4, "right": 8, "top": 6, "bottom": 6},
        autosize={"type": "fit", "contains": "padding"},
        description=description,
        config=look(),
    )
    return Picture(
        name=name,
        title=title,
        sentence=sentence,
        chart=chart,
        table=pd.DataFrame({heading: values for heading, _, values in columns}),
        columns=tuple((heading, kind) for heading, kind, _ in columns),
        description=description,
    )


def with_layers(picture: Picture, layers: Sequence[Layer]) -> Picture:
    """The picture with more layers on top; the picture itself stays as it is, and nothing of it is copied."""
    chart = picture.chart.copy(deep=False)
    chart.layer = [*chart.layer, *(_unit(layer) for layer in layers)]
    return replace(picture, chart=chart)


def _unit(layer: Layer) -> alt.Chart:
    data, encoding = alt.InlineData(**layer["data"]), alt.FacetedEncoding(**layer["encoding"])
    return alt.Chart(data=data, mark=layer["mark"], encoding=encoding)
