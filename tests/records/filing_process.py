"""A process that files records on request and kills its own children while they do: run by the tests of filing.

Each line of standard input is one request in JSON; each answer is one line with the exit codes of the children (minus
nine for one that was killed). A child is a fork, so that only the filing itself takes time and can be hit.
"""

from __future__ import annotations

import json
import os
import signal
import sys
import time
from pathlib import Path

from commission.checklists import stages
from commission.description import LoadedPlant, load_plant
from commission.records import file_record


def file_in_child(loaded: LoadedPlant, draft: str, attach: str | None, kill_at: int | None) -> int:
    """Fork; the child files the draft and dies at the `kill_at`-th step on the disk, where one is given."""
    child = os.fork()
    if child:
        return child
    try:
        if kill_at is not None:
            watch(str(loaded.folder / "records"), kill_at)
        file_record(loaded, Path(draft), Path(attach) if attach else None)
    except BaseException as error:
        print(repr(error), file=sys.stderr, flush=True)
        os._exit(1)
    os._exit(0)


def watch(folder: str, kill_at: int) -> None:
    """Kill this process when it is about to open, name, remove or make anything in the folder for the n-th time."""
    seen = 0

    def hook(event: str, arguments: tuple[object, ...]) -> None:
        nonlocal seen
        if event in {"open", "os.link", "os.rename", "os.remove", "os.mkdir"} and str(arguments[0]).startswith(folder):
            seen += 1
            if seen == kill_at:
                os.kill(os.getpid(), signal.SIGKILL)

    sys.addaudithook(hook)


def main() -> None:
    """Answer requests until standard input ends."""
    loaded = load_plant(sys.argv[1])
    for system in loaded.plant.systems:
        stages(loaded, system)  # warms what is read once, so that the children are quick
    print("ready", flush=True)
    for line in sys.stdin:
        asked = json.loads(line)
        plant = load_plant(asked["plant"])
        children = [file_in_child(plant, draft, asked.get("attach"), asked.get("kill_at")) for draft in asked["drafts"]]
        if "delay" in asked:
            time.sleep(asked["delay"])
            for child in children:
                os.kill(child, signal.SIGKILL)
        codes = [os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) for child in children]
        print(json.dumps(codes), flush=True)


if __name__ == "__main__":
    main()
