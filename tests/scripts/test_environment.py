"""The helper behind demo and test: what is not ours is not touched, a changed project is made anew."""

from __future__ import annotations

import os
import sys
from pathlib import Path

import environment
import pytest


@pytest.fixture
def venv(tmp_path, monkeypatch):
    folder = tmp_path / "venv"
    monkeypatch.setattr(environment, "VENV", str(folder))
    monkeypatch.setattr(environment, "say", lambda text: None)
    return folder


def test_a_folder_without_our_mark_is_never_touched(venv):
    venv.mkdir()
    kept = venv / "precious"
    kept.write_text("mine")
    with pytest.raises(environment.Stop, match="not ours"):
        environment.ready()
    assert kept.read_text() == "mine"


def test_ready_only_after_the_install_and_made_anew_on_change(venv, monkeypatch):
    calls = []

    def create(python, folder):
        os.makedirs(os.path.dirname(environment.venv_python(folder)))
        Path(environment.venv_python(folder)).write_text("")
        environment.write_mark(folder, "")
        calls.append("create")
        return ["pip"]

    monkeypatch.setattr(environment, "create", create)
    monkeypatch.setattr(environment, "install", lambda pip, extras: calls.append("install"))
    environment.ready()
    environment.ready()
    assert calls == ["create", "install"]
    monkeypatch.setattr(environment, "digest", lambda: "other")
    environment.ready()
    assert calls == ["create", "install"] * 2


def test_an_install_that_fails_leaves_no_ready_mark(venv, monkeypatch):
    def create(python, folder):
        os.makedirs(folder)
        environment.write_mark(folder, "")
        return [sys.executable, "-c", "import sys; sys.exit(1)"]

    monkeypatch.setattr(environment, "create", create)
    with pytest.raises(environment.Stop, match="installation failed"):
        environment.ready()
    assert environment.read_mark(str(venv)) == ""


def test_an_old_python_finds_a_newer_one_or_says_what_to_type(monkeypatch):
    monkeypatch.setattr(environment.sys, "version_info", (3, 8, 0))
    monkeypatch.setattr(environment.shutil, "which", lambda name: None)
    with pytest.raises(environment.Stop, match="apt-get install"):
        environment.find_python()


@pytest.mark.parametrize("name", ["environment.py", "demo", "test"])
def test_any_python_three_can_read_the_scripts(name):
    import ast

    text = (Path(environment.ROOT) / "scripts" / name).read_text()
    ast.parse(text, feature_version=(3, 4))
