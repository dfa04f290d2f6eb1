"""The error a person gets to read: what is wrong, where, what was expected, and the nearest valid name."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass


@dataclass(frozen=True)
class Fault:
    """One thing that is wrong with an input, in one sentence and up to three facts.

    `what` is a sentence without a full stop; `where` is a file, or ``file:line:column``, with the dotted key after
    two spaces where there is one; `expected` names type, unit and range, or the command that lists the names;
    `nearest` is the nearest valid name.
    """

    what: str
    where: str = ""
    expected: str = ""
    nearest: str = ""

    def lines(self) -> list[str]:
        """The fault as the lines that are printed."""
        rows = [f"error: {self.what}"]
        rows += [
            f"  {label:<10}{text}"
            for label, text in (("where:", self.where), ("expected:", self.expected), ("nearest:", self.nearest))
            if text
        ]
        return rows


class InputError(Exception):
    """One or more faults in what the user gave us; the command line prints them and exits with 2."""

    def __init__(self, *faults: Fault | str) -> None:
        self.faults = tuple(Fault(fault) if isinstance(fault, str) else fault for fault in faults)
        super().__init__("\n".join(line for fault in self.faults for line in fault.lines()))


class Interrupted(Exception):
    """The run was asked to stop; what was finished is saved and the command exits with 3."""


def nearest_name(name: str, known: Iterable[str]) -> str:
    """The known name most like `name`, or an empty string when none is near."""
    by_lower = {candidate.lower(): candidate for candidate in known}
    matches = difflib.get_close_matches(name.lower(), list(by_lower), n=1, cutoff=0.6)
    return by_lower[matches[0]] if matches else ""
