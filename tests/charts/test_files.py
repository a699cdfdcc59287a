from __future__ import annotations

import csv as csv_reader
import io
import re
from xml.etree import ElementTree

import numpy as np
import pytest
from PIL import Image

from harvest.charts import files
from harvest.charts.palette import COLOURS
from harvest.errors import CAUTION
from tests.charts.conftest import DEMOS

SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture(params=DEMOS)
def case(request, cases):
    return cases[request.param]


def texts(root):
    return ["".join(t.itertext()) for t in root.iter(f"{SVG}text")]


def test_svg_is_whole(case):
    for picture in case.pictures().values():
        root = ElementTree.fromstring(files.svg(picture))
        assert (root.get("width"), root.get("height")) == (str(files.WIDTH), str(files.HEIGHT))
        assert root.find(f"{SVG}title").text == picture.title
        assert root.find(f"{SVG}desc").text == picture.description
        shown = texts(root)
        assert shown[0] == picture.title
        assert shown[-1] == CAUTION
        lines = " ".join(shown)
        assert all(word in lines for word in picture.sentence.split())


def test_only_the_palette_s_colours_are_used(case):
    for picture in case.pictures().values():
        text = files.svg(picture).decode()
        used = {c.upper() for c in re.findall(r"#[0-9a-fA-F]{6}\b", text)}
        assert used <= {c.upper() for c in COLOURS}
        assert len(used) >= 4


def test_labels_stay_inside_the_file(case):
    for picture in case.pictures().values():
        plot = next(c for c in ElementTree.fromstring(files.svg(picture)) if c.tag == f"{SVG}svg")
        assert float(plot.get("x")) + float(plot.get("width")) <= files.WIDTH
        assert float(plot.get("y")) + float(plot.get("height")) <= files.HEIGHT - 24


def test_png_has_its_size_and_its_caution(case):
    picture = case.pictures()["risk-against-quota"]
    image = Image.open(io.BytesIO(files.png(picture, scale=2, width=600, height=400)))
    assert image.size == (1200, 800)
    grey = np.asarray(image.convert("L"))
    assert grey[0, 0] > 250
    assert (grey[-48:-20] < 160).sum() > 500
    assert (grey[-16:] > 250).all()


def test_a_file_does_not_name_a_place_to_load_from(case):
    for picture in case.pictures().values():
        text = files.svg(picture).decode()
        assert set(re.findall(r"https?://[^\"' ]+", text)) == {"http://www.w3.org/2000/svg"}
        assert "xlink:href" not in text


def test_csv_holds_the_table_and_the_caution(case):
    for picture in case.pictures().values():
        rows = list(csv_reader.reader(io.StringIO(files.csv(picture).decode("utf-8"))))
        assert rows[0] == [*picture.table.columns, "caution"]
        assert len(rows) == len(picture.table) + 1
        assert all(row[-1] == CAUTION for row in rows[1:])


def test_the_same_picture_gives_the_same_file(case):
    picture = case.pictures()["yield-curve"]
    assert files.svg(picture) == files.svg(picture)
