"""The Qt binding itself: one known fault would end the program after some thousand calls."""

import sys

from PySide6.QtCore import QPointF


def test_calls_that_return_nothing_keep_their_reference_to_none():
    point = QPointF()
    before = sys.getrefcount(None)
    for _ in range(50):
        point.setX(1.0)
    assert abs(sys.getrefcount(None) - before) < 25
