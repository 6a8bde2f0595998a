"""The conventions of gatecheck/physics, checked on its text: units in names, keywords, sources, sizes."""

from __future__ import annotations

import ast
import re
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Iterator

FOLDER = Path(__file__).parents[2] / "gatecheck" / "physics"
FILES = sorted(FOLDER.glob("*.py"))
NUMERIC = re.compile(r"\b(float|int|complex|Real|RealArray|ComplexArray)\b")
UNITS = (
    "ohm", "h", "f", "hz", "s", "v", "a", "c", "w", "j", "m", "siemens", "rad", "neper", "vs",
    "per_s", "v_per_s", "a_per_s", "rad_per_s", "a2_s", "au", "au_per_s", "au_per_s2",
    "t", "ratio", "count", "index", "1",
)  # fmt: skip
PLAIN = {
    "np",
    "numpy",
    "math",
    "__future__",
    "collections.abc",
    "dataclasses",
    "enum",
    "typing",
    "numpy.typing",
}
MOST_LINES, MOST_FUNCTION_LINES = 400, 60


def trees() -> Iterator[tuple[str, ast.Module]]:
    for path in FILES:
        yield path.name, ast.parse(path.read_text(encoding="utf-8"))


def public_functions() -> list[tuple[str, ast.FunctionDef]]:
    return [
        (f"{name}:{node.name}", node)
        for name, tree in trees()
        for node in tree.body
        if isinstance(node, ast.FunctionDef) and not node.name.startswith("_")
    ]


def is_number(annotation: ast.expr | None) -> bool:
    text = "" if annotation is None else ast.unparse(annotation)
    return bool(NUMERIC.search(text)) and "Callable" not in text and "[str" not in text


def has_unit(name: str) -> bool:
    return any(name.endswith(f"_{unit}") for unit in UNITS)


def code_lines(function: ast.FunctionDef) -> int:
    """Lines of a function below its docstring."""
    start = function.body[0].end_lineno if ast.get_docstring(function) else function.lineno
    return (function.end_lineno or 0) - (start or 0)


FUNCTIONS = public_functions()
NAMES = [name for name, _ in FUNCTIONS]


def test_there_is_something_to_check() -> None:
    assert len(FILES) > 15
    assert len(FUNCTIONS) > 80


@pytest.mark.parametrize("function", [node for _, node in FUNCTIONS], ids=NAMES)
def test_numbers_are_keywords_with_a_unit(function: ast.FunctionDef) -> None:
    positional = [*function.args.posonlyargs, *function.args.args]
    assert [argument.arg for argument in positional if is_number(argument.annotation)] == []
    keywords = [argument for argument in function.args.kwonlyargs if is_number(argument.annotation)]
    assert [argument.arg for argument in keywords if not has_unit(argument.arg)] == []


@pytest.mark.parametrize("function", [node for _, node in FUNCTIONS], ids=NAMES)
def test_formulas_name_source_and_range(function: ast.FunctionDef) -> None:
    text = ast.get_docstring(function) or ""
    for label in ("Source: ", "Valid: "):
        assert sum(line.startswith(label) for line in text.splitlines()) == 1


def test_fields_carry_a_unit() -> None:
    bare = [
        f"{name}:{node.name}.{field.target.id}"
        for name, tree in trees()
        for node in tree.body
        if isinstance(node, ast.ClassDef) and not node.name.startswith("_")
        for field in node.body
        if isinstance(field, ast.AnnAssign) and isinstance(field.target, ast.Name)
        if is_number(field.annotation) and not has_unit(field.target.id)
    ]
    assert bare == []


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.name)
def test_sizes(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert len(text.splitlines()) <= MOST_LINES
    functions = [node for node in ast.walk(ast.parse(text)) if isinstance(node, ast.FunctionDef)]
    assert [node.name for node in functions if code_lines(node) > MOST_FUNCTION_LINES] == []


def test_only_numpy_and_itself() -> None:
    imported = {
        module
        for _, tree in trees()
        for node in ast.walk(tree)
        for module in (
            [alias.name for alias in node.names]
            if isinstance(node, ast.Import)
            else [node.module or ""]
            if isinstance(node, ast.ImportFrom)
            else []
        )
    }
    assert {module for module in imported if not module.startswith("gatecheck.physics.")} <= PLAIN


def test_nothing_prints_or_opens() -> None:
    calls = {
        node.func.id
        for _, tree in trees()
        for node in ast.walk(tree)
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name)
    }
    assert calls & {"print", "open", "input", "exec", "eval"} == set()


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.name)
def test_each_module_has_its_test(path: Path) -> None:
    holds_functions = any(
        isinstance(node, ast.FunctionDef) for node in ast.parse(path.read_text(encoding="utf-8")).body
    )
    assert not holds_functions or (Path(__file__).parent / f"test_{path.name}").is_file()
