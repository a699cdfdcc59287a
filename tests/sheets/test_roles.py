"""The words of headers in several languages."""

from __future__ import annotations

import pytest

from harvest.sheets.roles import is_summary, plain_words, role_of


@pytest.mark.parametrize(
    ("name", "role"),
    [
        ("Year", "year"),
        ("Jagdjahr", "year"),
        ("Année", "year"),
        ("Año", "year"),
        ("År", "year"),
        ("Removals · females", "removals"),
        ("Total catch (t)", "removals"),
        ("Rehwildabschuss", "removals"),
        ("Prélèvement", "removals"),
        ("Capturas", "removals"),
        ("Avskjutning", "removals"),
        ("Fangst", "removals"),
        ("Estimated harvest", "removals"),
        ("Harvest season total", "removals"),
        ("Catch per effort", "count"),
        ("CPUE", "count"),
        ("Winterzählung", "count"),
        ("Comptage de printemps", "count"),
        ("Censo", "count"),
        ("Optælling", "count"),
        ("Taksering", "count"),
        ("CV of count", "cv"),
        ("Coef. de variación", "cv"),
        ("Variationskoeffizient", "cv"),
        ("S.E.", "standard error"),
        ("Standard error of the count", "standard error"),
        ("Erreur-type", "standard error"),
        ("Bemerkungen", "note"),
        ("Observaciones", "note"),
        ("Quota", "leave out"),
        ("Hunters", "leave out"),
        ("of which shot by guests", "leave out"),
        ("District", None),
        ("column C", None),
    ],
)
def test_a_header_tells_its_role(name: str, role: str | None) -> None:
    assert role_of(name) == role


def test_words_lose_case_accents_and_signs() -> None:
    assert plain_words("  Zählung_Süd (Nr. 2) ") == "zahlung sud nr 2"
    assert plain_words("Bemærkning på Øen") == "bemaerkning pa oen"


@pytest.mark.parametrize(
    ("text", "summary"),
    [("Total", True), ("TOTALE 2019", True), ("Ø", False), ("i alt", True), ("Summer count", False), ("Meaney", False)],
)
def test_a_total_is_known_by_its_first_word(text: str, summary: bool) -> None:
    assert is_summary(text) is summary
