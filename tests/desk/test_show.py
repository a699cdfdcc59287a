"""Text of a record never becomes markup on the screen."""

from __future__ import annotations

import re
from html.parser import HTMLParser

import pytest
from hypothesis import given
from hypothesis import strategies as st

from harvest.desk import show
from harvest.desk.marks import Marks
from harvest.errors import CAUTION, Problem

HOSTILE = [
    "<script>alert(1)</script>",
    '"><img src=x onerror=alert(1)>',
    "</p></table></div><h1>x",
    "**b** _i_ `c` ~~d~~",
    ":red[x] :material/home: :smile:",
    "$x^2$ and $$y$$",
    "[a](http://b.c) <http://b.c> ![i](x)",
    "# head\n- list\n1. one\n> quote",
    "&lt;b&gt; &#60; &amp;",
    "a\nb\r\n\n\tc",
    "\\*not escaped\\*",
    "{{x}} %s {0}",
]


class Seen(HTMLParser):
    """The tags and the text that a browser makes of a piece of HTML."""

    def __init__(self, html: str):
        super().__init__()
        self.tags: list[str] = []
        self.attributes: list[tuple[str, str | None]] = []
        self.text: list[str] = []
        self.feed(html)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        self.attributes += attrs

    def handle_data(self, data: str) -> None:
        self.text.append(data)


@pytest.fixture
def screen(monkeypatch: pytest.MonkeyPatch) -> list[str]:
    shown: list[str] = []
    monkeypatch.setattr(show.st, "html", lambda body: shown.append(str(body)))
    return shown


@pytest.mark.parametrize("text", HOSTILE)
def test_words_stay_words(screen: list[str], text: str) -> None:
    for tell in (show.kicker, show.title, show.head, show.say, show.note):
        tell(text)
    for html, tag in zip(screen, ("p", "h1", "h2", "p", "p"), strict=True):
        seen = Seen(html)
        assert seen.tags == [tag]
        assert "".join(seen.text) == text


@pytest.mark.parametrize("text", HOSTILE)
def test_a_table_of_hostile_texts(screen: list[str], text: str) -> None:
    show.table((text, "b"), [(text, "1"), ("2", text)], left=(0,), caption=text)
    seen = Seen(screen[0])
    assert seen.tags == ["div", "table", "caption", "thead", "tr", "th", "th", "tbody", *["tr", "td", "td"] * 2]
    assert "".join(seen.text) == text + text + "b" + text + "1" + "2" + text
    assert ("aria-label", text) in seen.attributes
    assert {name for name, _ in seen.attributes} == {"class", "tabindex", "role", "aria-label", "scope"}


@pytest.mark.parametrize("text", HOSTILE)
def test_figures_and_problems_of_hostile_texts(screen: list[str], text: str) -> None:
    show.figures([(text, text, text)])
    show.problem(Problem("error", text, text, text, text, text))
    cards, problem = map(Seen, screen)
    assert cards.tags == ["div", "dl", "dt", "dd", "dd"]
    assert cards.text == [text] * 3
    assert problem.tags == ["p", "b"]
    assert "".join(problem.text) == f"Mend {text}: found {text}; {text}. {text}"


@pytest.mark.parametrize("text", HOSTILE)
def test_a_label_has_every_mark_escaped(text: str) -> None:
    label = show.literal(text)
    assert "\n" not in label
    bare = re.sub(r"\\[!-/:-@\[-`{-~]", "", label)
    assert not set("\\`*_{}[]<>#$~|!&@^=") & set(bare)
    assert not re.search(r":\S|-[->]", bare.replace(":\u2060", ""))


@given(st.text())
def test_a_label_reads_as_the_text_on_one_line(text: str) -> None:
    read = re.sub(r"\\([!-/:-@\[-`{-~])", r"\1", show.literal(text))
    assert read.replace("\u2060", "") == " ".join(text.split()).replace("\u2060", "")


@pytest.mark.parametrize(
    ("text", "label"),
    [
        ("a **b**\nc", r"a \*\*b\*\* c"),
        (":red[x]", ":\u2060red\\[x\\]"),
        ("$x$", r"\$x\$"),
        ("<b>", r"\<b\>"),
        ("[a](http://b)", "\\[a\\](http:\u2060//b)"),
        ("1. one", r"1\. one"),
        ("12) one", r"12\) one"),
        ("- one", r"\- one"),
        ("a --> b", "a -\u2060-\u2060\\> b"),
        ("Herd 2, east (old): 5", "Herd 2, east (old): 5"),
    ],
)
def test_a_label_exactly(text: str, label: str) -> None:
    assert show.literal(text) == label


def test_where_a_problem_is(screen: list[str]) -> None:
    problem = Problem("warning", "history.csv", "row 3", "5", "a rule", "A cure.")
    show.problem(problem)
    show.problem(problem, "")
    show.problem(Problem("error", "record.toml", "", "5", "a rule", "A cure."))
    assert ["".join(Seen(html).text) for html in screen] == [
        "Check row 3: found 5; a rule. A cure.",
        "Check found 5; a rule. A cure.",
        "Mend record.toml: found 5; a rule. A cure.",
    ]


def test_the_caution_ends_a_page(screen: list[str]) -> None:
    show.caution()
    assert "".join(Seen(screen[0]).text) == CAUTION


def test_numbers_of_a_table_are_in_the_readers_marks(screen: list[str], monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(show, "marks", lambda: Marks(",", "."))
    show.typed_table(
        ("Step", "Value", "Year", "Risk"),
        ("text", "amount", "year", "probability"),
        [("1,5 of 2.5", 1234.0, 2031.0, 0.0625), ("x", "50% of 1.5", 2032.0, None)],
        "animals",
    )
    assert Seen(screen[0]).text[4:] == ["1,5 of 2.5", "1.234", "2031", "6,2%", "x", "50% of 1.5", "2032", "and above"]
    show.spread_table(("", "median"), [["Growth, 1.5", "0.25"]])
    assert Seen(screen[1]).text[1:] == ["Growth, 1.5", "0,25"]


def test_words_stand_to_the_left(screen: list[str]) -> None:
    show.table(("a", "b"), [("x", "1")], left=(0,))
    assert screen[0].count('class="hv-left"') == 2
    assert 'aria-label="a, b"' in screen[0]
