"""The code keeps the project's style: what ruff is told in pyproject.toml."""
from __future__ import annotations

import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).parents[1]


def test_ruff_finds_nothing():
    done = subprocess.run([sys.executable, "-m", "ruff", "check", "--no-cache", "calcpack", "tests"],
                          cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout
