"""Bus names: vectors `D[0..7]`, groups `USB{DP DM}`, aliases, and the members each stands for."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

_VECTOR = re.compile(r"([^\s\[\]]*)\[(\d{1,6})\.\.(\d{1,6})\]([+\-PN]?)")
_OVERBAR = re.compile(r"~\{(.*)\}")
# Our choice: bounds the members of a hostile bus.
_MOST_MEMBERS = 4096
_MOST_NESTED = 8


def bus_members(name: str, aliases: Mapping[str, Sequence[str]], depth: int = 0) -> list[str] | None:
    """The members of a bus name in order; None if it is the name of a single net.

    Members of a prefixed group carry the prefix and a dot. `{` after `~`, `^`, `_` or `$` is formatting and
    opens no group.
    """
    if depth > _MOST_NESTED:
        return None
    vector = _vector(name)
    if vector is not None:
        return vector
    group = _group(name)
    if group is None:
        if depth == 0 and name in aliases:
            return None  # an alias is a bus only inside a group
        return _alias(name, aliases, depth) if depth else None
    prefix, inner = group
    found: list[str] = []
    for piece in inner:
        members = bus_members(piece, aliases, depth + 1) or [piece]
        found += [f"{prefix}.{member}" if prefix else member for member in members]
    return found[:_MOST_MEMBERS]


def _alias(name: str, aliases: Mapping[str, Sequence[str]], depth: int) -> list[str] | None:
    if name not in aliases:
        return None
    found: list[str] = []
    for piece in aliases[name]:
        found += bus_members(piece, aliases, depth + 1) or [piece]
    return found[:_MOST_MEMBERS]


def _vector(name: str) -> list[str] | None:
    bar = _OVERBAR.fullmatch(name)
    match = _VECTOR.fullmatch(bar.group(1) if bar else name)
    if match is None:
        return None
    first, last = int(match.group(2)), int(match.group(3))
    if first == last or abs(first - last) >= _MOST_MEMBERS:
        return None
    step = 1 if last > first else -1
    names = [f"{match.group(1)}{i}{match.group(4)}" for i in range(first, last + step, step)]
    names.sort(key=lambda member: int(re.sub(r"\D*(\d+)[+\-PN]?$", r"\1", member)))
    return [f"~{{{member}}}" for member in names] if bar else names


def _group(name: str) -> tuple[str, list[str]] | None:
    """Prefix and pieces of `PREFIX{A B, C}`; None where the brace only formats text."""
    if not name.endswith("}"):
        return None
    depth = 0
    for i in range(len(name) - 1, -1, -1):
        depth += (name[i] == "}") - (name[i] == "{")
        if depth == 0:
            break
    if i > 0 and name[i - 1] in "~^_$":
        return None
    inner, pieces, piece, level = name[i + 1 : -1], [], "", 0
    for c in inner:
        level += (c == "{") - (c == "}")
        if level == 0 and c in " ,":
            pieces.append(piece)
            piece = ""
        else:
            piece += c
    pieces.append(piece)
    members = [piece for piece in pieces if piece]
    return (name[:i], members) if members else None
