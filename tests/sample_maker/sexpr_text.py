"""Token lists as text, laid out the way board files are: tab-indented, one list per line, points packed."""

from __future__ import annotations

# Board files keep points on one line up to this column (seen in v8 and later boards).
_POINTS_COLUMN = 99

Node = tuple["Node | str | float", ...]
"""A list of atoms and lists; the first atom is its keyword."""


class Word(str):
    """An atom that is written without quotes."""

    __slots__ = ()


YES = Word("yes")
NO = Word("no")


def number_text(value: float) -> str:
    """A number with at most six decimals (one nanometre) and no trailing zeros."""
    text = f"{value:.6f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def atom_text(atom: str | float) -> str:
    """One atom; strings that are no `Word` are quoted and escaped."""
    if isinstance(atom, Word):
        return str(atom)
    if isinstance(atom, str):
        escaped = atom.replace("\\", "\\\\").replace('"', '\\"').replace("\n", "\\n")
        return f'"{escaped}"'
    return number_text(atom)


def inline_text(node: Node) -> str:
    """The whole list on one line."""
    head, *rest = node
    return f"({' '.join([head_text(head), *_texts(rest)])})"


def head_text(head: Node | str | float) -> str:
    """The keyword of a list; in the layers table it is a number."""
    if isinstance(head, tuple):
        raise TypeError("a list starts with an atom")
    return head if isinstance(head, str) else number_text(head)


def board_text(node: Node) -> str:
    """A whole file, with the final line end."""
    return "\n".join(_lines(node, "")) + "\n"


def _lines(node: Node, indent: str) -> list[str]:
    head, *rest = node
    atoms = [head_text(head)]
    while rest and not isinstance(rest[0], tuple):
        atoms += _texts([rest.pop(0)])
    opening = f"{indent}({' '.join(atoms)}"
    if not rest:
        return [f"{opening})"]
    inner = indent + "\t"
    body = packed_lines(_texts(rest), inner) if head == "pts" else _children(rest, inner)
    return [opening, *body, f"{indent})"]


def _children(items: list[Node | str | float], indent: str) -> list[str]:
    lines: list[str] = []
    for item in items:
        lines += _lines(item, indent) if isinstance(item, tuple) else [indent + atom_text(item)]
    return lines


def _texts(items: list[Node | str | float]) -> list[str]:
    return [inline_text(item) if isinstance(item, tuple) else atom_text(item) for item in items]


def packed_lines(texts: list[str], indent: str) -> list[str]:
    """Texts side by side, in a new line where the column limit would be passed."""
    lines: list[str] = []
    for text in texts:
        if lines and len(lines[-1]) + 1 + len(text) <= _POINTS_COLUMN:
            lines[-1] += f" {text}"
        else:
            lines.append(indent + text)
    return lines
