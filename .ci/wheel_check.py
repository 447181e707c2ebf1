"""Run by .ci/run with a freshly installed wheel, from a folder that is not the source tree."""

import importlib
import json
import pkgutil
import subprocess
import sys
from pathlib import Path

import app
import geometry
from app.resources import data_path, sample_paths

place = Path(app.__file__).resolve()
assert "site-packages" in place.parts, f"not the installed program: {place}"
samples = sample_paths()
assert len(samples) >= 8, f"samples missing: {samples}"
assert place.parent in data_path("icons").parents, "icons are not in the package"
assert any(data_path("icons").iterdir()), "no icons in the package"

bobline = Path(sys.executable).with_name("bobline")
for sample in samples:
    run = subprocess.run(
        [bobline, "figures", sample, "--travel", "-1", "0", "1"],
        capture_output=True, text=True, check=False,
    )
    assert run.returncode == 0, run.stderr
    assert not run.stderr, run.stderr
    poses = json.loads(run.stdout)["poses"]
    assert len(poses) == 6, sample
    assert all(pose["assembles"] for pose in poses), sample

for package in (geometry, app):
    for module in pkgutil.walk_packages(package.__path__, package.__name__ + "."):
        if not module.name.endswith("__main__"):
            importlib.import_module(module.name)
print(f"The wheel works: {len(samples)} samples, every module imports.")
