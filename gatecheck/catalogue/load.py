"""The catalogue's YAML files, read once per run into compiled patterns."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

import yaml

if TYPE_CHECKING:
    from collections.abc import Mapping

_HERE = Path(__file__).parent
_LOADER = getattr(yaml, "CSafeLoader", yaml.SafeLoader)
# Overbars, underscores, blanks and case do not tell pins apart: ~{OUT_A}, OUTA and Out A are one name.
_NOISE = re.compile(r"~?\{([^{}]*)\}|[~_\s]")
# `#` in a driver's pin name: a channel number, a phase letter, or both.
_CHANNEL = r"(?:\d{0,2}[A-D]?|[UVWXYZ]?\d?)"


@dataclass(frozen=True, slots=True)
class Package:
    """What is known of a transistor package: its class and the usual terminal of each pad number."""

    name: str
    size: str  # power, medium, small
    pads: Mapping[str, str]  # pad number -> G, D, S or K; empty when makers differ


@dataclass(frozen=True, slots=True)
class Feature:
    """One kind of evidence: its weight and how the report words it."""

    weight: float
    text: str


@cache
def _data(name: str) -> Any:
    return yaml.load((_HERE / f"{name}.yaml").read_text(encoding="utf-8"), Loader=_LOADER)  # noqa: S506 (a safe loader)


def plain_pin_name(name: str) -> str:
    """A pin name without overbar, underscores and blanks, in capitals."""
    return _NOISE.sub(lambda match: match.group(1) or "", name).replace("_", "").upper()


@cache
def _pin_patterns() -> Mapping[str, re.Pattern[str]]:
    terminals = ("gate", "source", "drain", "emitter", "collector", "kelvin", "base")
    return {
        group: re.compile(
            "|".join(
                name.upper().replace("\\D", "\\d").replace("#", r"\d{0,2}" if group in terminals else _CHANNEL)
                for name in names
            )
        )
        for group, names in _data("pin_names").items()
    }


@cache
def pin_is(group: str, name: str) -> bool:
    """Is this what a pin of that group is called? Names from the file, as written."""
    return bool(name) and _pin_patterns()[group].fullmatch(plain_pin_name(name)) is not None


@cache
def _word_patterns() -> Mapping[str, re.Pattern[str]]:
    return {
        group: re.compile("|".join(rf"(?<![A-Za-z])(?:{word})(?![A-Za-z])" for word in words), re.IGNORECASE)
        for group, words in _data("words").items()
        if group != "static_pins"
    }


def word_in(group: str, text: str) -> str:
    """The first word of a group that stands in a text, empty if none does."""
    match = _word_patterns()[group].search(text[:2000])
    return match.group(0) if match else ""


@cache
def static_pin(name: str) -> bool:
    """Is this the name of a pin that protection and battery controllers switch with?"""
    pattern = "|".join(word.replace("_", "").replace("#", r"\d{0,2}") for word in _data("words")["static_pins"])
    return re.fullmatch(pattern, plain_pin_name(name)) is not None


@cache
def package_of(footprint: str, pad_count: int) -> Package | None:
    """The package a footprint's name tells of, by its number of different pad numbers; None if unknown."""
    name = footprint.rpartition(":")[2].upper().replace("_", " ")
    for row in _data("packages"):
        match = re.search(row["match"], name)
        if match is None or pad_count != row.get("when_pads", pad_count):
            continue
        sure = "only" not in row or re.search(row["only"], name) is not None
        return Package(match.group(0), row["class"], row["pads"] if sure else {})
    return None


@cache
def features() -> Mapping[str, Feature]:
    """All kinds of evidence by name."""
    return {name: Feature(row["weight"], row["text"]) for name, row in _data("evidence")["features"].items()}


def role_limits() -> Mapping[str, float]:
    """From which sum of evidence a role is taken."""
    limits: Mapping[str, float] = _data("evidence")["roles"]
    return limits
