"""Running a command and turning whatever stops it into an exit code and, for a person, a few plain lines."""

from __future__ import annotations

import sys
import traceback

import click

from renderer.base.errors import Fault, InputError, Interrupted, nearest_name
from renderer.cli import exit_codes
from renderer.cli.commands import antisolar
from renderer.cli.stopping import listen_for_stops
from renderer.cli.talk import say


def run(arguments: list[str]) -> int:
    """Run one command line and give its exit code; never raises, but for what Python itself cannot go on after."""
    try:
        with listen_for_stops():
            code = antisolar.main(arguments, prog_name="antisolar", standalone_mode=False)
        sys.stdout.flush()
        return code if isinstance(code, int) else exit_codes.DONE
    except InputError as error:
        say(*(line for fault in error.faults for line in fault.lines()))
        return exit_codes.BAD_INPUT
    except click.UsageError as error:
        say(*_usage_fault(error).lines())
        return exit_codes.BAD_INPUT
    except click.ClickException as error:
        say(*Fault(_sentence(error.format_message())).lines())
        return exit_codes.BAD_INPUT
    except (Interrupted, KeyboardInterrupt, click.Abort) as stop:
        say(str(stop) or "stopped; what was finished is kept")
        return exit_codes.INTERRUPTED
    except BrokenPipeError:
        return _reader_left()
    except Exception:
        traceback.print_exc()
        say("", "This is a fault in antisolar, not in your input. Please report it with the lines above.")
        return exit_codes.OUR_FAULT


def _usage_fault(error: click.UsageError) -> Fault:
    """A misused command line as a fault: what, where, what was expected, the nearest."""
    path = error.ctx.command_path if error.ctx else "antisolar"
    nearest = getattr(error, "possibilities", None) or []
    expected = f'see "{path} --help"'
    if isinstance(error, click.NoSuchOption):
        return Fault(f'no option named "{error.option_name}"', path, expected, nearest_name(error.option_name, nearest))
    if isinstance(error, click.MissingParameter) and error.param is not None:
        return Fault(f"{error.param.human_readable_name} is missing", path, expected)
    if isinstance(error, click.BadParameter) and error.param is not None:
        name = error.param.opts[0] if error.param.opts else error.param.human_readable_name
        return Fault(f"{name} cannot be read: {_sentence(error.message)}", path, expected)
    return Fault(_sentence(error.format_message()), path, expected)


def _sentence(message: str) -> str:
    """A message as our faults have it: small at its start, no full stop."""
    message = message.strip().rstrip(".")
    return message[:1].lower() + message[1:]


def _reader_left() -> int:
    """Whoever read our output has closed it: say no more, and let nothing be flushed into the closed pipe at exit."""
    import os

    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    return exit_codes.INTERRUPTED
