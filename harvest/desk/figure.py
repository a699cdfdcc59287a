"""A picture on the page: title, chart, its one sentence, and behind a fold the same as a table and as files."""

from __future__ import annotations

from collections.abc import Callable

import streamlit as st

from harvest.charts.picture import Picture
from harvest.desk import show
from harvest.desk.names import file_name


def picture(drawn: Picture, unit: str, population: str, files: Callable[[], Picture] | None = None) -> None:
    """Show a picture.

    Parameters
    ----------
    drawn : Picture
    unit : str
        The record's, for the numbers of the table.
    population : str
        What the files are named after.
    files : callable
        Draws the picture for files, where that differs from the screen's (private texts left out).
    """
    from harvest.charts import files as write

    st.html(f'<h3 class="hv-picture">{show.escape(drawn.title)}</h3>')
    st.vega_lite_chart(drawn.chart.to_dict(validate=False), width="stretch", theme=None, key=f"chart {drawn.name}")
    show.say(drawn.sentence)
    outward = files or (lambda: drawn)
    stem = file_name(population, drawn.name)
    with st.expander(f"{drawn.name.replace('-', ' ').capitalize()}: as a table and as files"):
        headings, kinds = zip(*drawn.columns, strict=True)
        rows = drawn.table.astype(object).itertuples(index=False)
        show.typed_table(headings, kinds, rows, unit, drawn.title)
        with st.container(horizontal=True):
            for label, ending, kind, data in (
                ("Picture (SVG)", "svg", "image/svg+xml", lambda: write.svg(outward())),
                ("Picture (PNG)", "png", "image/png", lambda: write.png(outward())),
                ("Data (CSV)", "csv", "text/csv", lambda: write.csv(outward())),
            ):
                st.download_button(
                    label,
                    data=data,
                    file_name=f"{stem}.{ending}",
                    mime=kind,
                    key=f"save {drawn.name} {ending}",
                    on_click="ignore",
                )
