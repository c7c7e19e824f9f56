"""The pages that are read or printed can be used by everybody: axe finds nothing, and what must be read stands out."""

from __future__ import annotations

import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import BrowserContext, Page

from tests.browser.conftest import CREW

pytestmark = pytest.mark.browser

PAGES = tuple(
    f"/platforms/{platform}/{name}"
    for platform, names in {
        1: ("check", "announcer", "screen", "join", "missing", "checklist", "chart/1", "cards/1/1/2"),
        2: ("check", "announcer"),
    }.items()
    for name in names
)
WALLS = (CREW, "/platforms/1/check", "/platforms/1/announcer")

# The contrast ratio of every text that is seen, against what is painted behind it (WCAG 2.2, relative luminance).
CONTRAST = """() => {
  const numbers = (colour) => (colour.match(/[\\d.]+/g) || []).map(Number);
  const light = ([r, g, b]) => [r, g, b].map((one) => one / 255)
    .map((one) => one <= 0.04045 ? one / 12.92 : ((one + 0.055) / 1.055) ** 2.4)
    .reduce((sum, one, at) => sum + one * [0.2126, 0.7152, 0.0722][at], 0);
  const behind = (one) => {
    for (let at = one; at; at = at.parentElement) {
      const colour = numbers(getComputedStyle(at).backgroundColor);
      if (colour.length === 3 || colour[3] > 0.99) return colour;
    }
    return [255, 255, 255];
  };
  const found = [];
  for (const one of document.querySelectorAll('.now *, .stale')) {
    const says = [...one.childNodes].some((node) => node.nodeType === 3 && node.textContent.trim());
    if (!says || !one.getClientRects().length || one.closest('.heard') || one.closest('.label')) continue;
    const style = getComputedStyle(one);
    const ink = numbers(one.closest('svg') ? style.fill : style.color);
    const [a, b] = [light(ink), light(behind(one))].sort((x, y) => y - x);
    found.push([Math.round((a + 0.05) / (b + 0.05) * 10) / 10, one.textContent.trim().slice(0, 30)]);
  }
  return found;
}"""


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("path", PAGES)
def test_axe_finds_nothing(page: Page, base_url: str, path: str, scheme: str) -> None:
    page.emulate_media(color_scheme=scheme)  # type: ignore[arg-type]
    page.goto(path)
    results = Axe().run(page)
    assert results.violations_count == 0, results.generate_report()


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("role", ["", "alone", "rack"])
def test_screens_of_one_role_have_nothing_for_axe_either(
    context: BrowserContext, page: Page, base_url: str, role: str, scheme: str
) -> None:
    value = f"distance=3&diagonal=10.1&language=de&role={role}"
    context.add_cookies([{"name": "screen", "value": value, "url": base_url}])
    page.emulate_media(color_scheme=scheme)  # type: ignore[arg-type]
    page.goto(CREW)
    results = Axe().run(page)
    assert results.violations_count == 0, results.generate_report()


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("path", WALLS)
def test_everything_that_is_read_has_a_contrast_of_at_least_7(
    page: Page, base_url: str, path: str, scheme: str
) -> None:
    page.emulate_media(color_scheme=scheme)  # type: ignore[arg-type]
    page.goto(path)
    found = page.evaluate(CONTRAST)
    assert len(found) > 8
    assert [one for one in found if one[0] < 7] == []
