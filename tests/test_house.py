"""The house's own rules, by machine: linting, types, import directions, sizes, and a test for every rule."""

from __future__ import annotations

import ast
import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
CODE = sorted([*(ROOT / "gatecheck").rglob("*.py"), *(ROOT / "rules").rglob("*.py")])
RULES = [path for path in (ROOT / "rules").rglob("*.py") if path.name != "__init__.py"]
TOP_LEVEL = {"README.md", "DEVELOPERS.md", "pyproject.toml", "gatecheck", "rules", "tests", "sample_boards"}


@pytest.mark.parametrize(
    "tool",
    [
        ["ruff", "check", "--no-cache", "."],
        ["ruff", "format", "--no-cache", "--check", "."],
        ["mypy", "--no-incremental"],
    ],
    ids=["lint", "format", "types"],
)
def test_tools_are_content(tool: list[str]) -> None:
    done = subprocess.run([sys.executable, "-m", *tool], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout[-3000:] + done.stderr[-1000:]


def test_imports_point_one_way() -> None:
    command = [str(Path(sys.executable).with_name("lint-imports")), "--no-cache"]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout[-3000:] + done.stderr[-1000:]


def test_top_level_is_fixed() -> None:
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True).stdout.split(
        "\n"
    )
    top = {name.split("/")[0] for name in listed if name}
    assert {name for name in top if not name.startswith(".")} <= TOP_LEVEL


def test_files_and_functions_stay_small() -> None:
    for path in [*CODE, *(ROOT / "tests").rglob("*.py")]:
        lines = path.read_text().splitlines()
        assert len(lines) <= (120 if path in RULES else 400), path
        for node in ast.walk(ast.parse("\n".join(lines))):
            if isinstance(node, ast.FunctionDef):
                assert (node.end_lineno or 0) - node.lineno < 60, f"{path}: {node.name}"


OPENING = {"open", "read_text", "read_bytes", "write_text", "write_bytes", "fdopen"}
# The catalogue reads its own data beside it; loading a design, and looking for the owner of a sheet, go
# through files.py under the same name.
MAY_OPEN = {
    "gatecheck/files.py",
    "gatecheck/catalogue/load.py",
    "gatecheck/load.py",
    "gatecheck/parse/sheet_owners.py",
    "gatecheck/cli.py",
}


def test_only_one_module_opens_files_and_one_prints() -> None:
    for path in CODE:
        name = path.relative_to(ROOT).as_posix()
        calls = [node.func for node in ast.walk(ast.parse(path.read_text())) if isinstance(node, ast.Call)]
        plain = {call.id for call in calls if isinstance(call, ast.Name)}
        methods = {call.attr for call in calls if isinstance(call, ast.Attribute)}
        assert name in MAY_OPEN or not (plain | methods) & OPENING, name
        assert name == "gatecheck/cli.py" or "print" not in plain, name


@pytest.mark.parametrize("path", RULES, ids=lambda path: path.stem)
def test_every_rule_has_its_four_cases(path: Path) -> None:
    mirror = ROOT / "tests" / path.relative_to(ROOT).with_name(f"test_{path.name}")
    names = "\n".join(re.findall(r"def (test_\w+)", mirror.read_text()))
    for case in ("fires", "quiet", "limit"):
        assert case in names, f"{mirror}: no test named after {case!r}"
    assert re.search(r"undecided|likely|nothing_is_said", names), f"{mirror}: no test of a missing datum"


def test_rules_do_not_depend_on_their_order() -> None:
    from gatecheck.registry import load_rules

    assert [rule.id for rule in load_rules()] == sorted(rule.id for rule in load_rules())
    assert len(load_rules()) == len(RULES)


def test_no_machine_paths_in_tracked_files() -> None:
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True).stdout.split(
        "\n"
    )
    for name in listed:
        path = ROOT / name
        if name and path.is_file() and path != Path(__file__):
            assert not re.search(r"/(?:home|Users)/\w+/", path.read_text(errors="replace")), name
