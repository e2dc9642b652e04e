"""The verbs of the command line, their options, exit codes and progress. Importing it imports nothing heavy."""

from commission.cli.main import cli, main

__all__ = ["cli", "main"]
