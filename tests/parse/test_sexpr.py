"""Atoms stay the text they are; lists know where they began."""

from __future__ import annotations

import re

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.parse.sexpr import Node, Reader, Text


def parsed(text: str) -> Node:
    return Reader().form(text)


@pytest.mark.parametrize(
    "word",
    # Each of these is changed by a plain sexpdata.loads (tried with 1.0.2).
    [
        "nil",
        "t",
        "5E210000",
        "00000000",
        "007",
        "1_000",
        "NaN",
        "inf",
        "/DATA[0]",
        "'x",
        "a;b",
        "8878024e-3167",
        "#tag",
        "{slash}",
        "10\u00a0k",
    ],
)
def test_bare_atoms_are_never_converted(word: str) -> None:
    node = parsed(f"(net {word})")
    assert node == ["net", word]
    assert not isinstance(node[1], Text)


@pytest.mark.parametrize(
    ("written", "meant"),
    [
        (r'"a \"quoted\" word"', 'a "quoted" word'),
        (r'"back\\slash"', "back\\slash"),
        (r'"two\nlines\tand\r"', "two\nlines\tand\r"),
        (r'"\x41\101"', "AA"),
        ('"x) ; y ("', "x) ; y ("),
        ('""', ""),
        ('"two\nlines"', "two\nlines"),
    ],
)
def test_text_escapes(written: str, meant: str) -> None:
    node = parsed(f"(value {written} after)")
    assert node == ["value", meant, "after"]
    assert isinstance(node[1], Text)


def test_offsets_count_from_the_start_of_the_form_and_survive_crlf() -> None:
    text = '(pad "1" smd\r\n\t(at 1 2)\r\n\t(net 3 "G)ND"))'
    node = parsed(text)
    assert node.start == 0
    assert [text[form.start :][:4] for form in node.forms()] == ["(at ", "(net"]


# A second, independent tokenizer: one regular expression.
TOKEN = re.compile(r'[()]|"(?:[^"\\]|\\.)*"|[^\s()"]+', re.DOTALL)


def by_tokens(text: str) -> list[object]:
    stack: list[list[object]] = [[]]
    for token in TOKEN.findall(text):
        if token == "(":
            stack.append([])
        elif token == ")":
            done = stack.pop()
            stack[-1].append(done)
        else:
            stack[-1].append(token[1:-1] if token[0] == '"' else token)
    (tree,) = stack[0]
    assert isinstance(tree, list)
    return tree


WORDS = st.text(st.characters(exclude_characters='()"\\', exclude_categories=["Z", "C"]), min_size=1, max_size=8)
QUOTED = st.text(st.characters(exclude_characters='"\\', exclude_categories=["Cs"]), max_size=8).map('"{}"'.format)
FORMS = st.recursive(
    WORDS | QUOTED,
    lambda inner: st.lists(inner, max_size=4).map(lambda items: "(" + " ".join(items) + ")"),
    max_leaves=20,
)


@settings(max_examples=300, deadline=None)
@given(st.lists(FORMS, max_size=4))
def test_same_tree_as_an_independent_tokenizer(items: list[str]) -> None:
    text = "(" + "\r\n ".join(items) + ")"
    assert parsed(text) == by_tokens(text)
