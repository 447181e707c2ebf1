"""A short run of the random hands (``python -m tests.fuzz.hands`` does twenty thousand acts)."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

import pytest
from PySide6.QtCore import QTimer, qWarning

from app import theme
from tests.fuzz.hand_acts import breathe
from tests.fuzz.hands import Hands, Watch, growth, prepare


@pytest.fixture
def folder(qapp, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Settings, kept work and files of the run's own."""
    # Noted here, so that what the run puts in its place goes again.
    monkeypatch.setenv("BOBLINE_DATA", str(tmp_path))
    theme.dress(qapp, 100)
    yield prepare(tmp_path)
    theme.dress(qapp, 100)


@pytest.mark.parametrize("seed", [1, 20])
def test_random_hands_find_nothing_to_break(folder: Path, seed: int) -> None:
    hands = Hands(seed, folder)
    hands.run(200)
    assert "\n\n".join(hands.watch.faults) == ""
    assert len(hands.watch.acts) > 50


def test_the_hands_notice_what_goes_wrong(qapp) -> None:
    def fail() -> None:
        raise RuntimeError("a slot that fails")

    with Watch() as watch:
        watch.tell("the act before")
        QTimer.singleShot(0, fail)
        breathe(5)
        qWarning("This plugin does not support thinking")
        qWarning("a warning of Qt's")
    assert any("a slot that fails" in fault and "the act before" in fault for fault in watch.faults)
    assert len(watch.faults) == 2
    assert watch.faults[1].startswith("Qt: a warning of Qt's")
    assert sys.excepthook != watch._raised


def test_undone_that_is_not_as_opened_is_noticed(folder: Path) -> None:
    hands = Hands(3, folder)
    document = hands.window.document
    with hands.watch:
        hands.undo_all()
        assert hands.watch.faults == []
        # A step that undo does not take back.
        document._history._opening = replace(document.job, notes="not there before")
        hands.undo_all()
        hands._leave()
    assert len(hands.watch.faults) == 1
    assert "not there before" in hands.watch.faults[0]


def test_memory_that_grows_is_told_from_memory_that_does_not() -> None:
    flat = [(number, 200.0 + number % 3) for number in range(100)]
    growing = [(number, 200.0 + number) for number in range(100)]
    late = [(number, 200.0 if number < 90 else 230.0) for number in range(100)]
    assert growth(flat) == pytest.approx(0.0, abs=0.02)
    assert growth(growing) == pytest.approx(0.16, abs=0.02)
    assert growth(late) == pytest.approx(0.15)
    assert growth(flat[:10]) is None
