"""The span index against a slow, plain scan of the same bytes."""

from __future__ import annotations

from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.parse import spans
from gatecheck.parse.spans import Broken, Spans, index

ALPHABET = st.sampled_from(["(", ")", '"', "\\", "a", " ", "\n", "(b ", '"x y"', "\\\\", '\\"'])


def plain_scan(data: bytes) -> list[tuple[int, int, int]] | None:
    """(depth, start, end) of every form, or None where brackets or quotes do not match."""
    found, stack, quoted, slashes = [], [], False, 0
    for at, byte in enumerate(data):
        odd = slashes % 2 == 1
        slashes = slashes + 1 if byte == ord("\\") else 0
        if byte == ord('"') and not odd:
            quoted = not quoted
        elif quoted:
            continue
        elif byte == ord("("):
            stack.append(at)
        elif byte == ord(")"):
            if not stack:
                return None
            start = stack.pop()
            found.append((len(stack), start, at))
    return None if stack or quoted else sorted(found, key=lambda form: form[1])


@settings(max_examples=400, deadline=None)
@given(st.lists(ALPHABET, max_size=60).map("".join))
def test_agrees_with_a_plain_scan(text: str) -> None:
    data = text.encode()
    want, got = plain_scan(data), index(data)
    if want is None:
        assert isinstance(got, Broken)
        assert 0 <= got.offset <= len(data)
    else:
        assert isinstance(got, Spans)
        for depth, (opens, closes) in enumerate(zip(got.opens, got.closes, strict=True)):
            assert list(zip(opens.tolist(), closes.tolist(), strict=True)) == [f[1:] for f in want if f[0] == depth]


@settings(max_examples=200, deadline=None)
@given(st.lists(ALPHABET, max_size=60).map("".join), st.integers(1, 9))
def test_chunk_size_changes_nothing(text: str, chunk: int) -> None:
    data, whole = text.encode(), spans._CHUNK
    want = index(data)
    try:
        spans._CHUNK = chunk
        got = index(data)
    finally:
        spans._CHUNK = whole
    if isinstance(want, Broken):
        assert isinstance(got, Broken)
    else:
        assert isinstance(got, Spans)
        for a, b in zip((*want.opens, *want.closes), (*got.opens, *got.closes), strict=True):
            assert a.tolist() == b.tolist()


def test_cut_short_names_the_innermost_open_form() -> None:
    got = index(b'(kicad_pcb (net 0 "") (footprint "X" (at 1 2')
    assert isinstance(got, Broken)
    assert got.offset == b'(kicad_pcb (net 0 "") (footprint "X" (at 1 2'.index(b"(at")
    assert "cut short" in got.message


def test_stray_closing_bracket_and_open_text_are_placed() -> None:
    stray = index(b"(a)(b))")
    assert stray == Broken(6, "this closing bracket has no opening one")
    text = index(b'(a "never ends)')
    assert isinstance(text, Broken)
    assert text.offset == 3


def test_nesting_is_bounded_without_recursion() -> None:
    deep = index(b"(" * 5_000_000)
    assert isinstance(deep, Broken)
    assert deep.offset == spans.MAX_DEPTH
    exact = b"(" * spans.MAX_DEPTH + b")" * spans.MAX_DEPTH
    assert isinstance(index(exact), Spans)
