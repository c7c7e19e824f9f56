"""Sizes by reading distance, measured in the browser by the typeface's own outlines, not by the page's script."""

from __future__ import annotations

from collections.abc import Callable
from math import hypot

import pytest
from playwright.sync_api import BrowserContext, Page

from tests.browser.conftest import CREW

pytestmark = pytest.mark.browser

TABLET, TV, PHONE = (1280, 800), (1920, 1080), (390, 844)
MM_PER_INCH = 25.4

# How high the figures of each text are in CSS pixels: the ink's own height at the size that is really drawn.
FIGURES = """(selector) => [...document.querySelectorAll(selector)].map((one) => {
  if (!one.getClientRects().length) return null;
  const pen = document.createElement('canvas').getContext('2d');
  pen.font = `800 100px ${getComputedStyle(one).fontFamily}`;
  const ink = pen.measureText('5').actualBoundingBoxAscent / 100;
  return ink * Number(one.getAttribute('font-size')) * one.getScreenCTM().d;
}).filter(Boolean)"""
HANDS, WEIGHT = ".plate-row .token", ".weight .big-text text"

Open = Callable[..., Page]


@pytest.fixture
def opened(context: BrowserContext, base_url: str) -> Open:
    """The crew's screen on a device of this size, told how far away it is read."""

    def open_it(size: tuple[int, int], distance: str, diagonal: str, path: str = CREW) -> Page:
        value = f"distance={distance}&diagonal={diagonal}&language=en&role="
        context.add_cookies([{"name": "screen", "value": value, "url": base_url}])
        page = context.new_page()
        page.set_viewport_size({"width": size[0], "height": size[1]})
        page.goto(path)
        page.evaluate("() => document.fonts.ready")
        page.locator("html[data-measured]").wait_for()
        return page

    return open_it


def per_mm(size: tuple[int, int], diagonal: str) -> float:
    return hypot(*size) / (float(diagonal) * MM_PER_INCH)


def figures(page: Page, selector: str, size: tuple[int, int], diagonal: str) -> list[float]:
    """Heights in millimetres on that screen."""
    heights: list[float] = page.evaluate(FIGURES, selector)
    return [height / per_mm(size, diagonal) for height in heights]


@pytest.mark.parametrize(
    ("size", "diagonal", "distance"),
    [
        (TV, "32", "4"),
        (TV, "32", "6"),
        (TV, "43", "6"),
        (TV, "55", "6"),
        (TABLET, "10.1", "2"),
        (TABLET, "12.9", "2"),
    ],
)
def test_weight_off_and_on_are_12_mm_high_for_each_metre(
    opened: Open, size: tuple[int, int], diagonal: str, distance: str
) -> None:
    page = opened(size, distance, diagonal)
    heights = figures(page, f"{HANDS}, {WEIGHT}", size, diagonal)
    assert len(heights) >= 2
    assert min(heights) >= 12 * int(distance) * 0.97
    assert page.locator("#sizes").get_attribute("data-short") == "false"


def test_screen_that_is_too_small_says_so_with_what_it_can(opened: Open) -> None:
    page = opened(TABLET, "6", "10.1")
    words = page.locator("#sizes").inner_text()
    least = min(figures(page, f"{HANDS}, {WEIGHT}", TABLET, "10.1"))
    assert words.startswith(f"Too small for 6 m: digits {int(least)} mm, not 72.")


@pytest.mark.parametrize("size", [TABLET, (1024, 768), TV, PHONE], ids=str)
@pytest.mark.parametrize("distance", ["2", "3", "6"])
def test_nothing_leaves_the_screen_at_any_distance(
    opened: Open, size: tuple[int, int], distance: str
) -> None:
    page = opened(size, distance, "10.1")
    outside = page.evaluate(
        """() => [...document.querySelectorAll('section.now *')].filter((one) => {
          const box = one.getBoundingClientRect();
          return box.width > 1 && box.height > 1 && !one.closest('svg') &&
            (box.right > innerWidth + 1 || box.bottom > innerHeight + 1 || box.left < -1 || box.top < -1);
        }).map((one) => one.className)"""
    )
    assert outside == []
    assert page.evaluate("() => document.documentElement.scrollHeight <= innerHeight")


def test_line_for_the_ruler_is_100_mm_on_the_stated_diagonal(opened: Open) -> None:
    for size, diagonal in ((TABLET, "10.1"), (TV, "43")):
        page = opened(size, "3", diagonal, "/platforms/1/screen")
        box = page.locator(".ruler").bounding_box()
        assert box is not None
        assert box["width"] / per_mm(size, diagonal) == pytest.approx(100, abs=0.5)


def test_sample_digit_is_as_high_as_the_distance_asks(opened: Open) -> None:
    page = opened(TV, "3", "43", "/platforms/1/screen")
    pixels = page.evaluate(
        "() => parseFloat(getComputedStyle(document.querySelector('.sample')).fontSize) * 0.668"
    )
    assert pixels / per_mm(TV, "43") == pytest.approx(36, abs=0.3)


def test_confirming_target_is_60_mm_where_the_screen_has_room(opened: Open) -> None:
    page = opened(TV, "3", "32")
    box = page.locator(".loaded-button").bounding_box()
    assert box is not None
    assert min(box["width"], box["height"]) / per_mm(TV, "32") >= 60
