"""The published checks of the source tree to the wheel, so that an installation can run them on itself."""
from __future__ import annotations

from pathlib import Path
from typing import Any

from hatchling.builders.hooks.plugin.interface import BuildHookInterface


class PublishedChecks(BuildHookInterface):
    """Puts tests/published/*.yaml, and nothing else of that folder, at calcpack/published/."""

    def initialize(self, version: str, build_data: dict[str, Any]) -> None:
        """Names each file of the checks for the wheel; an editable installation finds them in the source tree."""
        if self.target_name != "wheel" or version == "editable":
            return
        for path in sorted((Path(self.root) / "tests" / "published").glob("*.yaml")):
            build_data["force_include"][str(path)] = f"calcpack/published/{path.name}"
