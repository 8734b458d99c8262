"""Fixtures: the catalogue, and the command line as a callable that swallows nothing."""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator
from typing import NamedTuple

import pytest

from stackdb.catalogue import Catalogue, open_catalogue

os.environ.setdefault("COLUMNS", "80")


class Ran(NamedTuple):
    """Exit status, standard output and standard error of one call."""

    status: int
    out: str
    err: str


@pytest.fixture(scope="session")
def catalogue() -> Iterator[Catalogue]:
    with open_catalogue() as opened:
        yield opened


@pytest.fixture
def stackdb(capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Callable[..., Ran]:
    from stackdb.cli import run

    monkeypatch.setenv("COLUMNS", "80")

    def call(*arguments: str) -> Ran:
        capsys.readouterr()
        status = run(list(arguments))
        captured = capsys.readouterr()
        return Ran(status, captured.out, captured.err)

    return call
