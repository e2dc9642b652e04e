"""The emergency cards of each refrigerant of the example, on paper: a card that spills is torn off the door."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

from commission.description import load_plant
from commission.manual.book import Book
from commission.manual.gather import PlantData, SystemData
from commission.manual.rendering import environment, render_body
from commission.manual.safety_pages import emergency_page
from commission.quantities import Display

if TYPE_CHECKING:
    from playwright.sync_api import BrowserContext

TEMPLATES = Path(__file__).parents[2] / "site_templates"


def _cards(folder: Path) -> str:
    """The body of the page with a card for each system; no card needs a calculation."""
    loaded = load_plant(folder)
    display = Display("metric", loaded.barometric_pressure)
    systems = tuple(
        SystemData(i, i, s, None, None, None, {}, None, {}, display) for i, s in loaded.plant.systems.items()
    )
    book = Book()
    sheet = emergency_page(PlantData(loaded, display, systems))
    book.add(sheet)
    return str(render_body(environment(TEMPLATES, display), book, sheet))


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_each_card_is_one_sheet(
    paper: str, look: Callable[..., BrowserContext], site: Path, example_folder: Path
) -> None:
    """Five systems, four kinds of danger: each card alone prints on one sheet, and all together on five."""
    page = look().new_page()
    page.goto((site / "emergency-card.html").as_uri())
    page.evaluate("html => { document.querySelector('.card').parentNode.innerHTML = html; }", _cards(example_folder))
    cards = page.locator(".card").count()
    assert cards == len(load_plant(example_folder).plant.systems)
    assert page.pdf(format=paper).count(b"/Type /Page\n") == cards
    for shown in range(cards):
        page.evaluate(
            "shown => document.querySelectorAll('.card').forEach((e, i) => {"
            " e.style.display = i === shown ? '' : 'none'; })",
            shown,
        )
        assert page.pdf(format=paper).count(b"/Type /Page\n") == 1, (
            page.locator(".card-system").nth(shown).text_content()
        )
