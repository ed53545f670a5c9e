"""The command line: `main` runs it; one module per family of commands."""

from reactor.cli.group import cli, main

__all__ = ["cli", "main"]
