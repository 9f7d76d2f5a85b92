"""The command line: ``mirrorlab [FILE]`` opens the window, ``mirrorlab VERB …`` answers without one."""

from __future__ import annotations

import argparse
import importlib
import io
import os
import re
import sys
from collections.abc import Sequence

from mirrorlab import __version__
from mirrorlab.commands import VERBS

BAD_INPUT = 2
INTERRUPTED = 130

EXAMPLES = """examples:
  mirrorlab                          open the window with a sample
  mirrorlab lantern.json             open the window with an arrangement file, or a CIF file
  mirrorlab check 90 60 45           what these mirrors do
  mirrorlab orbit 90 60 45 --heights 1,2,3 --csv images.csv
  mirrorlab VERB --help              what a verb takes, with examples
"""


class Parser(argparse.ArgumentParser):
    """A parser whose errors are one line."""

    def error(self, message: str) -> None:  # type: ignore[override]
        """Say what is wrong and where help is, in one line, and leave with status 2."""
        for kind, accepted in (("int", "a whole number"), ("float", "a number")):
            message = re.sub(rf"invalid {kind} value: (.*)", rf"\1 is not {accepted}", message)
        self.exit(BAD_INPUT, f"{self.prog}: {message} (see {self.prog} --help)\n")


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command line; returns the exit status."""
    words = [_held(word) for word in (sys.argv[1:] if argv is None else argv)]
    _print_anywhere()
    try:
        status = _run(words)
        if sys.stdout is not None:
            sys.stdout.flush()  # a reader that left is met here, not when the interpreter ends
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), 1)
        return 0
    except KeyboardInterrupt:
        print("\nmirrorlab: stopped", file=sys.stderr)
        return INTERRUPTED
    except MemoryError:
        print("mirrorlab: more memory is needed than there is", file=sys.stderr)
        return BAD_INPUT
    except ImportError as error:
        if ".so" not in str(error):
            raise
        from mirrorlab.commands.screen import BASE

        packages = " ".join(sorted(BASE.values()))
        print(f"mirrorlab: Qt cannot be loaded ({error}); on Debian: apt install {packages}", file=sys.stderr)
        return BAD_INPUT
    except (ValueError, OSError) as error:
        print(f"mirrorlab: {' '.join(str(error).split())}", file=sys.stderr)
        return BAD_INPUT
    return status


def _print_anywhere() -> None:
    """Let a terminal or file that has no π or ² get a stand-in for it, rather than end the answer half-way."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper) and stream.errors == "strict":
            stream.reconfigure(errors="backslashreplace")


def _held(word: str) -> str:
    """Keep argparse from taking ``-43m`` or ``-1,1,0`` for an option: a leading space makes it a value."""
    return f" {word}" if re.match(r"-[\d.]", word) else word


def _run(words: list[str]) -> int:
    names = [verb.name for verb in VERBS]
    if not words or (words[0] not in names and not words[0].startswith("-")):
        if len(words) > 1:
            msg = f'"{words[0]}" is not a verb; verbs are {", ".join(names)}; a file opens alone'
            raise ValueError(msg)
        return open_window((words[0].strip() or None) if words else None)
    parser = Parser(
        prog="mirrorlab",
        usage="mirrorlab [FILE]\n       mirrorlab VERB ... [--help]\n       mirrorlab [--help] [--version]",
        description="Angles between mirrors in; finite group, images, chambers, point groups and panels out.",
        epilog=f"{verbs_by_whom()}\n{EXAMPLES}",
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--version", action="version", version=f"mirrorlab {__version__}")
    subparsers = parser.add_subparsers(
        metavar="VERB", prog="mirrorlab", parser_class=Parser, required=True, help="one of those below"
    )
    for verb in VERBS:
        if words[0] == verb.name:
            importlib.import_module(verb.module).ADD[verb.name](subparsers)
        else:
            subparsers.add_parser(verb.name)
    args = parser.parse_args(words)
    return int(args.run(args))


def verbs_by_whom() -> str:
    """The verbs with a line each, under whom they are for."""
    width = max(len(verb.name) for verb in VERBS)
    lines = []
    for whom in dict.fromkeys(verb.whom for verb in VERBS):
        lines.append(f"for {whom}:")
        lines += [f"  {verb.name:{width}}  {verb.summary}" for verb in VERBS if verb.whom == whom]
        lines.append("")
    return "\n".join(lines)


def open_window(path: str | None) -> int:
    """Open the window; where none can open, say why and print the file's or the first sample's answer instead."""
    from mirrorlab.commands.screen import why_no_window

    if path is not None and not os.path.exists(path):
        names = ", ".join(verb.name for verb in VERBS)
        msg = f'"{path}" is neither a file nor a verb; verbs are {names}'
        raise ValueError(msg)
    reason = why_no_window()
    if reason is None:
        try:
            from mirrorlab.desktop.app import run
        except ImportError as error:  # a library that Qt needs and the look beforehand did not know
            reason = f"Qt cannot be loaded ({error})"
        else:
            from mirrorlab.commands.interrupt import interrupts, quit_window

            with interrupts(quit_window):
                return run(path)
    from mirrorlab.commands.fallback import print_instead

    return print_instead(path, reason)


if __name__ == "__main__":
    sys.exit(main())
