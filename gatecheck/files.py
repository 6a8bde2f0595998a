"""The only module that opens files. Design files are hostile input, so sizes and kinds are checked here."""

from __future__ import annotations

import os
import stat
import tempfile
from typing import TYPE_CHECKING

from gatecheck.errors import InputError, UsageError

if TYPE_CHECKING:
    from pathlib import Path

# Our choice: more than twice the largest public boards seen (about 100 MB); bounds memory and time.
MAX_BYTES = 256 * 1024 * 1024
# What a slip of the hand must not overwrite.
_DESIGN_SUFFIXES = (".kicad_pcb", ".kicad_sch", ".kicad_pro", ".kicad_sym", ".net", ".sch", ".yaml", ".yml")


def read_bytes(path: Path, *, max_bytes: int = MAX_BYTES) -> bytes:
    """The bytes of a regular file of at most `max_bytes`.

    Raises:
        InputError: if it is missing, no regular file, too large or not readable.
    """
    shown = shown_path(path)
    try:
        # O_NONBLOCK: opening a named pipe must not wait for a writer that never comes.
        handle = os.open(path, os.O_RDONLY | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_BINARY", 0))
    except FileNotFoundError:
        raise InputError("there is no such file", "check the spelling of the path", shown) from None
    except PermissionError:
        raise InputError("this file may not be read", "give read permission, then try again", shown) from None
    except (OSError, ValueError) as why:
        raise InputError(f"cannot be opened ({_reason(why)})", "name a design file", shown) from None
    found = os.fstat(handle)
    if not stat.S_ISREG(found.st_mode):
        os.close(handle)
        what = "this is a folder" if stat.S_ISDIR(found.st_mode) else "this is no regular file"
        raise InputError(what, "name a design file", shown)
    with os.fdopen(handle, "rb") as stream:
        if found.st_size > max_bytes:
            raise InputError(
                f"the file has {found.st_size / 1e6:.0f} MB; at most {max_bytes / 1e6:.0f} MB are read",
                "remove embedded files and models from the design, then save it again",
                shown,
            )
        try:
            return stream.read(max_bytes + 1)
        except OSError as why:
            raise InputError(f"cannot be read ({_reason(why)})", "name a design file", shown) from None


def write_text(path: Path, text: str) -> None:
    """Write a report whole or not at all: into a file beside the target, then renamed.

    A link is followed to what it names; a pipe or device is written to as it is.

    Raises:
        UsageError: if the target is a design or project file, or may not be written to.
    """
    if path.suffix.lower() in _DESIGN_SUFFIXES:
        raise UsageError(f"{shown_path(path)}: a report is never written over a design", "name another file")
    try:
        path = path.resolve()
        if path.exists() and not path.is_file():
            path.write_text(text, encoding="utf-8")
            return
        handle, name = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.")
        try:
            with os.fdopen(handle, "w", encoding="utf-8", newline="\n", errors="replace") as stream:
                stream.write(text)
            # mkstemp makes private files; a report is as public as the umask says.
            mask = os.umask(0)
            os.umask(mask)
            os.chmod(name, 0o666 & ~mask)  # noqa: PTH101 (a plain name, no Path at hand)
            os.replace(name, path)  # noqa: PTH105 (the same)
        except BaseException:
            os.unlink(name)  # noqa: PTH108 (the same)
            raise
    except (OSError, ValueError) as why:
        raise UsageError(
            f"{shown_path(path)}: the report cannot be written ({_reason(why)})",
            "name a file in a folder that exists and may be written to",
        ) from None


def shown_path(path: Path) -> str:
    """The path as reports show it: relative to the working directory where it lies below, with slashes."""
    try:
        here = os.path.relpath(path)
    except (OSError, ValueError):
        return str(path)
    return (str(path) if here.startswith("..") else here).replace(os.sep, "/")


def _reason(why: OSError | ValueError) -> str:
    return (why.strerror if isinstance(why, OSError) and why.strerror else str(why)).lower()
