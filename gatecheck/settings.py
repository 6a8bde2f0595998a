"""gatecheck.yaml: what the project itself says. Plain data, safely loaded, every mistake reported at once.

Quantities are text with a unit ("5 mm", "12 V"), so that no reader has to guess and YAML cannot turn them
into something else. Unknown keys, duplicate keys and anchors are refused.
"""

from __future__ import annotations

import difflib
import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from gatecheck.errors import InputError, UsageError

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

NAME = "gatecheck.yaml"
# Our choice: far more than any project file; bounds time on a hostile one.
MAX_BYTES = 256 * 1024
_LEVELS = ("note", "warning", "error")
_POLICIES = ("when-needed", "always", "never")
_NUMBER = re.compile(r"([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,2})?)\s*([^\d\s].*)?", re.ASCII)
_UNITS: Mapping[str, Mapping[str, float]] = {
    "length": {"mm": 1e-3, "um": 1e-6, "µm": 1e-6, "cm": 1e-2, "m": 1.0, "mil": 25.4e-6},
    "area": {"mm2": 1e-6, "mm^2": 1e-6, "mm²": 1e-6, "cm2": 1e-4, "cm^2": 1e-4, "cm²": 1e-4},
    "voltage": {"V": 1.0, "mV": 1e-3, "kV": 1e3},
    "current": {"A": 1.0, "mA": 1e-3},
    "resistance": {"ohm": 1.0, "Ω": 1.0, "R": 1.0, "mohm": 1e-3, "mΩ": 1e-3, "kohm": 1e3, "kΩ": 1e3},
    "ratio": {"": 1.0},
}
_EXAMPLES = {
    "length": "5 mm",
    "area": "40 mm2",
    "voltage": "12 V",
    "current": "2 A",
    "resistance": "60 ohm",
    "ratio": "1.5",
}


@dataclass
class SettingsError(UsageError):
    """One or more mistakes in a project file, each with its line."""

    mistakes: tuple[InputError, ...] = ()


@dataclass(frozen=True, slots=True)
class BeadData:
    """What the project says of a bead: SI units; None where it says nothing."""

    rated_current_a: float | None = None
    impedance_ohm: float | None = None  # at 100 MHz


@dataclass(frozen=True, slots=True)
class Limits:
    """The project's own limits: SI units; None where it has none."""

    bead_distance_m: float | None = None
    loop_area_m2: float | None = None
    bead_current_margin: float | None = None


@dataclass(frozen=True, slots=True)
class Settings:
    """A project's own word. The defaults are those of a project without a file."""

    path: str = ""
    block_at: str = "error"
    bead_policy: str = "when-needed"
    policy_stated: bool = False
    drive_voltage_v: float | None = None
    peak_current_a: float | None = None
    limits: Limits = field(default_factory=Limits)
    beads: Mapping[str, BeadData] = field(default_factory=dict)  # by reference or by value as written


def read_settings(path: str, text: str) -> Settings:
    """Parse a project file.

    Raises:
        SettingsError: with all mistakes in it.
    """
    import yaml  # noqa: PLC0415 (20 ms that a project without a file need not pay)

    mistakes: list[InputError] = []
    walker = _Walker(path, text.splitlines(), mistakes)
    try:
        for event in yaml.parse(text, Loader=yaml.SafeLoader):
            if isinstance(event, yaml.AliasEvent) or getattr(event, "tag", None) is not None:
                mark: Any = event.start_mark
                line, column = mark.line + 1, mark.column + 1
                message = "anchors, aliases and tags are not used here"
                mistakes.append(InputError(message, "write the value out", path, line, column, walker.excerpt(line)))
        root: Any = None if mistakes else yaml.compose(text, Loader=yaml.SafeLoader)
    except yaml.MarkedYAMLError as why:
        mark = why.problem_mark or why.context_mark
        line, column = (mark.line + 1, mark.column + 1) if mark is not None else (1, 1)
        message = f"not readable as YAML: {why.problem or why.context}"
        mistakes.append(InputError(message, "correct the line", path, line, column, walker.excerpt(line)))
        root = None
    except (yaml.YAMLError, RecursionError, ValueError) as why:
        mistakes.append(InputError(f"not readable as YAML: {str(why)[:100]}", "correct the file", path, 1, 1))
        root = None
    empty = root is None or (root.id == "scalar" and not root.value)
    said = {} if empty else walker.mapping(root, _TOP)
    if mistakes:
        count = "a mistake" if len(mistakes) == 1 else f"{len(mistakes)} mistakes"
        raise SettingsError(f"{path}: {count} in the project file", "", tuple(mistakes))
    drive: Mapping[str, float] = said.get("drive", {})
    limits: Mapping[str, float] = said.get("limits", {})
    beads: Mapping[str, Mapping[str, float]] = said.get("beads", {})
    return Settings(
        path=path,
        block_at=said.get("block_at", "error"),
        bead_policy=said.get("bead_policy", "when-needed"),
        policy_stated="bead_policy" in said,
        drive_voltage_v=drive.get("voltage"),
        peak_current_a=drive.get("peak_current"),
        limits=Limits(limits.get("bead_distance"), limits.get("loop_area"), limits.get("bead_current_margin")),
        beads={
            name: BeadData(data.get("rated_current"), data.get("impedance"))
            for names, data in beads.items()
            for name in _names(names)
        },
    )


def _names(key: str) -> list[str]:
    """`FB1 FB2` are two references; a value as written in the design (`60R@100MHz 3A`) is one key."""
    words = key.split()
    return words if all(re.fullmatch(r"[A-Za-z]+\d+[A-Za-z]?", word) for word in words) else [key]


@dataclass(frozen=True, slots=True)
class _Walker:
    """Turns YAML nodes into values by a schema, gathering mistakes instead of stopping at the first."""

    path: str
    lines: list[str]
    mistakes: list[InputError]

    def excerpt(self, line: int) -> str:
        return self.lines[line - 1].strip()[:80] if 0 < line <= len(self.lines) else ""

    def wrong(self, node: Any, message: str, next_step: str) -> None:
        line, column = node.start_mark.line + 1, node.start_mark.column + 1
        self.mistakes.append(InputError(message, next_step, self.path, line, column, self.excerpt(line)))

    def mapping(self, node: Any, schema: Mapping[str, Callable[[_Walker, Any], Any]]) -> dict[str, Any]:
        """A mapping with known keys; `*` in the schema stands for any key."""
        if node.id != "mapping":
            self.wrong(node, "keys with values belong here", f"as in `{next(iter(schema))}: ...`")
            return {}
        found: dict[str, Any] = {}
        for key_node, value_node in node.value:
            key = key_node.value if key_node.id == "scalar" else ""
            reader = schema.get(key) or schema.get("*")
            if key in found:
                self.wrong(key_node, f"the key {key!r} stands here a second time", "keep one of them")
            elif not key or reader is None:
                near = difflib.get_close_matches(key, schema, n=1)
                hint = f"did you mean {near[0]!r}?" if near else f"known here: {', '.join(sorted(schema))}"
                self.wrong(key_node, f"unknown key {key!r}", hint)
            else:
                found[key] = reader(self, value_node)
        return {key: value for key, value in found.items() if value is not None}


def _one_of(*words: str) -> Callable[[_Walker, Any], str | None]:
    def read(walker: _Walker, node: Any) -> str | None:
        if node.id == "scalar" and node.value in words:
            return str(node.value)
        said = repr(node.value)[:40] if node.id == "scalar" else "a list or mapping"
        near = difflib.get_close_matches(str(node.value), words, n=1) if node.id == "scalar" else []
        hint = f"did you mean {near[0]!r}?" if near else f"one of: {', '.join(words)}"
        walker.wrong(node, f"{said} is no choice here", hint)
        return None

    return read


def _quantity(kind: str) -> Callable[[_Walker, Any], float | None]:
    def read(walker: _Walker, node: Any) -> float | None:
        value = _parsed(str(node.value), kind) if node.id == "scalar" else None
        if value is None:
            said = repr(node.value)[:40] if node.id == "scalar" else "a list or mapping"
            walker.wrong(node, f"{said} is no {kind}", f"a number and a unit, as in `{_EXAMPLES[kind]}`")
        return value

    return read


def _parsed(text: str, kind: str) -> float | None:
    """A positive quantity in SI units. An impedance may say `@ 100 MHz`, and no other frequency."""
    if kind == "resistance":
        text = re.sub(r"\s*(?:@|at)\s*100\s*MHz$", "", text.strip(), flags=re.IGNORECASE)
    match = _NUMBER.fullmatch(text.strip())
    factor = _UNITS[kind].get((match.group(2) or "").strip()) if match else None
    if match is None or factor is None:
        return None
    value = float(match.group(1)) * factor
    return value if 0 < value < 1e9 else None  # noqa: PLR2004 (no quantity here comes near)


def _section(schema: Mapping[str, Callable[[_Walker, Any], Any]]) -> Callable[[_Walker, Any], dict[str, Any]]:
    return lambda walker, node: walker.mapping(node, schema)


_TOP: Mapping[str, Callable[[_Walker, Any], Any]] = {
    "block_at": _one_of(*_LEVELS),
    "bead_policy": _one_of(*_POLICIES),
    "drive": _section({"voltage": _quantity("voltage"), "peak_current": _quantity("current")}),
    "limits": _section(
        {
            "bead_distance": _quantity("length"),
            "loop_area": _quantity("area"),
            "bead_current_margin": _quantity("ratio"),
        }
    ),
    "beads": _section({"*": _section({"rated_current": _quantity("current"), "impedance": _quantity("resistance")})}),
}
