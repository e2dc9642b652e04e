"""Where the page templates are: inside an installed package, or beside it in a checkout."""

from __future__ import annotations

from pathlib import Path

import commission


def templates_folder() -> Path:
    """The folder `site_templates`: shipped inside the wheel, or beside the package in a checkout.

    Raises:
        FileNotFoundError: neither place holds the templates (a broken installation).
    """
    package = Path(commission.__file__).resolve().parent
    for folder in (package / "site_templates", package.parent / "site_templates"):
        if (folder / "main.html").is_file():
            return folder
    raise FileNotFoundError(f"the page templates are missing from {package / 'site_templates'}: install again")
