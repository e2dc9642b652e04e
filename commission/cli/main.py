"""The command `commission`: one group of verbs, and one place where every error becomes a message and an exit code."""

from __future__ import annotations

import importlib
import os
import sys
from collections.abc import Sequence

import click

from commission import __version__

VERBS = {
    "new": "Write a first description to work on.",
    "review": "What in a description cannot be, is unlikely, or missing.",
    "predict": "What each gauge, probe and meter should read.",
    "compare": "Judge a visit's readings without filing them.",
    "record": "File a visit for good, its verdict frozen.",
    "build": "Build the manual and print its first page.",
}
"""The verbs in the order of their use, each in one line: here, so that `--help` need not load them."""
INTERNAL_FAULT = 70  # EX_SOFTWARE of sysexits.h: not the user's mistake, and none of the documented results


class Verbs(click.Group):
    """Loads the module of a verb when that verb is asked for, so that `--help` stays quick."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        return list(VERBS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        if cmd_name not in VERBS:
            return None
        command: click.Command = importlib.import_module(f"commission.cli.{cmd_name}").command
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        with formatter.section("Commands"):
            formatter.write_dl(list(VERBS.items()))

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        from commission.errors import nearest

        if args and args[0] not in VERBS and not args[0].startswith("-"):
            near = nearest(args[0], VERBS)
            hint = f" Did you mean {near}?" if near else ""
            ctx.fail(f"There is no verb {args[0]!r}. The verbs are {', '.join(VERBS)}.{hint}")
        return super().resolve_command(ctx, args)


@click.command(cls=Verbs, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(__version__, prog_name="commission")
def cli() -> None:
    """What each gauge, probe and meter of a refrigerating plant or heat pump should read today, and the proof of it.

    PLANT is a folder with a plant.yaml. Results go to standard output, messages to standard error.

    Exit codes: 0 done; 1 a finding of severity error (review, build --strict) or a test that does not conform
    (compare); 2 input that cannot be read, or wrong use.
    """


def main(arguments: Sequence[str] | None = None) -> None:
    """Run the command line and leave with its exit code; a person never sees a traceback.

    Setting COMMISSION_TRACEBACK=1 in the environment prints the traceback of an internal fault, for a bug report.
    """
    # Process-wide switches belong here and not in the library: CoolProp starts ten times sooner without its tables
    # of saturation approximations, which this package replaces by its own saturation lines.
    os.environ.setdefault("COOLPROP_DISABLE_SUPERANCILLARIES_ENTIRELY", "1")
    # The arrays here are small: threads of the linear algebra would only wait for each other.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    try:
        _run(arguments)
    except BrokenPipeError:
        sys.stderr.close()
        sys.exit(0)
    except Exception as fault:
        click.echo(f"internal fault: {type(fault).__name__}: {fault}", err=True)
        click.echo("This is a fault of the program, not of your files. COMMISSION_TRACEBACK=1 shows where.", err=True)
        if os.environ.get("COMMISSION_TRACEBACK"):
            import traceback

            traceback.print_exc()
        sys.exit(INTERNAL_FAULT)


def _run(arguments: Sequence[str] | None) -> None:
    """Run, and turn every error that a person can mend into its messages and exit code."""
    try:
        # Out of standalone mode click returns the exit code of `Exit` instead of leaving with it.
        code = cli.main(
            args=None if arguments is None else list(arguments), prog_name="commission", standalone_mode=False
        )
        sys.exit(code if isinstance(code, int) else 0)
    except click.Abort:
        click.echo("stopped", err=True)
        sys.exit(130)
    except click.ClickException as error:
        error.show()
        sys.exit(error.exit_code)
    except Exception as error:
        from commission.errors import CommissionError

        if not isinstance(error, CommissionError):
            raise
        for problem in error.problems:
            click.echo(str(problem), err=True)
        count = len(error.problems)
        if count > 1:
            click.echo(f"{count} problems", err=True)
        sys.exit(error.exit_code)
