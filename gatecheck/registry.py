"""Finds the rule modules, and holds them to what a rule must be."""

from __future__ import annotations

import difflib
import importlib
import pkgutil
from functools import cache
from pathlib import Path

from gatecheck.errors import RuleError, UsageError
from gatecheck.rulekit import Rule


@cache
def load_rules() -> tuple[Rule, ...]:
    """All rules, sorted by id.

    Raises:
        RuleError: if a module cannot be imported, has no RULE, or two rules share an id.
    """
    rules: dict[str, Rule] = {}
    for name in _modules():
        try:
            module = importlib.import_module(name)
        except Exception as why:
            raise RuleError(f"rule module {name} cannot be loaded: {why}") from why
        rule = getattr(module, "RULE", None)
        if not isinstance(rule, Rule):
            raise RuleError(f"rule module {name} has no RULE")
        if rule.id in rules:
            raise RuleError(f"rule id {rule.id} stands twice, the second time in {name}")
        rules[rule.id] = rule
    return tuple(rules[key] for key in sorted(rules))


def rule_by_id(wanted: str) -> Rule:
    """One rule.

    Raises:
        UsageError: if there is none of that id; names the nearest.
    """
    known = {rule.id: rule for rule in load_rules()}
    if wanted in known:
        return known[wanted]
    near = difflib.get_close_matches(wanted, known, n=1)
    hint = f"did you mean {near[0]}?" if near else "`gatecheck rules` lists them"
    raise UsageError(f"there is no rule {wanted!r}", hint)


def _modules() -> list[str]:
    """Dotted names of all rule modules.

    The folder is walked, not the package's path: in a checkout that path also holds the repository's root.
    """
    here = Path(__file__).parent
    folder = here / "rules" if (here / "rules" / "__init__.py").is_file() else here.parent / "rules"
    names = []
    for topic in sorted(entry.name for entry in pkgutil.iter_modules([str(folder)]) if entry.ispkg):
        for entry in pkgutil.iter_modules([str(folder / topic)]):
            names += [] if entry.name.startswith("_") else [f"gatecheck.rules.{topic}.{entry.name}"]
    return names
