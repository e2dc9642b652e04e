"""`build --serve`: the manual in a browser on this computer, rebuilt when the plant folder changes.

Served pages go to a folder of their own: their security policy is relaxed for the reload script, which that of the
manual handed over must never be.
"""

from __future__ import annotations

import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

from commission.errors import CommissionError

HOST, PORT = "127.0.0.1", 8137


def serve_manual(plant: Path, cache: Path | None, say: Callable[[str], None]) -> None:
    """Serve until interrupted. A description that cannot be read is reported and the last good pages stay."""
    from mkdocs.livereload import LiveReloadServer

    from commission.manual import build

    with tempfile.TemporaryDirectory(prefix="commission-serve-") as folder:
        site = Path(folder) / "site"

        def rebuild() -> None:
            try:
                build(plant, site, progress=say, cache=cache, serving=True)
            except CommissionError as error:
                for problem in error.problems:
                    say(str(problem))

        rebuild()
        server: Any = LiveReloadServer(rebuild, HOST, PORT, str(site))
        for watched in _inputs(plant):
            server.watch(str(watched))
        say(f"serving {server.url} until you press Ctrl-C")
        try:
            server.serve()
        except KeyboardInterrupt:
            say("stopped")
        finally:
            server.shutdown()


def _inputs(plant: Path) -> list[Path]:
    """What a person edits: every file and folder of the plant but hidden ones and the manual itself."""
    return [p for p in sorted(plant.iterdir()) if not p.name.startswith(".") and p.name != "manual"]
