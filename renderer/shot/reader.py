"""A shot file's bytes to the tables that it holds, with limits before anything large is made."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path
from typing import Any

from renderer.base.errors import Fault, InputError
from renderer.shot.schema.flaws import nearest

LARGEST_FILE = 8 * 1024 * 1024  # bytes; 50,000 placements fit
DEEPEST = 24  # brackets inside brackets, and parts of a dotted key

_TOKEN = re.compile(
    r'''"""(?:[^\\]|\\.)*?"""|\'\'\'.*?\'\'\'|(?P<open>"""|\'\'\')|"(?:[^"\\\n]|\\.)*"|'[^'\n]*'|\#[^\n]*'''
    r"|(?P<in>[\[{])|(?P<out>[\]}])|(?P<dot>\.)|(?P<end>[=,\n])",
    re.DOTALL,
)


def read_tables(path: Path) -> tuple[str, dict[str, Any]]:
    """The text of a shot file and its tables; raises `InputError` where it cannot be read or is not TOML."""
    text = read_text(path)
    return text, parse(text, str(path))


def read_text(path: Path) -> str:
    """The text of a file of bearable size, without a byte order mark."""
    try:
        if not path.is_file():
            what = "this is a folder, not a shot file" if path.is_dir() else "there is no such shot file"
            raise InputError(Fault(what, str(path), "a file NAME.shot.toml", _neighbour(path)))
        with path.open("rb") as file:
            data = file.read(LARGEST_FILE + 1)
    except OSError as error:
        raise InputError(Fault(f"the shot file cannot be read: {error.strerror}", str(path))) from None
    if len(data) > LARGEST_FILE:
        raise InputError(Fault("the shot file is too large", str(path), f"at most {LARGEST_FILE // 2**20} MiB"))
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise InputError(
            Fault("the shot file is not UTF-8 text", f"{path}:{line}", "a text file saved as UTF-8")
        ) from None


def _neighbour(path: Path) -> str:
    """The nearest shot file in the same folder."""
    if not path.parent.is_dir():
        return ""
    names = [item.name for _, item in zip(range(10_000), path.parent.iterdir(), strict=False)]
    near = nearest(path.name, [name for name in names if name.endswith(".toml") and name != path.name])
    return str(path.parent / near) if near else ""


def parse(text: str, where: str) -> dict[str, Any]:
    """The tables of a text in TOML."""
    check_depth(text, where)
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        line, column = _place(str(error), text)
        fault = Fault(_reworded(str(error)), f"{where}:{line}:{column}", _hint(str(error)))
        raise InputError(fault) from None
    except (ValueError, RecursionError):  # a whole number of thousands of digits
        digits = re.search(r"[0-9_]{1000,}", text)
        line = text.count("\n", 0, digits.start()) + 1 if digits else 1
        raise InputError(
            Fault("a number has thousands of digits", f"{where}:{line}", "numbers of bearable length")
        ) from None


def check_depth(text: str, where: str) -> None:
    """Refuse brackets and dotted keys so deep that reading them would take the machine down."""
    depth = dots = 0
    for token in _TOKEN.finditer(text):
        kind = token.lastgroup
        if kind == "open":  # a string that never ends: no TOML, and the reader says where
            return
        if kind == "in":
            depth, dots = depth + 1, 0
        elif kind == "out":
            depth, dots = max(depth - 1, 0), 0
        elif kind == "dot":
            dots += 1
        elif kind == "end":
            dots = 0
        if depth > DEEPEST or dots > DEEPEST:
            line = text.count("\n", 0, token.start()) + 1
            raise InputError(
                Fault("the shot file is nested too deeply", f"{where}:{line}", f"at most {DEEPEST} levels")
            )


def _place(message: str, text: str) -> tuple[int, int]:
    """Line and column of a TOML error."""
    match = re.search(r"at line (\d+), column (\d+)", message)
    if match:
        return int(match[1]), int(match[2])
    lines = text.rstrip("\n").split("\n")
    return len(lines), len(lines[-1]) + 1


_WORDS = (  # what the reader's message starts with, our sentence, and what was expected
    ("Cannot overwrite a value", "the key before this place is given twice", "each key once"),
    ("Cannot declare", "this table is given twice", "each table once; [[name]] adds to a list"),
    ("Cannot mutate", "this adds to a table that is already closed", "all of a table's keys in one place"),
    ("Duplicate inline table key", "a key is given twice", "each key once"),
    ("Invalid value", "this is not a value of TOML", 'a number, "text", true, false, [ list ] or { table }'),
    ("Unterminated string", "a string is not closed", "a closing quotation mark"),
    ("Illegal character '\\n'", "a string is not closed", "a closing quotation mark"),
    ("Unclosed array", "a list is not closed", "a comma or ]"),
    ("Unclosed inline table", "a table in braces is not closed", "a comma or }, on the same line"),
    ("Expected '='", "an equals sign is missing", "key = value"),
    ("Expected ']'", "a table's name is not closed", "[name] or [[name]]"),
    ("Unescaped '\\'", "a backslash in a string means nothing", "forward slashes in paths, or text in 'single quotes'"),
)


def _entry(message: str) -> tuple[str, str]:
    for start, sentence, expected in _WORDS:
        if message.startswith(start):
            return sentence, expected
    return "this line is not TOML", "[table], key = value, or # a comment"


def _reworded(message: str) -> str:
    return _entry(message)[0]


def _hint(message: str) -> str:
    return _entry(message)[1]
