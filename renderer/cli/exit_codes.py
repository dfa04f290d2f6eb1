"""What the command line's exit codes mean."""

from __future__ import annotations

DONE = 0
FLAGGED = 1
BAD_INPUT = 2
INTERRUPTED = 3  # or incomplete: what was finished is saved
OUR_FAULT = 70  # EX_SOFTWARE of BSD's sysexits.h
