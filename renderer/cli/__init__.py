"""The command line: one thin file a command, which parses, calls the library and prints.

Nothing heavy is imported until a command runs: `antisolar --help` must answer at once. Results go to standard output,
talk to standard error; exit codes are 0 (done), 1 (flagged), 2 (bad input), 3 (interrupted or incomplete) and 70 (our
own fault, with a traceback).
"""

from __future__ import annotations

from collections.abc import Sequence


def main(arguments: Sequence[str] | None = None) -> None:
    """Run the command line and leave with its exit code."""
    import sys

    from renderer.cli.running import run

    sys.exit(run(list(sys.argv[1:] if arguments is None else arguments)))
