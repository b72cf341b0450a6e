"""The ``thermfix`` command: its subcommands, and errors as one sentence instead of a traceback."""

import os
import sys
import traceback

import typer

from thermfix.cli import calibrate, check, correct, explain, info, materials, new
from thermfix.cli.output import say
from thermfix.errors import ThermfixError

app = typer.Typer(
    name="thermfix",
    no_args_is_help=True,
    add_completion=False,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
    help="Correct thermal-camera frames: surface temperatures with their uncertainty, or a plain reason why not.",
    epilog="Example: thermfix correct sample_frames/substation --out corrected",
)
for module in (correct, explain, check, new, info, materials, calibrate):
    module.register(app)


def main() -> None:
    """Run the command line and exit with the code of what happened."""
    try:
        app()
    except ThermfixError as error:
        say(f"thermfix: {error}")
        if error.hint:
            say(f"  {error.hint}")
        sys.exit(error.exit_code)
    except KeyboardInterrupt:
        say("thermfix: interrupted; finished files stand, nothing is half written.")
        sys.exit(130)
    except BrokenPipeError:
        # The reader of our output has gone (a pager was closed); there is nobody to tell.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.exit(1)
    except Exception as error:  # noqa: BLE001 - the last stop: nobody above would turn it into a sentence
        if os.environ.get("THERMFIX_DEBUG"):
            traceback.print_exc()
        say(f"thermfix: unexpected fault: {type(error).__name__}: {error}")
        say("  Set THERMFIX_DEBUG=1 to see where, and report it.")
        sys.exit(1)
