"""Where the bracketed forms of a file begin and end, found over the raw bytes without parsing them.

A board is mostly zone fills, graphics and embedded blobs that nobody asks for. One pass of numpy over the
bytes, a chunk at a time, gives start and end of every form down to a fixed depth; what is asked for is then
parsed by itself, and the rest never.

Strategy: quotes and brackets are the only bytes that matter. A quote after an odd run of backslashes is
text. A bracket after an odd number of quotes is text. The running sum of the brackets left is the depth, and
forms of equal depth never nest, so the i-th opening bracket of a depth belongs to the i-th closing one.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

# Our choice: peak memory stays a few chunks above the file itself, and numpy's call cost is lost in them.
_CHUNK = 1 << 18
# Real design files stay below 15; the parser behind the index recurses, so depth is bounded here.
MAX_DEPTH = 100
# Footprint, pad, pad's children, and one more for schematic symbols.
_INDEXED = 5

_QUOTE, _OPEN, _CLOSE, _BACKSLASH = b'"()\\'
_EVENT = np.zeros(256, dtype=bool)
_EVENT[[_QUOTE, _OPEN, _CLOSE]] = True


@dataclass(frozen=True, slots=True)
class Broken:
    """Why a file has no span index: the offset of the trouble and what it is."""

    offset: int
    message: str


@dataclass(frozen=True, slots=True)
class Spans:
    """`opens[d]` and `closes[d]` are the offsets of the brackets of all forms of depth d, in file order.

    Offsets fit 32 bits: no file above files.MAX_BYTES is read.
    """

    opens: tuple[NDArray[np.int32], ...]
    closes: tuple[NDArray[np.int32], ...]


def index(data: bytes) -> Spans | Broken:
    """Find all forms of `data` down to the indexed depth, or say where brackets or quotes do not match."""
    opens: list[list[NDArray[np.int32]]] = [[] for _ in range(_INDEXED)]
    closes: list[list[NDArray[np.int32]]] = [[] for _ in range(_INDEXED)]
    depth, quotes, last_quote, carried, at = 0, 0, 0, 0, 0
    while at < len(data):
        end = min(at + _CHUNK, len(data))
        chunk = np.frombuffer(data, dtype=np.uint8, count=end - at, offset=at)
        places = np.flatnonzero(_EVENT[chunk])
        kinds = chunk[places]
        if carried or data.find(b"\\", at, end) >= 0:
            odd, carried = _after_odd_backslashes(chunk, places, carried)
            real = ~((kinds == _QUOTE) & odd)
            places, kinds = places[real], kinds[real]
        is_quote = kinds == _QUOTE
        before = np.cumsum(is_quote, dtype=np.int64) + quotes
        if is_quote.any():
            last_quote = at + int(places[is_quote][-1])
            quotes = int(before[-1])
        bracket = (before % 2 == 0) & ~is_quote
        places, kinds = (places[bracket] + at).astype(np.int32), kinds[bracket]
        if len(places):
            is_open = kinds == _OPEN
            level = np.cumsum(np.where(is_open, 1, -1), dtype=np.int64) + depth
            trouble = _bad_level(places, level)
            if trouble is not None:
                return trouble
            depth = int(level[-1])
            for d in range(_INDEXED):
                opens[d].append(places[is_open & (level == d + 1)])
                closes[d].append(places[~is_open & (level == d)])
        at = end
    if quotes % 2:
        return Broken(last_quote, "the text that starts here never ends")
    spans = Spans(tuple(map(_joined, opens)), tuple(map(_joined, closes)))
    return _unclosed(spans) if depth else spans


def _after_odd_backslashes(
    chunk: NDArray[np.uint8], places: NDArray[np.int64], carried: int
) -> tuple[NDArray[np.bool_], int]:
    """For each place: is the run of backslashes just before it of odd length?

    `carried` is the length of the run that ends just before the chunk; returned anew for the next one.
    """
    slashes = np.flatnonzero(chunk == _BACKSLASH)
    starts = slashes[np.diff(slashes, prepend=-2) != 1]
    # A run that begins with the chunk began `carried` places earlier.
    begins = np.where(starts == 0, -carried, starts)
    run = np.maximum(np.searchsorted(starts, places) - 1, 0)
    behind = (places > 0) & (chunk[np.maximum(places - 1, 0)] == _BACKSLASH)
    length = places - begins[run] if len(starts) else np.zeros_like(places)
    odd: NDArray[np.bool_] = np.where(places == 0, carried % 2 == 1, behind & (length % 2 == 1))
    left = len(chunk) - int(begins[-1]) if len(slashes) and slashes[-1] == len(chunk) - 1 else 0
    return odd, left


def _bad_level(places: NDArray[np.int32], level: NDArray[np.int64]) -> Broken | None:
    if level.min() < 0:
        return Broken(int(places[np.argmax(level < 0)]), "this closing bracket has no opening one")
    if level.max() > MAX_DEPTH:
        return Broken(int(places[np.argmax(level > MAX_DEPTH)]), f"brackets nest deeper than {MAX_DEPTH}")
    return None


def _joined(parts: list[NDArray[np.int32]]) -> NDArray[np.int32]:
    """One array of many; the parts are given up, since a hostile file has as many brackets as bytes."""
    whole = np.concatenate(parts) if parts else np.zeros(0, dtype=np.int32)
    parts.clear()
    return whole


def _unclosed(spans: Spans) -> Broken:
    """The deepest indexed form that is still open at the end of the file."""
    for opens, closes in reversed(list(zip(spans.opens, spans.closes, strict=True))):
        if len(opens) > len(closes):
            return Broken(int(opens[-1]), "the bracket opened here is never closed: the file is cut short")
    return Broken(0, "a bracket is never closed: the file is cut short")
