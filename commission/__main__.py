"""The command `commission`, which is also `python -m commission`.

Asked only for its help it prints `help.txt`: importing the library that reads the options takes four times as long as
Python itself. A test holds the file to what that library would print.
"""

import os
import sys


def main() -> None:
    """Run the command line with the arguments of this process, and leave with its exit code."""
    if sys.argv[1:] in (["--help"], ["-h"]):
        with open(os.path.join(os.path.dirname(__file__), "help.txt"), encoding="utf-8") as file:
            sys.stdout.write(file.read())
        return
    from commission.cli import main as run

    run()


if __name__ == "__main__":
    main()
