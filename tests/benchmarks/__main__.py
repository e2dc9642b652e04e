"""Prints the table of speed as Markdown: `python -m tests.benchmarks [points] [maps] [processes]`; all without a word.

Times are CPU times of the process, medians of turns that are interleaved, so that a busy machine slows both sides
alike. Mixtures take `PropsSI` seconds to half a minute for one point: once each.
"""

from __future__ import annotations

import sys
from collections.abc import Callable

from tests.benchmarks import points, processes, whole_maps
from tests.benchmarks.timing import HEAD, Row

PARTS: dict[str, Callable[[], list[Row]]] = {
    "points": points.run,
    "maps": whole_maps.run,
    "processes": processes.run,
}


def main(wanted: list[str]) -> None:
    """Run the parts that are wanted, or all, and print each row as it is ready."""
    unknown = [name for name in wanted if name not in PARTS]
    if unknown:
        sys.exit(f"no benchmark is called {unknown[0]}; there are {', '.join(PARTS)}")
    print(HEAD)
    for name in wanted or PARTS:
        for row in PARTS[name]():
            print(row, flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])
