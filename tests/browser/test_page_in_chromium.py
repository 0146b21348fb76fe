"""The HTML record in a real browser: quiet, nothing fetched, mathematics drawn, links that lead."""

from collections.abc import Iterator
from pathlib import Path

import pytest

from tests.helpers.chromium import Tab, browser, installed
from tests.helpers.pages import DEMOS, page

pytestmark = [
    pytest.mark.slow,
    pytest.mark.timeout(120),
    pytest.mark.skipif(installed() is None, reason="Chromium (Debian package chromium) is missing"),
]


@pytest.fixture(scope="module")
def tab() -> Iterator[Tab]:
    with browser() as one:
        yield one


WORKED = (*DEMOS, "long-formulas")


@pytest.fixture(scope="module", params=[*WORKED, "only-tests"])
def path(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Path:
    file = tmp_path_factory.mktemp("page") / f"{request.param}.html"
    file.write_text(page(request.param), encoding="utf-8")
    return file


def test_page_is_quiet_and_asks_for_nothing(tab: Tab, path: Path) -> None:
    """No message in the console, no request but for the page itself and what it embeds."""
    tab.open(path)
    assert tab.value("document.readyState") == "complete"
    for method in ("Runtime.consoleAPICalled", "Runtime.exceptionThrown", "Log.entryAdded"):
        assert tab.of(method) == []
    asked = {each["request"]["url"] for each in tab.of("Network.requestWillBeSent")}
    assert {each for each in asked if not each.startswith("data:font/")} == {path.as_uri()}


@pytest.mark.parametrize("path", WORKED, indirect=True)
def test_mathematics_is_drawn(tab: Tab, path: Path) -> None:
    """A fraction is a box taller than a line, over lies above under, a symbol is italic."""
    tab.open(path)
    heights = tab.value(
        "[...document.querySelectorAll('mfrac')].map(f => [f.getBoundingClientRect().height,"
        " f.children[0].getBoundingClientRect().bottom, f.children[1].getBoundingClientRect().top,"
        " parseFloat(getComputedStyle(f).fontSize)])"
    )
    assert heights
    for height, over, under, size in heights:
        assert height > 1.3 * size
        assert over <= under + 1
    style = "getComputedStyle(document.querySelector('math .i')).fontStyle"
    assert tab.value(style) == "italic"
    assert tab.value("document.fonts.check('16px \"calcdoc serif\"')") is True


@pytest.mark.parametrize("path", WORKED, indirect=True)
@pytest.mark.parametrize("scripts", [True, False])
def test_symbol_in_a_formula_leads_to_its_line(tab: Tab, path: Path, *, scripts: bool) -> None:
    """A press on a symbol of a formula goes to the line that defines it, with or without script."""
    tab.ask("Emulation.setScriptExecutionDisabled", value=not scripts)
    tab.open(path)
    at = tab.value(
        "(() => { const a = [...document.querySelectorAll('.work math a')].find("
        "a => a.closest('.wl').id != a.hash.slice(1)); a.scrollIntoView({block: 'center'});"
        " const r = a.getBoundingClientRect();"
        " return [r.x + r.width/2, r.y + r.height/2, decodeURIComponent(a.hash)]; })()"
    )
    x, y, target = at
    tab.click(x, y)
    assert tab.value("decodeURIComponent(location.hash)") == target
    assert tab.value("document.querySelector(':target') !== null") is True
    top = tab.value("document.querySelector(':target').getBoundingClientRect().top")
    assert -1 <= top < 800
    tab.ask("Emulation.setScriptExecutionDisabled", value=False)


def test_narrow_screen_needs_no_sideways_scrolling(tab: Tab, path: Path) -> None:
    """At 320 px the page is no wider than the screen (WCAG 2.x 1.4.10)."""
    tab.open(path, width=320)
    assert tab.value("document.documentElement.scrollWidth") <= 320
    wide = tab.value(
        "[...document.querySelectorAll('main *')].filter(e => e.getBoundingClientRect().right > 321"
        " && !e.closest('.work, .eq, .pic, pre, .grid, caption'))"
        ".map(e => e.outerHTML.slice(0, 90))"
    )
    assert wide == []


def test_page_reads_the_same_without_script(tab: Tab, path: Path) -> None:
    """Nothing on the page waits for a script."""
    tab.open(path)
    words = tab.value("document.body.innerText")
    tab.ask("Emulation.setScriptExecutionDisabled", value=True)
    tab.open(path)
    assert tab.value("document.body.innerText") == words
    assert "end of record" in words
    tab.ask("Emulation.setScriptExecutionDisabled", value=False)
