"""Where the templates, style sheets and fonts lie, in a wheel and in the source tree."""
from __future__ import annotations

import shutil
from pathlib import Path

from calcpack.errors import Fault, MissingPartError
from calcpack.render.marking import SCRIPTS

STYLES = ("fonts.css", "equation.css", "sheet.css", "screen.css", "review.css", "register.css")
PICTURES = ("delta.svg",)


def templates_folder() -> Path:
    """The folder with sheet.html, parts/, styles/ and fonts/.

    Raises
    ------
    MissingPartError
        When the installation has no templates.
    """
    package = Path(__file__).resolve().parent.parent
    for folder in (package / "templates", package.parent / "templates"):
        if (folder / "sheet.html").is_file():
            return folder
    raise MissingPartError(Fault("the templates of calcpack are missing", expected="a folder 'templates'",
                                 hint="install calcpack again"))


def copy_assets(target: Path) -> list[Path]:
    """Copies style sheets, pictures, scripts and fonts below ``target``; their paths, relative to it."""
    source = templates_folder()
    names = [Path("styles") / name for name in (*STYLES, *PICTURES)]
    names += [Path("scripts") / name for name in SCRIPTS]
    names += sorted(path.relative_to(source) for path in (source / "fonts").iterdir() if path.is_file())
    for name in names:
        (target / name).parent.mkdir(parents=True, exist_ok=True)
        shutil.copyfile(source / name, target / name)
    return names
