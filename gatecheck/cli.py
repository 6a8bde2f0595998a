"""The command line: arguments, streams and exit codes. The only module that prints."""

from __future__ import annotations

import argparse
import contextlib
import gc
import os
import sys
from pathlib import Path
from typing import TYPE_CHECKING

from gatecheck import __version__

if TYPE_CHECKING:
    from collections.abc import Sequence

    from gatecheck.report_model import Report, Unread

OK, FINDINGS, USAGE, UNREADABLE, FAULT = range(5)
# One bad form tells enough; a file of nothing else would fill the screen.
_MOST_COMPLAINTS = 20
# New objects between two searches for cycles; our choice, above what a review of 20 MB keeps.
_COLLECT_AFTER = 1_000_000

_EPILOG = """\
examples:
  gatecheck review board.kicad_pcb            the main job: every gate, what to act on
  gatecheck review . --format json            all designs below this folder, for programs
  gatecheck gates board.kicad_pcb             the gate networks, and why each transistor has its role

exit codes:
  0  reviewed, nothing failing at or above the blocking level
  1  findings at or above the blocking level
  2  wrong use or settings
  3  a named file could not be read, or there was no design file
  4  a fault of gatecheck itself

Estimates for a design review, no proof of safety: gate drives sit beside lethal voltages.
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit code."""
    options = _parser().parse_args(arguments)
    # Trees of syntax hold no cycles: looking for them all the time costs a tenth of a large review.
    gc.set_threshold(_COLLECT_AFTER)
    for stream in (sys.stdout, sys.stderr):
        # A terminal that cannot show a character must not end the review.
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")
    try:
        return _guarded(options)
    except KeyboardInterrupt:
        return 130


def _guarded(options: argparse.Namespace) -> int:
    from gatecheck.errors import GatecheckError, InputError, UsageError  # noqa: PLC0415 (after --help)
    from gatecheck.settings import SettingsError  # noqa: PLC0415 (the same)

    try:
        code: int = options.run(options)
    except InputError as why:
        _complain(why.message, why.next_step, why.excerpt, _place(why.path, why.line, why.column))
        return UNREADABLE
    except SettingsError as why:
        for wrong in why.mistakes:
            _complain(wrong.message, wrong.next_step, wrong.excerpt, _place(wrong.path, wrong.line, wrong.column))
        return USAGE
    except UsageError as why:
        _complain(str(why), why.next_step)
        return USAGE
    except GatecheckError as why:
        return _fault(options, why, str(why))
    except Exception as why:  # noqa: BLE001 (no traceback reaches a user)
        return _fault(options, why, f"{type(why).__name__}: {why}")
    return code


def _fault(options: argparse.Namespace, why: BaseException, message: str) -> int:
    if options.verbose:
        import traceback  # noqa: PLC0415 (only now)

        traceback.print_exception(why, file=sys.stderr)
    _complain(f"a fault of gatecheck itself: {message}", "please report it with the file; -v shows the trace")
    return FAULT


def _place(path: str, line: int, column: int) -> str:
    return f"{path}:{line}:{column}" if line else path


def _complain(message: str, next_step: str, excerpt: str = "", place: str = "") -> None:
    from gatecheck.report.wording import safe  # noqa: PLC0415 (after --help)

    where = f"{safe(place)}: " if place else ""
    lines = [f"gatecheck: {where}{safe(message)}", *(f"    {safe(line)}" for line in (excerpt, next_step) if line)]
    with contextlib.suppress(OSError, ValueError):  # nobody listens to standard error: the exit code says it all
        print("\n".join(lines), file=sys.stderr, flush=True)


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="gatecheck",
        description="Reads hardware design files and checks that every power-switch gate is damped.",
        epilog=_EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"gatecheck {__version__}")
    verbs = parser.add_subparsers(metavar="COMMAND", required=True)
    shared = argparse.ArgumentParser(add_help=False, allow_abbrev=False)
    shared.add_argument(
        "--format", choices=("terminal", "json"), default="terminal", help="what to write (default: terminal)"
    )
    shared.add_argument("--output", type=Path, metavar="FILE", help="write to a file instead of standard output")
    shared.add_argument(
        "--block-at",
        choices=("note", "warning", "error"),
        help="level that makes the exit code 1 (default: what the project file says, else error)",
    )
    shared.add_argument("-q", "--quiet", action="store_true", help="review: only what fails; nothing when all is well")
    shared.add_argument("--color", choices=("auto", "always", "never"), default="auto", help="NO_COLOR is honoured too")
    shared.add_argument(
        "--allow-outside", action="store_true", help="read sheets that lie outside the repository as well"
    )
    shared.add_argument("-v", "--verbose", action="store_true", help="show the trace of a fault")
    paths = {"metavar": "PATH", "nargs": "+", "type": Path}
    for name, run, what in (
        ("review", _review, "review the gate drives of a design: the main job"),
        ("gates", _gates, "draw the gate networks, and say why each transistor has its role"),
    ):
        verb = verbs.add_parser(name, parents=[shared], help=what, description=what, allow_abbrev=False)
        verb.add_argument("paths", help="a board, schematic, netlist, project file, or a folder", **paths)  # type: ignore[arg-type]
        verb.set_defaults(run=run)
    nets = verbs.add_parser("nets", parents=[shared], help="the connectivity as read from one file", allow_abbrev=False)
    nets.add_argument("file", metavar="FILE", type=Path, help="a board, schematic or netlist")
    nets.set_defaults(run=_nets)
    rules = verbs.add_parser(
        "rules", parents=[shared], help="the rules; one rule's reason, limits, sources", allow_abbrev=False
    )
    rules.add_argument("id", metavar="ID", nargs="?", help="one rule, whole")
    rules.set_defaults(run=_rules)
    return parser


def _review(options: argparse.Namespace) -> int:
    from gatecheck.finding import Level  # noqa: PLC0415 (after --help)
    from gatecheck.review import review  # noqa: PLC0415 (the same)

    report = review(
        options.paths, block_at=Level(options.block_at) if options.block_at else None, outside=options.allow_outside
    )
    if options.format == "json":
        from gatecheck.report.to_json import report_json  # noqa: PLC0415 (only what is asked for)

        _write(options, report_json(report))
    else:
        from gatecheck.report.to_terminal import report_text  # noqa: PLC0415 (the same)

        _write(options, report_text(report, color=_colored(options), quiet=options.quiet))
    return _outcome(report)


def _gates(options: argparse.Namespace) -> int:
    from gatecheck.review import review  # noqa: PLC0415 (after --help)

    report = review(options.paths, with_rules=False, outside=options.allow_outside)
    if options.format == "json":
        from gatecheck.report.to_json import report_json  # noqa: PLC0415 (only what is asked for)

        _write(options, report_json(report))
    else:
        from gatecheck.report.to_terminal import gates_text  # noqa: PLC0415 (the same)

        _write(options, gates_text(report, color=_colored(options)))
    return _outcome(report)


def _nets(options: argparse.Namespace) -> int:
    from gatecheck.design.build import pins_by_net  # noqa: PLC0415 (after --help)
    from gatecheck.load import load_design  # noqa: PLC0415 (the same)

    loaded = load_design(options.file, outside=options.allow_outside)
    nets = pins_by_net(loaded.design)
    if options.format == "json":
        from gatecheck.report.to_json import nets_json  # noqa: PLC0415 (only what is asked for)

        _write(options, nets_json(loaded.source.path, nets))
    else:
        from gatecheck.report.to_terminal import nets_text  # noqa: PLC0415 (the same)

        _write(options, nets_text(loaded.source.path, nets, color=_colored(options)))
    for trouble in loaded.troubles[:_MOST_COMPLAINTS]:
        _complain(
            trouble.message, trouble.next_step, trouble.excerpt, _place(trouble.path, trouble.line, trouble.column)
        )
    return UNREADABLE if loaded.troubles else OK


def _rules(options: argparse.Namespace) -> int:
    from gatecheck.registry import load_rules, rule_by_id  # noqa: PLC0415 (after --help)

    rules = (rule_by_id(options.id),) if options.id else load_rules()
    if options.format == "json":
        from gatecheck.report.to_json import rules_json  # noqa: PLC0415 (only what is asked for)

        _write(options, rules_json(rules))
    else:
        from gatecheck.report.to_terminal import rules_text  # noqa: PLC0415 (the same)

        _write(options, rules_text(rules, color=_colored(options), whole=bool(options.id)))
    return OK


def _write(options: argparse.Namespace, text: str) -> None:
    if options.output is None:
        _show(text)
        return
    from gatecheck.files import write_text  # noqa: PLC0415 (only what is asked for)

    write_text(options.output, text)


def _show(text: str) -> None:
    """To standard output. A reader that went away has read enough; a full disk is said, and ends in 2."""
    from gatecheck.errors import UsageError  # noqa: PLC0415 (after --help)

    if sys.stdout is None:
        return
    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except BrokenPipeError:
        # Python flushes once more at exit; there must be something left to flush into.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    except OSError as why:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        raise UsageError(f"standard output cannot be written to ({why.strerror})", "use --output FILE") from None


def _outcome(report: Report) -> int:
    for entry in report.unread:
        _complain_unread(entry)
    if report.unread or not report.inputs:
        return UNREADABLE
    return FINDINGS if report.blocked else OK


def _complain_unread(entry: Unread) -> None:
    _complain(entry.message, entry.next_step, entry.excerpt, _place(entry.path, entry.line, entry.column))


def _colored(options: argparse.Namespace) -> bool:
    """--color beats NO_COLOR beats whether a person is looking."""
    if options.output is not None or options.color == "never":
        return bool(options.color == "always")
    if options.color == "always":
        return True
    return not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb" and sys.stdout.isatty()
