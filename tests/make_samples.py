"""Writes the sample boards: run `python tests/make_samples.py` from anywhere."""

from __future__ import annotations

import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent


def main() -> None:
    sys.path.insert(0, str(ROOT))  # this file is run directly, so its repository is not on the path yet
    from tests.sample_maker.samples import sample_files

    for name, text in sample_files().items():
        path = ROOT / "sample_boards" / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8", newline="\n")
        print(path.relative_to(ROOT).as_posix())


if __name__ == "__main__":
    main()
