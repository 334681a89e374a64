"""Widgets without a browser: an error that is not the user's is raised, not only shown."""

from __future__ import annotations

import pytest

from kt_widgets.widgets import view


@pytest.fixture(autouse=True)
def _raise_unexpected_errors(monkeypatch: pytest.MonkeyPatch) -> None:
    def raise_again(error: Exception) -> str:
        raise error

    monkeypatch.setattr(view, "unexpected", raise_again)
