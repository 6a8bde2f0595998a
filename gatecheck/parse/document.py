"""One S-expression file held as bytes, its span index, and forms parsed when somebody looks into them.

Short forms repeat by the thousand in a board (`(at 0.9125 0)`, `(size 0.8 0.95)`, `(net 12 "GND")`), so
parsed forms are remembered by their bytes: a look-up costs a twentieth of a parse.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from gatecheck.errors import InputError
from gatecheck.parse.sexpr import Reader
from gatecheck.parse.spans import Broken, Spans, index

if TYPE_CHECKING:
    from collections.abc import Iterator

    from numpy.typing import NDArray

    from gatecheck.parse.sexpr import Node

# Our choice: no form that is looked into (a part, a pad, a net with all its nodes) comes near this size.
_MAX_FORM = 8 * 1024 * 1024
# Forms longer than this hardly ever repeat; remembering them would only cost memory.
_MAX_REMEMBERED = 160
_REMEMBERED_FORMS = 100_000
_EXCERPT = 60
# Forms whose keywords are compared at once. Our choice: bounds memory on a file of nothing but brackets.
_BATCH = 1 << 16
_HEAD = re.compile(rb'\(\s*([^()"\s]*)')
_LINE_END = ord("\n")
_BOM = b"\xef\xbb\xbf"


class Span(NamedTuple):
    """Where a form lies: offsets of its opening bracket and behind its closing one, and its depth."""

    start: int
    end: int
    depth: int


@dataclass
class Malformed(Exception):  # noqa: N818 (always turned into an InputError with a place)
    """A form that does not hold what its keyword promises; `offset` counts from the start of the form."""

    offset: int
    message: str


@dataclass(slots=True)
class Document:
    """A file whose brackets and quotes match.

    `notes` gathers what was odd but readable, once per file.
    """

    path: str
    data: bytes
    spans: Spans
    root: Span
    head: str
    notes: list[str] = field(default_factory=list)
    _reader: Reader = field(default_factory=Reader)
    _memory: dict[bytes, Node] = field(default_factory=dict)
    _line_ends: list[NDArray[np.int64]] = field(default_factory=list)

    def children(self, parent: Span) -> list[Span]:
        """The forms directly inside a form, in file order. Shallower than the indexed depth only."""
        depth = parent.depth + 1
        opens, closes = self.spans.opens[depth], self.spans.closes[depth]
        # Of the index's own type: numpy would turn the whole index into another one for each look-up.
        low, high = np.searchsorted(opens, np.array((parent.start, parent.end), dtype=opens.dtype))
        return [
            Span(start, end + 1, depth)
            for start, end in zip(opens[low:high].tolist(), closes[low:high].tolist(), strict=True)
        ]

    def named(self, *heads: str) -> Iterator[tuple[str, Span]]:
        """The top-level forms of these keywords, in file order.

        Tracks, fills and graphics outnumber what is asked for, so keywords are first compared by their
        leading bytes, all at once.
        """
        opens, closes = self.spans.opens[1], self.spans.closes[1]
        for at in range(0, len(opens), _BATCH):
            some = opens[at : at + _BATCH]
            likely = self._likely(some, heads)
            ends = closes[at : at + _BATCH][likely]
            for start, end in zip(some[likely].tolist(), ends.tolist(), strict=True):
                head = self.head_of(start)
                if head in heads:
                    yield head, Span(start, end + 1, 1)

    def enclosing(self, offsets: list[int]) -> list[tuple[int, Span]]:
        """The top-level form around each offset, each form once, with the index of its first offset."""
        opens, closes = self.spans.opens[1], self.spans.closes[1]
        rows = np.searchsorted(opens, np.array(offsets, dtype=opens.dtype), side="right") - 1
        found: dict[int, int] = {}
        for i, row in enumerate(rows.tolist()):
            if row >= 0:
                found.setdefault(row, i)
        return [(i, Span(int(opens[row]), int(closes[row]) + 1, 1)) for row, i in found.items()]

    def _likely(self, opens: NDArray[np.int32], heads: tuple[str, ...]) -> NDArray[np.bool_]:
        """Which forms have a keyword that begins like one of these."""
        raw = np.frombuffer(self.data, dtype=np.uint8)
        last = len(raw) - 1
        # A blank after the bracket is legal, though no program writes it.
        likely = raw[np.minimum(opens + 1, last)] <= ord(" ")
        for head in heads:
            match = np.ones(len(opens), dtype=bool)
            for at, byte in enumerate(head.encode()[:3], start=1):
                match &= raw[np.minimum(opens + at, last)] == byte
            likely |= match
        return likely

    def head_of(self, start: int) -> str:
        """The keyword of the form that opens at `start`."""
        match = _HEAD.match(self.data, start, start + 100)
        return match.group(1).decode("latin-1") if match else ""

    def read(self, span: Span) -> Node:
        """The whole tree of a form.

        Raises:
            Malformed: if the form is longer than any that is worth reading.
        """
        return self._parsed(span.start, span.end)

    def opening(self, span: Span, first_child: Span | None) -> Node:
        """The atoms of a form that stand before its first child, as a form of their own."""
        if first_child is None:
            return self.read(span)
        return self._parsed(span.start, first_child.start, closing=b")")

    def _parsed(self, start: int, end: int, closing: bytes = b"") -> Node:
        if end - start > _MAX_FORM:
            raise Malformed(0, f"this form is longer than {_MAX_FORM // 1024**2} MB")
        raw = self.data[start:end] + closing
        known = self._memory.get(raw)
        if known is not None:
            return known
        node = self._reader.form(self._text(raw))
        if len(raw) <= _MAX_REMEMBERED and len(self._memory) < _REMEMBERED_FORMS:
            self._memory[raw] = node
        return node

    def _text(self, raw: bytes) -> str:
        try:
            return raw.decode("utf-8")
        except UnicodeDecodeError:
            note = "not all of the file is UTF-8; those parts are read as Latin-1"
            if note not in self.notes:
                self.notes.append(note)
            return raw.decode("latin-1")

    def place(self, offset: int) -> tuple[int, int]:
        """Line and column of a byte offset, both from 1."""
        if not self._line_ends:
            self._line_ends.append(np.flatnonzero(np.frombuffer(self.data, dtype=np.uint8) == _LINE_END))
        line = int(np.searchsorted(self._line_ends[0], offset))
        begin = int(self._line_ends[0][line - 1]) + 1 if line else 0
        return line + 1, _column(self.data, begin, offset)

    def error(self, offset: int, message: str, next_step: str) -> InputError:
        """An error that points at an offset of this file."""
        line, column = self.place(offset)
        return InputError(message, next_step, self.path, line, column, _excerpt(self.data, offset))

    def trouble(self, span: Span, bad: Malformed, next_step: str) -> InputError:
        """An error that points into a form. The parser counts characters, the file bytes."""
        before = self._text(self.data[span.start : span.start + 4 * bad.offset])[: bad.offset]
        width = len(before.encode("latin-1" if self.notes else "utf-8", errors="replace"))
        return self.error(span.start + width, bad.message, next_step)


def open_document(path: str, data: bytes) -> Document:
    """Index a file's bytes.

    Raises:
        InputError: if brackets or quotes do not match, or something stands outside the one outer form.
    """
    skip = len(_BOM) if data.startswith(_BOM) else 0
    spans = index(data)
    if isinstance(spans, Broken):
        raise error_at(path, data, spans.offset, spans.message, "restore the file or save it again from its editor")
    if not len(spans.opens[0]):
        raise error_at(path, data, skip, "there is no bracketed form in this file", "name a design file")
    root = Span(int(spans.opens[0][0]), int(spans.closes[0][0]) + 1, 0)
    for begin, end, what in ((skip, root.start, "before"), (root.end, len(data), "after")):
        stray = data[begin:end].lstrip()
        if stray:
            at = end - len(stray)
            message = f"something stands {what} the form that holds the whole design"
            raise error_at(path, data, at, message, "restore the file or save it again from its editor")
    head = _HEAD.match(data, root.start, root.start + 100)
    return Document(path, data, spans, root, head.group(1).decode("latin-1") if head else "")


def place_in(data: bytes, offset: int) -> tuple[int, int]:
    """Line and column of a byte offset, both from 1; columns count characters."""
    line = data.count(b"\n", 0, offset) + 1
    begin = data.rfind(b"\n", 0, offset) + 1
    return line, _column(data, begin, offset)


def _column(data: bytes, begin: int, offset: int) -> int:
    return len(data[begin:offset].decode("utf-8", errors="replace")) + 1


def error_at(path: str, data: bytes, offset: int, message: str, next_step: str) -> InputError:
    """An error with the place and the text found there, in a file that has no index."""
    line, column = place_in(data, offset)
    return InputError(message, next_step, path, line, column, _excerpt(data, offset))


def _excerpt(data: bytes, offset: int) -> str:
    end = data.find(b"\n", offset, offset + 4 * _EXCERPT)
    raw = data[offset : end if end >= 0 else offset + 4 * _EXCERPT]
    return raw.decode("utf-8", errors="replace").strip()[:_EXCERPT]
