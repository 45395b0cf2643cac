"""The command line: the only place that calls all three rooms, and the only one that prints."""

from __future__ import annotations

import argparse
import difflib
import json
import os
import sys
import tempfile
from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING, NoReturn

from export import VERSION

if TYPE_CHECKING:
    from ingest.errors import InputError

CAUTION = "Screening aid: local codes and a licensed engineer decide."
MOST_SECONDS = 86_400
EXIT_CODES = """\
exit codes:
  0    done
  1    done, but no section could be written (the report says why)
  2    bad usage, or an input that cannot be read
  4    a fault of the tool itself
  130  interrupted"""

EXAMPLES = {
    "inspect": (
        "cutworthy inspect samples/first_pit/first_pit.dxf --brief samples/first_pit/brief.toml",
        "cutworthy inspect samples/first_pit/first_pit.dxf --write-brief out/brief.toml",
    ),
    "propose": (
        "cutworthy propose samples/first_pit/first_pit.dxf --brief samples/first_pit/brief.toml --out out/first_pit",
        "cutworthy propose samples/first_pit/first_pit.dxf --brief samples/first_pit/brief.toml --out out/json --json",
    ),
    "judge": (
        "cutworthy judge samples/first_pit/first_pit.dxf --brief samples/first_pit/brief.toml --line 115,182,115,210",
        "cutworthy judge samples/first_pit/first_pit.dxf --line 102,190,103,230 --json",
    ),
    "members": (
        "cutworthy members out/first_pit/sections/S1.json out/first_pit/sections/S2.json samples/first_pit/results.csv",
        "cutworthy members out/first_pit/sections/S[12].json samples/first_pit/results.csv --out out/members.csv",
    ),
    "schema": ("cutworthy schema", "cutworthy schema section"),
}


class Parser(argparse.ArgumentParser):
    """A parser that names the nearest option or command when a word is not known."""

    def error(self, message: str) -> NoReturn:
        """Say what is wrong and what was probably meant; exit code 2."""
        self.exit(2, f"cutworthy: {message}{self._nearest(message)}\n  To fix: see '{self.prog} --help'\n")

    def _nearest(self, message: str) -> str:
        parsers = [self, *(p for a in self._actions if isinstance(a.choices, dict) for p in a.choices.values())]
        known = [option for parser in parsers for action in parser._actions for option in action.option_strings]
        known += [str(choice) for action in self._actions for choice in action.choices or ()]
        for word in message.replace("'", " ").split():
            close = difflib.get_close_matches(word.split("=")[0], known, n=1, cutoff=0.6)
            if close and close[0] not in message.split("(choose")[0].split():
                return f" (did you mean {close[0]}?)"
        return ""


def build_parser() -> Parser:
    """Build the whole command line; nothing heavy is imported for it."""
    parser = Parser(
        prog="cutworthy",
        description="Which two-dimensional sections represent this excavation, and how far each may be trusted.",
        epilog=f"{EXIT_CODES}\n\n{CAUTION}",
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"cutworthy {VERSION}")
    parser.add_argument("--completion", choices=("bash", "zsh", "fish"), help="print a completion script and stop")
    commands = parser.add_subparsers(dest="command", metavar="COMMAND", parser_class=Parser)
    for name, (summary, add) in COMMANDS.items():
        examples = "\n".join(f"  {line}" for line in EXAMPLES[name])
        command = commands.add_parser(
            name,
            help=summary,
            description=summary[0].upper() + summary[1:] + ".",
            epilog=f"examples:\n{examples}\n\n{EXIT_CODES}\n\n{CAUTION}",
            formatter_class=argparse.RawDescriptionHelpFormatter,
            allow_abbrev=False,
        )
        add(command)
        command.add_argument("-q", "--quiet", action="store_true", help="no progress and no summary; errors still show")
        command.add_argument("--json", action="store_true", help="answer and errors as JSON")
    return parser


def _add_files(command: argparse.ArgumentParser) -> None:
    command.add_argument("files", nargs="+", metavar="FILE", help="IFC, DXF or AGS4 file of the site")
    command.add_argument("--brief", metavar="TOML", help="the engineer's brief: what the files do not say")
    command.add_argument(
        "--read-limit", type=_seconds, metavar="SECONDS", help="time limit for reading one file (default 60 + 3 per MB)"
    )
    command.add_argument("--skip-unreadable", action="store_true", help="go on without a file that cannot be read")


def _seconds(text: str) -> float:
    """A time limit: above zero, at most a day."""
    try:
        value = float(text)
    except ValueError:
        value = 0.0
    if not 0 < value <= MOST_SECONDS:
        raise argparse.ArgumentTypeError(f"{text} is no time limit, give seconds above 0 and at most {MOST_SECONDS}")
    return value


def _add_inspect(command: argparse.ArgumentParser) -> None:
    _add_files(command)
    command.add_argument("--write-brief", metavar="TOML", help="write a starting brief, every guess a commented line")


def _add_propose(command: argparse.ArgumentParser) -> None:
    _add_files(command)
    command.add_argument("--out", required=True, metavar="FOLDER", help="folder to write (swapped in when complete)")


def _add_judge(command: argparse.ArgumentParser) -> None:
    _add_files(command)
    command.add_argument(
        "--line",
        required=True,
        metavar="X1,Y1,X2,Y2",
        help="world metres, first point on the retained side; a line that meets two walls is judged at both",
    )


def _add_members(command: argparse.ArgumentParser) -> None:
    command.add_argument(
        "sections", nargs="+", metavar="SECTION.json", help="section definitions the results belong to"
    )
    command.add_argument(
        "results",
        metavar="RESULTS.csv",
        help="columns section,stage,member,quantity,value,unit (others survive); N, M positive for tension, M on the "
        "excavated face",
    )
    command.add_argument("--out", metavar="CSV", help="file to write (default: standard output)")


def _add_schema(command: argparse.ArgumentParser) -> None:
    command.add_argument("name", nargs="?", metavar="NAME", help="proposal or section (default: list them)")


COMMANDS: dict[str, tuple[str, Callable[[argparse.ArgumentParser], None]]] = {
    "inspect": ("what was found in the files, what is missing, what is in doubt", _add_inspect),
    "propose": ("the main job: sections proposed, judged and written", _add_propose),
    "judge": ("an engineer's own cut line, in the terms of the proposal", _add_judge),
    "members": ("analysis results back to the force of each real member", _add_members),
    "schema": ("the JSON Schema of what is written", _add_schema),
}


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command and return its exit code."""
    if not _rooms_are_ours():
        return 2
    parser = build_parser()
    options = parser.parse_args(arguments)
    if options.completion:
        from export.completion import write_script

        print(write_script(options.completion, parser), end="")
        return 0
    if not options.command:
        parser.print_help()
        return 2
    return _run(options)


def _run(options: argparse.Namespace) -> int:
    from ingest.errors import InputError

    try:
        from export import commands

        code, text = getattr(commands, f"run_{options.command}")(options)
        if text:
            print(text)
        sys.stdout.flush()
        return int(code)
    except InputError as error:
        _say(error, as_json=options.json)
        return 2
    except KeyboardInterrupt:
        print("cutworthy: interrupted, nothing was written", file=sys.stderr)
        return 130
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except Exception as fault:
        return _own_fault(fault, as_json=options.json)


def _say(error: InputError, *, as_json: bool) -> None:
    if as_json:
        rows = [
            {"file": error.file, "place": place, "problem": problem, "remedy": remedy}
            for place, problem, remedy in error.problems
        ]
        print(json.dumps({"errors": rows}, indent=2, ensure_ascii=False), file=sys.stderr)
        return
    for place, problem, remedy in error.problems:
        where = ", ".join(part for part in (error.file, place) if part)
        print(_printable(f"cutworthy: {where}: {problem}"), file=sys.stderr)
        print(_printable(f"  To fix: {remedy}"), file=sys.stderr)


def _printable(text: str) -> str:
    return "".join(sign if sign.isprintable() else f"\\x{ord(sign):02x}" for sign in text)


def _own_fault(fault: Exception, *, as_json: bool) -> int:
    import traceback

    with tempfile.NamedTemporaryFile("w", prefix="cutworthy-", suffix=".log", delete=False) as log:
        traceback.print_exc(file=log)
    text = f"a fault of the tool itself: {type(fault).__name__}; the log is {log.name}"
    print(json.dumps({"errors": [{"problem": text}]}) if as_json else f"cutworthy: {text}", file=sys.stderr)
    return 4


def _rooms_are_ours() -> bool:
    """Tell whether the three rooms are this project's: their names are common words, and pip overwrites silently."""
    from importlib import import_module

    for room in ("ingest", "sections", "export"):
        if getattr(import_module(room), "ROOM", None) != "cutworthy":
            print(
                f"cutworthy: another package named '{room}' has overwritten this one\n"
                "  To fix: install cutworthy into an environment of its own (see README)",
                file=sys.stderr,
            )
            return False
    return True


if __name__ == "__main__":
    sys.exit(main())
