"""Two manuals built once: the example with records, and a plant whose every text is hostile. And a browser."""

from __future__ import annotations

import os
import shutil
from collections.abc import Callable, Iterator
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Literal

import pytest

from commission.manual import BuildResult, build
from commission.manual.remembering import remembering
from tests.manual.plants import file_visits, write_hostile_plant

if TYPE_CHECKING:
    from playwright.sync_api import Browser, BrowserContext

    from commission.description import LoadedPlant
    from commission.prediction import SystemModel


@pytest.fixture(scope="session", autouse=True)
def _one_fit_for_each_description() -> Iterator[None]:
    """Fitting is slow and gives the same each time: the tests fit each description once, and remember predictions."""
    import commission.prediction

    fit = commission.prediction.fit
    fitted: dict[tuple[str, str], SystemModel] = {}

    def once(loaded: LoadedPlant, system: str) -> SystemModel:
        key = (loaded.digest, system)
        if key not in fitted:
            fitted[key] = remembering(fit(loaded, system))
        return fitted[key]

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(commission.prediction, "fit", once)
        yield


@pytest.fixture(scope="session")
def plant(tmp_path_factory: pytest.TempPathFactory, example_folder: Path) -> Path:
    """The example plant with three filed visits: a trim, an accepted test by a frozen sheet, and a later visit."""
    folder = tmp_path_factory.mktemp("plant") / "plant"
    left_out = shutil.ignore_patterns("manual", ".manual-*", "records", "upkeep.yaml")
    shutil.copytree(example_folder, folder, ignore=left_out)
    file_visits(folder)
    return folder


@pytest.fixture(scope="session")
def built(tmp_path_factory: pytest.TempPathFactory, plant: Path) -> BuildResult:
    """The manual of that plant."""
    return build(plant, tmp_path_factory.mktemp("built") / "manual")


@pytest.fixture(scope="session")
def site(built: BuildResult) -> Path:
    """Its folder."""
    return built.first_page.parent


@pytest.fixture(scope="session")
def hostile_plant(tmp_path_factory: pytest.TempPathFactory, example_folder: Path) -> Path:
    """A small plant with hostile names, hostile pages and one system that cannot be calculated."""
    folder = tmp_path_factory.mktemp("hostile") / "plant"
    write_hostile_plant(folder, example_folder)
    return folder


@pytest.fixture(scope="session")
def hostile(hostile_plant: Path) -> BuildResult:
    """Its manual."""
    return build(hostile_plant, hostile_plant.parent / "manual")


@cache
def _chromium() -> str | None:
    named = os.environ.get("CHROMIUM")
    candidates = [named] if named else []
    candidates += [found for name in ("chromium", "chromium-browser", "google-chrome") if (found := shutil.which(name))]
    return next((c for c in candidates if Path(c).exists()), None)


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    """Chromium without network services; without it the tests skip, and fail where CI is set."""
    from playwright.sync_api import Error, sync_playwright

    arguments = [
        "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
        "--disable-component-update", "--disable-sync",
    ]  # fmt: skip
    with sync_playwright() as playwright:
        try:
            opened = playwright.chromium.launch(executable_path=_chromium(), args=arguments)
        except Error as error:
            message = f"no Chromium to look at the pages with (set CHROMIUM to its path): {error.message[:200]}"
            if os.environ.get("CI"):
                pytest.fail(message)
            pytest.skip(message)
        yield opened
        opened.close()


@pytest.fixture
def look(browser: Browser) -> Iterator[Callable[..., BrowserContext]]:
    """Opens windows that are closed at the end: `look(width, height, scheme)`."""
    contexts: list[BrowserContext] = []

    def open_window(width: int = 820, height: int = 1180, scheme: Literal["light", "dark"] = "light") -> BrowserContext:
        context = browser.new_context(
            viewport={"width": width, "height": height},
            color_scheme=scheme,
        )
        contexts.append(context)
        return context

    yield open_window
    for context in contexts:
        context.close()
