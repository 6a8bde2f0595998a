"""The project file beside a schematic: text variables and bus aliases. It is JSON, and as hostile as the rest."""

from __future__ import annotations

import json
import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from gatecheck.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Mapping

_VARIABLE = re.compile(r"\$\{([^{}$]{1,200})\}")
# Our choice: variables that name variables, so deep; and what a value may grow to.
_MOST_ROUNDS, _LONGEST = 5, 4000


@dataclass(frozen=True, slots=True)
class ProjectFile:
    """What a project file says about its schematic."""

    variables: Mapping[str, str] = field(default_factory=dict)
    bus_aliases: Mapping[str, list[str]] = field(default_factory=dict)


def read_project_file(path: str, data: bytes) -> ProjectFile:
    """Read a project file; what it does not hold, or holds in another shape, is left out.

    Raises:
        InputError: if it is no JSON object.
    """
    try:
        found = json.loads(data)
    except (ValueError, RecursionError) as why:
        line = getattr(why, "lineno", 0)
        step = "save the project again from its editor"
        raise InputError("this project file is no JSON", step, path, line, 1 if line else 0) from None
    variables = _strings(_at(found, "text_variables"))
    aliases = _at(_at(found, "schematic"), "bus_aliases")
    return ProjectFile(
        variables,
        {
            name: [member for member in members if isinstance(member, str)]
            for name, members in (aliases.items() if isinstance(aliases, dict) else ())
            if isinstance(members, list)
        },
    )


def resolved(text: str, *sources: Mapping[str, str]) -> str:
    """A text with its `${NAME}` filled in, from the first source that knows each; unknown ones stay."""
    for _ in range(_MOST_ROUNDS):
        if "${" not in text:
            break
        filled = _VARIABLE.sub(lambda m: next((s[m[1]] for s in sources if m[1] in s), m[0]), text)
        if filled == text or len(filled) > _LONGEST:
            break
        text = filled
    return text


def _at(found: Any, key: str) -> Any:
    return found.get(key) if isinstance(found, dict) else None


def _strings(found: Any) -> dict[str, str]:
    return {k: v for k, v in found.items() if isinstance(v, str)} if isinstance(found, dict) else {}
