from __future__ import annotations

from dataclasses import replace

import pytest

from harvest.plan import make_quota_table
from harvest.rates import draw_rates
from harvest.record import demo_folder, read_record

DRAWS = 3000


def table_of(record, **settings):
    return make_quota_table(record, draw_rates(record, 7, DRAWS), **settings)


@pytest.fixture(scope="session")
def demos():
    return {name: read_record(demo_folder(name)) for name in ("deer", "lake", "geese")}


@pytest.fixture(scope="session")
def tables(demos):
    return {name: table_of(record) for name, record in demos.items()}


@pytest.fixture(scope="session")
def secretive(demos):
    """A record whose names and texts a spreadsheet would run, and some of which are private."""
    deer = demos["deer"]
    survey = replace(deer.surveys[0], name='=HYPERLINK("x")')
    return replace(
        deer,
        name="=1+1",
        species="@sum",
        place="SECRET-PLACE",
        surveys=(survey,),
        plan=(("author", "SECRET-AUTHOR"), ("purpose", "-2+3")),
        private=("plan.author", "place"),
    )
