"""Characters to trees: sexpdata's parser, taught to change nothing.

Plain sexpdata turns bare `nil`, `t`, `5E210000` and `007` into something else, splits at `[`, takes `;` and
`'` for syntax and keeps no positions. Here every atom stays the text it is, quoted text is told from bare
words, and every list knows where it began.

The caller has checked brackets, quotes and depth (see spans), so parsing itself cannot fail.
"""

from __future__ import annotations

import re
from typing import TypeAlias

from sexpdata import Parser

Item: TypeAlias = "str | Node"


class Text(str):
    """An atom that stood in quotes; a bare word is a plain str."""

    __slots__ = ()


class Node(list[Item]):
    """One bracketed form: its atoms and forms in file order, and the offset of its opening bracket."""

    __slots__ = ("start",)

    start: int

    @property
    def head(self) -> str:
        """The first atom, the form's keyword; empty for an empty form or one that starts with a form."""
        first = self[0] if self else ""
        return first if isinstance(first, str) else ""

    def atoms(self) -> list[str]:
        """The atoms after the keyword, without the forms between them."""
        return [item for item in self[1:] if isinstance(item, str)]

    def forms(self, head: str | None = None) -> list[Node]:
        """The forms inside, all or those of one keyword."""
        return [item for item in self if isinstance(item, Node) and (head is None or item.head == head)]

    def form(self, head: str) -> Node | None:
        """The first form of that keyword."""
        return next((item for item in self if isinstance(item, Node) and item.head == head), None)


# ASCII blanks only: a no-break space is part of a bare word, as in an old file's `10\u00a0k`.
_WORD_END = re.compile(r'[()"\s]', re.ASCII)
_TEXT_END = re.compile(r'[^"\\]*(?:\\.[^"\\]*)*', re.DOTALL)
_SPACE = re.compile(r"\s*", re.ASCII)
_ESCAPE = re.compile(r"\\(x[0-9A-Fa-f]{1,2}|[0-7]{1,3}|.)", re.DOTALL)
_ESCAPED = {"n": "\n", "r": "\r", "t": "\t", "a": "\a", "b": "\b", "f": "\f", "v": "\v"}


class Reader(Parser):  # type: ignore[misc]  # sexpdata ships no types
    """sexpdata's recursive descent with its conversions taken out and positions put in.

    One reader serves many forms: building one compiles patterns, which would cost more than a short form.
    """

    def __init__(self) -> None:
        super().__init__("", nil=None, true=None, false=None, line_comment="")
        self.brackets = {"(": ")"}
        self.closing_brackets = {")"}

    def form(self, text: str) -> Node:
        """The tree of one form; `text` runs from its opening to its closing bracket."""
        self.string = text
        return self.parse_sexp(1)[1]

    def parse_str(self, i: int) -> tuple[int, str]:
        """The text that starts at a quote, and where it ends."""
        end = _TEXT_END.match(self.string, i + 1).end()  # type: ignore[union-attr]  # matches empty too
        raw = self.string[i + 1 : end]
        return end + 1, _ESCAPE.sub(_unescape, raw) if "\\" in raw else raw

    def parse_atom(self, i: int) -> tuple[int, str]:
        """The bare word at `i`, unchanged."""
        match = _WORD_END.search(self.string, i)
        end = match.start() if match else len(self.string)
        return end, self.string[i:end]

    def parse_sexp(self, i: int) -> tuple[int, Node]:
        """The items from `i` to the closing bracket."""
        string, node = self.string, Node()
        node.start = i - 1
        skip = _SPACE.match
        i = skip(string, i).end()  # type: ignore[union-attr]  # matches empty too
        while i < len(string):
            c = string[i]
            if c == "(":
                i, inner = self.parse_sexp(i + 1)
                node.append(inner)
                i += 1
            elif c == ")":
                break
            elif c == '"':
                i, text = self.parse_str(i)
                node.append(Text(text))
            else:
                i, word = self.parse_atom(i)
                node.append(word)
            i = skip(string, i).end()  # type: ignore[union-attr]
        return i, node


def _unescape(match: re.Match[str]) -> str:
    code = match.group(1)
    if code[0] == "x" and len(code) > 1:
        return chr(int(code[1:], 16))
    if code[0] in "01234567":
        return chr(int(code, 8) & 0xFF)
    return _ESCAPED.get(code, code)
