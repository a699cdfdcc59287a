"""Keys alone, from the welcome to the Word file; where one stands is always seen."""

from __future__ import annotations

import pytest

from tests.browser.desk import kept

#: What is told about the element that has the focus: its name, and whether it is drawn otherwise than without focus.
FOCUS = """() => {
  const e = document.activeElement;
  if (e === document.body) return { name: '', visible: true };
  const name = (e.getAttribute('aria-label') || e.innerText || '').trim().split('\\n').at(-1);
  const looks = node => { const s = getComputedStyle(node); return [s.outlineStyle !== 'none' && s.outlineWidth,
    s.boxShadow, s.borderColor, s.backgroundColor, s.color, s.textDecorationLine].join('|'); };
  const around = [e, e.parentElement, e.parentElement?.parentElement, e.previousElementSibling].filter(Boolean);
  const seen = around.map(looks);
  e.blur();
  const plain = around.map(looks);
  e.focus();
  return { name, visible: seen.some((look, i) => look !== plain[i]) };
}"""
MOST = 60


@pytest.fixture
def stations():
    """Every element that was stood on, with whether that was seen."""
    return []


def tab_to(desk, name, stations):
    """Press Tab until one stands on what has this name."""
    for _ in range(MOST):
        desk.page.keyboard.press("Tab")
        found = desk.page.evaluate(FOCUS)
        stations.append((found["name"], found["visible"]))
        if found["name"].startswith(name):
            return
    pytest.fail(f"{name!r} cannot be reached with Tab: {stations}")


def test_from_the_welcome_to_the_word_file(window, tmp_path, stations):
    desk = window(reduced_motion="reduce")
    keys = desk.page.keyboard
    desk.open()
    tab_to(desk, "Ostrel Ridge red deer", stations)
    desk.after(lambda: keys.press("Enter"))
    assert desk.title == "Take at most 234 red deer a year"
    tab_to(desk, "See the risk and move the quota", stations)
    desk.after(lambda: keys.press("Enter"))
    tab_to(desk, "Legal quota to try", stations)
    desk.after(lambda: keys.press("ArrowRight"))
    assert "With 236 red deer a year" in desk.text
    desk.after(lambda: keys.press("Home"))
    assert "With 0 red deer a year" in desk.text
    for _ in range(MOST):
        keys.press("Shift+Tab")
        if desk.page.evaluate(FOCUS)["name"].startswith("Quota table"):
            break
    desk.after(lambda: keys.press("Enter"))
    assert desk.main.get_by_role("heading", name="Lookup card").is_visible()
    tab_to(desk, "Word document", stations)
    with desk.page.expect_download() as waited:
        keys.press("Enter")
    assert kept(waited.value, tmp_path).read_bytes().startswith(b"PK")
    assert [name for name, visible in stations if not visible] == []
