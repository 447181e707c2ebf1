"""The window and the command line say the same about a car."""

from __future__ import annotations

import json
import math
import subprocess
import sys

import numpy as np
import pytest

from app.document import Document
from app.panels.readouts import ReadoutsPanel
from app.resources import sample_paths
from geometry.lengths import format_angle, format_length
from geometry.open_file import open_job
from geometry.readouts import format_readout

SHEETS = [path for path in sample_paths() if path.suffix in (".csv", ".bobline")]


def figures(path, *options: str) -> dict:
    """What the command prints, in mm."""
    command = [sys.executable, "-m", "app", "figures", str(path), "--units", "mm", *options]
    done = subprocess.run(command, capture_output=True, text=True, check=True)
    return json.loads(done.stdout)


@pytest.mark.parametrize("path", SHEETS, ids=lambda path: path.stem)
@pytest.mark.parametrize("travel", [0.0, 30.0])
def test_the_readouts_are_the_command_s_figures(qtbot, path, travel):
    document = Document(open_job(path))
    document.set_travel(travel, travel)
    panel = ReadoutsPanel(document)
    qtbot.addWidget(panel)
    units = document.units
    sweep = [str(v) for v in np.linspace(-document.span, document.span, 81)]
    told = figures(path, "--travel", str(travel), *sweep)
    poses = [p for p in told["poses"] if p["side"] == "left"]
    pose = poses[0]

    def length(value: float | None) -> str:
        return "–" if value is None else format_length(value, units)

    center = pose["instant_center"] or {"over": None, "up": None}
    roll = pose["roll_center"] or {"up": None}
    expected = {
        "roll center": length(roll["up"]),
        "swing arm": length(pose["swing_arm_length"]),
        "instant center over": length(center["over"]),
        "instant center up": length(center["up"]),
        "toe": format_angle(math.radians(pose["toe"])),
        "camber": format_angle(math.radians(pose["camber"])),
        "caster": format_angle(math.radians(pose["caster"])),
        "kingpin inclination": format_angle(math.radians(pose["kingpin_inclination"])),
        "scrub radius": length(pose["scrub_radius"]),
        "mechanical trail": length(pose["mechanical_trail"]),
    }
    radius = document.layout.left.tire.radius
    toes = [2.0 * radius * math.sin(math.radians(p["toe"])) for p in poses[1:]]
    expected["toe range"] = format_readout("fine length", max(toes) - min(toes), units)
    for key, text in expected.items():
        assert panel.text_of(key) == text, key
