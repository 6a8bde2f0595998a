"""Typed getters on parsed forms.

A wrong or missing field ends in Malformed with its place, never a KeyError.
"""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from gatecheck.parse.document import Malformed

if TYPE_CHECKING:
    from gatecheck.parse.sexpr import Node

# float() would also take "nan", "inf" and "1_000"; the formats know plain decimals and, rarely, exponents.
_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?", re.ASCII)
# Our choice: ten kilometres, far beyond any sheet or board; keeps sums and squares finite.
_LARGEST = 1e7


def text(node: Node, position: int = 1) -> str:
    """The atom at a position, quoted or bare."""
    item = node[position] if position < len(node) else None
    if not isinstance(item, str):
        raise Malformed(node.start, f"({node.head}) has no text where one belongs")
    return item


def number(node: Node, position: int = 1) -> float:
    """The finite number at a position.

    Millimetres or degrees, as the file has them.
    """
    word = text(node, position)
    value = float(word) if len(word) < 40 and _NUMBER.fullmatch(word) else None  # noqa: PLR2004 (digits)
    if value is None or abs(value) > _LARGEST:
        raise Malformed(node.start, f"({node.head}) has {word[:40]!r} where a number belongs")
    return value


def whole(node: Node, position: int = 1) -> int:
    """The whole number at a position, of at most twelve digits."""
    word = text(node, position)
    if not (word.isascii() and word.isdecimal() and len(word) <= 12):  # noqa: PLR2004 (digits)
        raise Malformed(node.start, f"({node.head}) has {word[:40]!r} where a whole number belongs")
    return int(word)


def numbers(node: Node, count: int, *, at_least: int | None = None) -> tuple[float, ...]:
    """`count` numbers after the keyword; those missing beyond `at_least` are zero."""
    needed = count if at_least is None else at_least
    given = min(len([item for item in node[1:] if isinstance(item, str)]), count)
    return tuple(number(node, i) if i <= max(given, needed) else 0.0 for i in range(1, count + 1))


def flag(node: Node) -> bool:
    """A boolean form in one of its spellings: `(locked)`, `(locked yes|no)`, `(locked true|false)`.

    The bare word `locked` is no form; who reads the enclosing one looks for it among its atoms.
    """
    words = node.atoms()
    return not words or words[0] in ("yes", "true")


def unescaped(name: str) -> str:
    """A name with the formats' `{slash}` and kin resolved, for comparing and for reading."""
    return _ESCAPE.sub(lambda match: _ESCAPES.get(match.group(1), match.group(0)), name) if "{" in name else name


_ESCAPE = re.compile(r"\{(\w+)\}")
_ESCAPES = {
    "slash": "/",
    "backslash": "\\",
    "lt": "<",
    "gt": ">",
    "colon": ":",
    "dblquote": '"',
    "quote": "'",
    "space": " ",
    "bar": "|",
    "brace": "{",
    "tab": "\t",
    "return": "\n",
}
