"""The screens and tables in README and DEVELOPERS are what the program prints now."""

from __future__ import annotations

from pathlib import Path

import make_screens
import pytest

ROOT = Path(make_screens.__file__).resolve().parent.parent


@pytest.mark.parametrize("page", ["README.md", "DEVELOPERS.md"])
def test_the_page_is_true(page):
    text = (ROOT / page).read_text(encoding="utf-8")
    assert make_screens.PART.search(text)
    assert make_screens.made(text) == text


def test_readme_names_the_two_commands():
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    assert "scripts/demo" in text
    assert "scripts/test" in text
