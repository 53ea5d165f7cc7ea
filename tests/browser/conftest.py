"""A small sheet built to a page, and Chromium to open it in."""
from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest
from chromium_client import Chromium, Profile, Tab
from mixers_sheet import SPEC, build


@pytest.fixture(scope="session")
def spec(tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("mixers") / "mixers.yaml"
    path.write_text(SPEC, "utf-8")
    return path


@pytest.fixture(scope="session")
def page(spec: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    return build(spec, tmp_path_factory.mktemp("site") / "site")


@pytest.fixture(scope="session")
def chromium(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Chromium]:
    with Chromium(tmp_path_factory.mktemp("chromium")) as started:
        yield started


@pytest.fixture
def browser(chromium: Chromium, tmp_path: Path) -> Iterator[Profile]:
    """A profile that nobody has used."""
    with chromium.profile(tmp_path / "downloads") as fresh:
        yield fresh


@pytest.fixture(scope="module")
def scripts(chromium: Chromium, page: Path, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Tab]:
    """The page in a profile of the module's own, for what its scripts give back; nothing is marked in it."""
    with chromium.profile(tmp_path_factory.mktemp("downloads")) as fresh:
        yield fresh.open(page)
