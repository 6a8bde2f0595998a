"""The commit hook, run by the pre-commit framework in a throw-away hardware repository."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest
import yaml

from tests import sheets
from tests.rules.project.test_board_out_of_step import PARTS, drawing

ROOT = Path(__file__).parent.parent
SAMPLES = ROOT / "sample_boards"
pytestmark = pytest.mark.alone


def git(folder: Path, *arguments: str) -> str:
    identity = ["-c", "user.name=a", "-c", "user.email=a@example.org", "-c", "protocol.file.allow=always"]
    done = subprocess.run(["git", *identity, *arguments], cwd=folder, capture_output=True, text=True, check=True)
    return done.stdout


@pytest.fixture(scope="module")
def hook(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """This checkout as a repository of its own, whatever is committed here."""
    copy = tmp_path_factory.mktemp("hook") / "gatecheck"
    listed = git(ROOT, "ls-files", "-co", "--exclude-standard").splitlines()
    for name in listed:
        if (ROOT / name).is_file() and not name.startswith(("tests/", "sample_boards/")):
            (copy / name).parent.mkdir(parents=True, exist_ok=True)
            shutil.copy(ROOT / name, copy / name)
    git(copy, "init", "-q")
    git(copy, "add", "-A")
    git(copy, "commit", "-qm", "all")
    return copy


@pytest.fixture
def repository(tmp_path: Path) -> Path:
    folder = tmp_path / "hardware"
    folder.mkdir()
    git(folder, "init", "-q")
    (folder / "README.md").write_text("a board\n")
    git(folder, "add", "README.md")
    git(folder, "commit", "-qm", "start")
    return folder


def try_hook(repository: Path, hook: Path) -> subprocess.CompletedProcess[str]:
    home = hook.parent / "cache"
    command = [sys.executable, "-m", "pre_commit", "try-repo", str(hook), "gatecheck", "--verbose", "--color", "never"]
    environment = {**os.environ, "PRE_COMMIT_HOME": str(home), "GIT_CONFIG_COUNT": "1"}
    environment |= {"GIT_CONFIG_KEY_0": "protocol.file.allow", "GIT_CONFIG_VALUE_0": "always"}
    return subprocess.run(
        command, cwd=repository, capture_output=True, text=True, check=False, timeout=600, env=environment
    )


def stage(repository: Path, sample: str, *names: str) -> None:
    folder = repository / sample
    folder.mkdir()
    for name in names:
        shutil.copy(SAMPLES / sample / name, folder)
    git(repository, "add", "-A")


def test_passes_quietly_on_the_healthy_board(repository: Path, hook: Path) -> None:
    stage(repository, "half_bridge", "half_bridge.kicad_pcb", "half_bridge.net", "gatecheck.yaml")
    done = try_hook(repository, hook)
    assert done.returncode == 0, done.stdout + done.stderr
    assert "Passed" in done.stdout
    assert "error" not in done.stdout


def test_blocks_on_the_faulty_board_once_though_two_of_its_files_are_staged(repository: Path, hook: Path) -> None:
    stage(repository, "bead_far", "bead_far.kicad_pcb", "gatecheck.yaml")
    shutil.copy(SAMPLES / "half_bridge" / "half_bridge.net", repository / "bead_far" / "bead_far.net")
    git(repository, "add", "-A")
    done = try_hook(repository, hook)
    assert done.returncode == 1, done.stdout + done.stderr
    assert "Failed" in done.stdout
    assert done.stdout.count("bead-distance") == 1
    assert "18.9 mm, at most 5 mm" in done.stdout


def test_blocks_a_commit_that_stages_only_a_sheet_of_the_project(repository: Path, hook: Path) -> None:
    (repository / "gatecheck.yaml").write_text("bead_policy: always\n")
    (repository / "drive.kicad_pro").write_text("{}")
    (repository / "drive.kicad_sch").write_text(sheets.file(sheets.sheet("Leg", "sheets/leg.kicad_sch")))
    (repository / "sheets").mkdir()
    leaf = repository / "sheets" / "leg.kicad_sch"
    leaf.write_text(drawing(PARTS | {"FB1": ("60R@100MHz 3A", "", PARTS["R1"][2])}))
    git(repository, "add", "-A")
    git(repository, "commit", "-qm", "a project")
    leaf.write_text(drawing(PARTS))
    git(repository, "add", "-A")
    done = try_hook(repository, hook)
    assert done.returncode == 1, done.stdout + done.stderr
    assert "sheets/leg.kicad_sch" in done.stdout
    assert done.stdout.count("series-bead") == 1


def test_is_not_asked_about_other_files(repository: Path, hook: Path) -> None:
    (repository / "notes.txt").write_text("nothing\n")
    git(repository, "add", "-A")
    done = try_hook(repository, hook)
    assert (done.returncode, "no files to check" in done.stdout) == (0, True)


def test_hook_file_is_sound() -> None:
    (entry,) = yaml.safe_load((ROOT / ".pre-commit-hooks.yaml").read_text())
    assert (entry["id"], entry["language"], entry["require_serial"]) == ("gatecheck", "python", True)
