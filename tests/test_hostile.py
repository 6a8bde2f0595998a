"""Broken and hostile input: one clear error with a place, or an honest partial report; never a traceback."""

from __future__ import annotations

import contextlib
import io
import json
import os
import random
import subprocess
import sys
import time
from pathlib import Path

import pytest

from gatecheck import files
from gatecheck.cli import main

SAMPLES = Path("sample_boards")
BOARD = SAMPLES / "half_bridge" / "half_bridge.kicad_pcb"
NETLIST = SAMPLES / "half_bridge" / "half_bridge.net"
SHEET = SAMPLES / "half_bridge" / "half_bridge.kicad_sch"
HEAD = (
    '(kicad_pcb (version 20241229) (generator "x") (layers (0 "F.Cu" signal) (2 "B.Cu" signal))'
    ' (net 0 "") (net 1 "A")\n'
)
PAD = '(pad "1" smd rect (at 0 0) (size 1 1) (layers "F.Cu") (net 1 "A"))'


def run(*arguments: str | Path) -> tuple[int, str, str]:
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = main([str(argument) for argument in arguments])
    return code, out.getvalue(), err.getvalue()


def footprint(pad: str = PAD, reference: str = "R1") -> str:
    return f'(footprint "Own:X" (layer "F.Cu") (at 1 2) (property "Reference" "{reference}") {pad})\n'


BROKEN: dict[str, tuple[bytes, str]] = {
    "empty": (b"", "empty"),
    "blank": (b" \n\t\n", "empty"),
    "binary": (b"\x7fELF\x02\x01\x00\x00" * 50, "no UTF-8 text"),
    "utf-16": ("(kicad_pcb)".encode("utf-16"), "no UTF-8 text"),
    "prose": (b"Dear all,\nthe board is ready.\n", "no board, schematic or netlist"),
    "xml netlist": (b'<?xml version="1.0"?><export></export>', "netlist in XML"),
    "legacy schematic": (b"EESchema Schematic File Version 4\n", "legacy text schematic"),
    "old board": (b"PCBNEW-BOARD Version 1\n", "before S-expressions"),
    "spice": (b"* source x\nR1 a b 1\n.end\n", "circuit-simulator"),
    "symbol library": (b'(kicad_symbol_lib (version 20241209) (symbol "R"))', "symbol library"),
    "empty sheet": (b"(kicad_sch (version 20250114))", "no part is drawn"),
    "settings": (b'{"board": {}}', "project or settings file"),
    "archive": (b"PK\x03\x04" + b"\x01" * 100, "an archive"),
    "other form": (b"(export_list (a b))", "no board, schematic or netlist"),
    "empty board": (HEAD.encode() + b")", "empty board"),
    "stub board": (b"(kicad_pcb (version 4) (host pcbnew stub))", "empty board"),
    "empty netlist": (b'(export (version "E") (components) (nets))', "empty netlist"),
    "cut in a form": ((HEAD + footprint()).encode(), "never closed"),
    "cut in text": ((HEAD + '(footprint "Own').encode(), "never ends"),
    "too many brackets": ((HEAD + footprint() + "))").encode(), "no opening one"),
    "two roots": ((HEAD + footprint() + ") (kicad_pcb)").encode(), "after the form"),
    "words before": (b"hello (kicad_pcb)", "no board, schematic or netlist"),
    "nesting bomb": (HEAD.encode() + b"(" * 3_000_000, "nest deeper"),
    "quote bomb": (b'(kicad_pcb "' + b'\\"' * 2_000_000, "never ends"),
    "nan": ((HEAD + footprint(PAD.replace("(at 0 0)", "(at nan 0)")) + ")").encode(), "'nan' where a number belongs"),
    "infinite": ((HEAD + footprint(PAD.replace("(at 0 0)", "(at inf 0)")) + ")").encode(), "'inf'"),
    "huge": ((HEAD + footprint(PAD.replace("(at 0 0)", "(at 1e300 0)")) + ")").encode(), "'1e300'"),
    "word for number": ((HEAD + footprint(PAD.replace("(at 0 0)", "(at left 0)")) + ")").encode(), "'left'"),
    "no number": ((HEAD + footprint(PAD.replace("(at 0 0)", "(at)")) + ")").encode(), "has no text"),
    "short pad": ((HEAD + footprint('(pad "1")') + ")").encode(), "a pad needs"),
    "version word": (HEAD.replace("20241229", "newest").encode() + footprint().encode() + b")", "'newest'"),
}


@pytest.mark.parametrize(("data", "message"), BROKEN.values(), ids=BROKEN)
@pytest.mark.parametrize("verb", ["review", "gates", "nets"])
def test_broken_files_end_in_one_clear_error(tmp_path: Path, verb: str, data: bytes, message: str) -> None:
    path = tmp_path / "broken.kicad_pcb"
    path.write_bytes(data)
    code, _, err = run(verb, path)
    assert code == 3
    assert message in err
    assert "broken.kicad_pcb" in err
    assert "Traceback" not in err
    assert len(err.splitlines()) >= 2 or "empty" in err, "an error says what to do next"


def test_the_place_of_a_bad_number_is_its_own_line_and_column(tmp_path: Path) -> None:
    path = tmp_path / "b.kicad_pcb"
    path.write_text(HEAD + footprint() + footprint("\n  " + PAD.replace("(at 0 0)", "(at nan 0)"), "R2") + ")")
    code, out, err = run("review", path, "--format", "json")
    (entry,) = json.loads(out)["unread"]
    line = path.read_text().splitlines()[entry["line"] - 1]
    assert line[entry["column"] - 1 :].startswith("(at nan 0)")
    assert entry["excerpt"].startswith("(at nan 0)")
    assert (code, entry["path"] in err) == (3, True)


def test_one_bad_form_does_not_lose_the_others(tmp_path: Path) -> None:
    path = tmp_path / "b.kicad_pcb"
    path.write_text(BOARD.read_text().replace("(at ", "(at nan ", 1))
    code, out, _ = run("review", path, "--format", "json")
    report = json.loads(out)
    assert code == 3
    assert len(report["unread"]) == 1
    assert report["inputs"]


def test_one_bad_file_does_not_stop_the_others(tmp_path: Path) -> None:
    bad = tmp_path / "bad.kicad_pcb"
    bad.write_bytes(b"(kicad_pcb")
    code, out, err = run("review", bad, BOARD, "--format", "json")
    report = json.loads(out)
    assert code == 3
    assert [entry["path"] for entry in report["inputs"] if entry["kind"] == "board"] == [str(BOARD)]
    assert len(report["gates"]) == 2
    assert "bad.kicad_pcb" in err


def test_missing_unreadable_and_irregular_files(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe.kicad_pcb"
    os.mkfifo(pipe)
    (tmp_path / "locked.kicad_pcb").write_text("a file is no folder")
    for path, message in (
        (tmp_path / "none.kicad_pcb", "no such file"),
        (pipe, "no regular file"),
        (Path("/dev/zero"), "no regular file"),
        (tmp_path / ("x" * 300), "cannot be opened"),
        (tmp_path / "a\0b", "cannot be opened"),
        (tmp_path / "locked.kicad_pcb" / "x.kicad_pcb", "cannot be opened"),
    ):
        code, _, err = run("review", path)
        assert (code, message in err) == (3, True), (path, err)


def test_a_folder_without_designs_is_said_so(tmp_path: Path) -> None:
    (tmp_path / ".git").mkdir()
    (tmp_path / ".git" / "x.kicad_pcb").write_text("(kicad_pcb)")
    (tmp_path / "_autosave-x.kicad_pcb").write_text("(kicad_pcb)")
    code, _, err = run("review", tmp_path)
    assert (code, "no board, schematic or netlist in this folder" in err) == (3, True)


def test_oversized_files_are_refused_before_they_are_read(tmp_path: Path) -> None:
    path = tmp_path / "b.kicad_pcb"
    with path.open("wb") as stream:
        stream.truncate(files.MAX_BYTES + 1)
    started = time.perf_counter()
    code, _, err = run("review", path)
    assert (code, "at most" in err) == (3, True)
    assert time.perf_counter() - started < 1


def test_control_characters_and_markup_in_names_reach_no_terminal(tmp_path: Path) -> None:
    path = tmp_path / "b.net"
    evil = "\x1b]0;owned\x07[/GATE] \u202e[red]"
    path.write_text(NETLIST.read_text().replace('"Q1"', f'"{evil}"'))
    for color in ("always", "never"):
        for verb in ("review", "gates", "nets"):
            code, out, _ = run(verb, path, "--color", color)
            assert code == 0
            assert "\x1b]0" not in out
            assert "\x07" not in out
            assert "\u202e" not in out
            assert "\\u001b]0;owned\\u0007[/GATE]" in out, "the name is still readable"
    _, out, _ = run("review", path, "--format", "json")
    assert out.isascii()


def test_duplicate_references_are_two_parts(tmp_path: Path) -> None:
    path = tmp_path / "b.kicad_pcb"
    path.write_text(HEAD + footprint() + footprint() + footprint(reference="") + footprint(reference="REF**") + ")")
    code, out, _ = run("review", path, "--format", "json")
    assert code == 0
    assert json.loads(out)["inputs"][0]["kind"] == "board"
    code, out, _ = run("nets", path, "--format", "json")
    assert json.loads(out)["nets"] == {"A": [["", "1"], ["R1", "1"], ["REF**", "1"]]}


def test_parts_without_nets_and_boards_without_copper_are_reviewed(tmp_path: Path) -> None:
    path = tmp_path / "b.kicad_pcb"
    path.write_text(
        HEAD + footprint('(pad "1" smd rect (at 0 0) (size 1 1) (layers "F.Cu"))') + footprint("", "H1") + ")"
    )
    code, out, _ = run("review", path)
    assert (code, "no switching gates" in out) == (0, True)


MEMORY = """
import re, sys
from gatecheck.cli import main
code = main(["review", sys.argv[1]])
print(int(re.search(r"VmHWM:\\s+(\\d+)", open("/proc/self/status").read())[1]) * 1024)
sys.exit(code)
"""


@pytest.mark.alone
@pytest.mark.parametrize(
    "data",
    [
        b"(kicad_pcb " + b"a" * 100_000_000 + b")",
        b'(kicad_pcb (footprint "' + b"a" * 100_000_000 + b'"))',
        b"(kicad_pcb " + b"\\" * 50_000_000 + b'"' + b")",
        b"(kicad_pcb " + b"()" * 5_000_000 + b")",
        b'(export (version "E") (components (comp (ref "' + b"R" * 50_000_000 + b'"))) (nets))',
    ],
    ids=["one word", "one text", "backslashes", "empty forms", "one reference"],
)
def test_a_hundred_megabytes_of_nothing_is_bounded_in_time_and_memory(tmp_path: Path, data: bytes) -> None:
    path = tmp_path / "b.kicad_pcb"
    path.write_bytes(data)
    # sexpdata cannot read these at all; reading the bytes is the yardstick for time.
    done = subprocess.run([sys.executable, "-c", MEMORY, path], capture_output=True, text=True, timeout=60, check=False)
    assert done.returncode in (0, 3), done.stderr[-500:]
    assert "Traceback" not in done.stderr
    used = int(done.stdout.splitlines()[-1])
    # A form per two bytes is more index than text; no design comes near, and it stays bounded.
    assert used < 60e6 + (9 if b"()()" in data else 6) * len(data)


ODD = (b"(", b")", b'"', b"\\", b" nan ", b" 1e999 ", b"(net)", b"\x00")


def mutated(data: bytes, rng: random.Random) -> bytes:
    """One to three of: cut, delete, double, reverse, overwrite, insert brackets, quotes or odd words."""
    for _ in range(rng.randint(1, 3)):
        at, length = rng.randrange(len(data)), rng.choice((1, 1, 2, 8, 60, 2000))
        before, piece, after = data[:at], data[at : at + length], data[at + length :]
        data = rng.choice(
            (
                before,
                before + after,
                before + piece + piece + after,
                before + piece[::-1] + after,
                before + rng.randbytes(len(piece)) + after,
                before + rng.choice(ODD) + piece + after,
            )
        )
        if not data:
            return b"("
    return data


@pytest.mark.parametrize(
    "sample", [BOARD, NETLIST, SAMPLES / "half_bridge_v10" / "half_bridge.kicad_pcb", SHEET], ids=str
)
def test_mutations_of_the_samples_never_end_in_a_traceback(tmp_path: Path, sample: Path) -> None:
    rng, data = random.Random(20260101), sample.read_bytes()  # noqa: S311 (no secret)
    path = tmp_path / f"m{sample.suffix}"
    codes = set()
    for i in range(250):
        path.write_bytes(mutated(data, rng))
        code, out, err = run("review", path, "--format", "json")
        assert code in (0, 1, 3), (i, err)
        codes.add(code)
        report = json.loads(out)
        assert (code == 3) == bool(report["unread"]), i
        if code == 3:
            assert all(entry["message"] for entry in report["unread"])
            assert err
    assert {0, 3} <= codes, "the mutations reach both ends"


@pytest.mark.parametrize("suffix", [".kicad_sch", ".kicad_pcb", ".kicad_pro", ".net", ".sch"])
def test_a_name_that_no_system_holds_is_one_error(suffix: str) -> None:
    code, _, err = run("review", Path("x" * 5000 + suffix))
    assert (code, "cannot be opened" in err) == (3, True)
