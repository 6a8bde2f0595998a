"""Touchstone files, versions 1 and 2: text to frequencies and network parameters.

Grammar: Touchstone File Format Specification, version 1.1 (2002) and 2.0 (2009). A file of version 1 has an
option line `# unit parameter format R reference` and bare data; its Z, Y, G and H values are normalised to
the reference and are given back in ohms and siemens. Version 2 adds `[Keyword]` lines. Noise data are
skipped. Mixed-mode data are refused, since no part here has modes.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, NoReturn

import numpy as np

from gatecheck.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Iterator

    from numpy.typing import NDArray

_UNITS_HZ = {"hz": 1.0, "khz": 1e3, "mhz": 1e6, "ghz": 1e9}
_PARAMETERS = frozenset("syzgh")
_FORMATS = frozenset({"ri", "ma", "db"})
_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eEdD][+-]?\d+)?")
_KEYWORD = re.compile(r"\[\s*([^\]]*?)\s*\](.*)")
_EXTENSION = re.compile(r"\.s(\d+)p$", re.IGNORECASE)
# Keywords of version 2 (specification 2.0), lower case, hyphens as blanks.
_COUNTS = frozenset({"number of ports", "number of frequencies"})
_CHOICES = {
    "two port data order": ("12_21", "21_12"),
    "two port order": ("12_21", "21_12"),
    "matrix format": ("full", "lower", "upper"),
}
_BLOCKS = {
    "reference": "reference",
    "network data": "network",
    "noise data": "noise",
    "begin information": "information",
}
_WITHOUT_EFFECT = frozenset({"number of noise frequencies", "end information", "end"})
_LARGEST, _LARGEST_DB = 1e100, 2000.0  # beyond any measurement, within a double's range; our choice
_MOST_PORTS = 64  # a matrix of this size is no part of a gate drive; our choice, against absurd files
_NOISE_VALUES = 5  # numbers on a noise line (specification, noise parameters)
_TWO_PORTS = 2
_PER_DATA_LINE = {3: 1, 9: 2}  # numbers on the first line of a one-port and of a two-port


@dataclass(frozen=True, slots=True, kw_only=True)
class TouchstoneData:
    """Network parameters along frequency.

    Attributes:
        frequency_hz: shape (n,), rising.
        parameter: one of S, Y, Z, G, H.
        values: shape (n, p, p); S without unit, the others in ohms and siemens.
        reference_ohm: reference of each port, shape (p,).
    """

    frequency_hz: NDArray[np.float64]
    parameter: str
    values: NDArray[np.complex128]
    reference_ohm: NDArray[np.float64]


def read_touchstone(text: str, *, path: str) -> TouchstoneData:
    """Read a Touchstone file.

    Args:
        text: the whole file.
        path: its name, for messages and for the number of ports in an extension like `.s2p`.

    Returns:
        The data of the network block.

    Raises:
        InputError: the text is no Touchstone file of version 1 or 2, with the place of the trouble.
    """
    reader = _Reader(path)
    for number, line in enumerate(text.splitlines(), start=1):
        if not reader.take(_Line(number, line)):
            break
    return reader.result()


@dataclass(frozen=True, slots=True)
class _Line:
    number: int
    raw: str

    @property
    def content(self) -> str:
        return self.raw.split("!", 1)[0].strip()


@dataclass(slots=True)
class _Reader:
    """State of the reading: options, keywords, and the numbers of the network block."""

    path: str
    version: int = 1
    ports: int | None = None
    unit_hz: float = 1e9
    parameter: str = "s"
    form: str = "ma"
    references: list[float] = field(default_factory=list)
    option_ohm: float = 50.0
    options_seen: bool = False
    matrix: str = "full"
    rows_first: bool = False
    expected: int | None = None
    block: str = ""
    numbers: list[float] = field(default_factory=list)
    starts: list[_Line] = field(default_factory=list)
    last: _Line = field(default_factory=lambda: _Line(0, ""))

    def take(self, line: _Line) -> bool:
        """Use one line; False where the network data have ended."""
        content = line.content
        if not content or (self.block == "information" and not content.startswith("[")):
            return True
        self.last = line
        if content.startswith("["):
            return self._keyword(line, content)
        if content.startswith("#"):
            self._options(line, content[1:])
            return True
        numbers = list(self._numbers(line, content))
        if self.block == "reference":
            self.references.extend(numbers)
            return True
        if self.block == "noise":
            return True
        if not self.options_seen:
            self._refuse(
                line,
                "data before the option line",
                "a Touchstone file starts with a line like # MHz S RI R 50",
            )
        return self._data(line, numbers)

    def result(self) -> TouchstoneData:
        """The data read so far, checked."""
        if not self.options_seen:
            self._refuse(self.last, "no option line", "a Touchstone file has a line like # MHz S RI R 50")
        ports = self._port_count()
        if not self.starts:
            self._refuse(self.last, "no data", "check that the file was exported whole")
        per_point = self._per_point(ports)
        if len(self.numbers) % per_point:
            self._refuse(
                self.last,
                "the last frequency point is not complete",
                "check that the file was exported whole",
            )
        table = np.array(self.numbers).reshape(-1, per_point)
        frequency = table[:, 0] * self.unit_hz
        if np.any(np.diff(frequency) <= 0.0) or frequency[0] < 0.0:
            self._refuse(self.last, "frequencies do not rise", "check that the file was exported whole")
        if self.expected is not None and self.expected != frequency.size:
            self._refuse(
                self.last,
                f"{frequency.size} frequencies where {self.expected} are announced",
                "check that the file was exported whole",
            )
        if self.parameter in "gh" and ports != _TWO_PORTS:
            self._refuse(self.last, "hybrid parameters of other than two ports", "export S parameters")
        reference = self._reference(ports)
        values = self._matrices(table[:, 1:], ports)
        return TouchstoneData(
            frequency_hz=frequency,
            parameter=self.parameter.upper(),
            values=values if self.version > 1 else _denormalised(values, self.parameter, reference[0]),
            reference_ohm=reference,
        )

    def _keyword(self, line: _Line, content: str) -> bool:
        """A `[Keyword] value` line of version 2; False at [End]."""
        match = _KEYWORD.fullmatch(content)
        if match is None:
            self._refuse(line, "a keyword without closing bracket", "write it as [Keyword]")
        name, rest = " ".join(match[1].lower().replace("-", " ").split()), match[2].strip()
        if self.block == "information" and name != "end information":
            return True
        self.block = _BLOCKS.get(name, "")
        if name == "mixed mode order":
            self._refuse(line, "mixed-mode parameters", "export single-ended parameters")
        if name == "reference":
            self.references = list(self._numbers(line, rest))
        elif name in _COUNTS or name in _CHOICES or name == "version":
            self._setting(line, name, rest)
        elif name not in _BLOCKS and name not in _WITHOUT_EFFECT:
            self._refuse(line, f"unknown keyword [{match[1][:40]}]", "keywords of version 2 can be read")
        return name != "end"

    def _setting(self, line: _Line, name: str, rest: str) -> None:
        if name == "version":
            if not rest.startswith("2."):
                self._refuse(line, f"Touchstone version {rest[:40] or '(none)'}", "versions 1 and 2 can be read")
            self.version = 2
        elif name == "number of ports":
            self.ports = self._count(line, rest)
        elif name == "number of frequencies":
            self.expected = self._count(line, rest)
        elif name == "matrix format":
            self.matrix = self._choice(line, rest, _CHOICES[name])
        else:
            self.rows_first = self._choice(line, rest, _CHOICES[name]) == "12_21"

    def _options(self, line: _Line, content: str) -> None:
        if self.options_seen:  # only the first option line counts (specification, option line)
            return
        self.options_seen = True
        words = iter(content.lower().split())
        for word in words:
            if word in _UNITS_HZ:
                self.unit_hz = _UNITS_HZ[word]
            elif word in _PARAMETERS:
                self.parameter = word
            elif word in _FORMATS:
                self.form = word
            elif word == "r":
                self.option_ohm = self._positive(line, next(words, ""))
            else:
                self._refuse(line, f"unknown option {word}", "an option line reads like # MHz S RI R 50")

    def _data(self, line: _Line, numbers: list[float]) -> bool:
        """Numbers of the network block; False at the noise data of version 1, which nothing marks."""
        if self.version > 1 and self.block != "network":
            self._refuse(line, "numbers outside [Network Data]", "check that the file was exported whole")
        if not self.starts and self.ports is None:
            extension = _EXTENSION.search(self.path)
            self.ports = int(extension[1]) if extension else _PER_DATA_LINE.get(len(numbers))
        per_point = self._per_point(self._port_count())
        if len(self.numbers) % per_point == 0:
            falls = bool(self.numbers) and numbers[0] <= self.numbers[-per_point]
            if falls and self.version == 1 and self.ports == _TWO_PORTS and len(numbers) == _NOISE_VALUES:
                return False
            self.starts.append(line)
        self.numbers.extend(numbers)
        return True

    def _per_point(self, ports: int) -> int:
        entries = ports * ports if self.matrix == "full" else ports * (ports + 1) // 2
        return 1 + 2 * entries

    def _port_count(self) -> int:
        if self.ports is None or not 1 <= self.ports <= _MOST_PORTS:
            self._refuse(self.last, "the number of ports is not known", "name the file .s1p or .s2p")
        return self.ports

    def _reference(self, ports: int) -> NDArray[np.float64]:
        references = self.references or [self.option_ohm] * ports
        if len(references) != ports or min(references) <= 0.0:
            self._refuse(self.last, f"{len(references)} references for {ports} ports", "give one above zero per port")
        return np.array(references)

    def _matrices(self, pairs: NDArray[np.float64], ports: int) -> NDArray[np.complex128]:
        first, second = pairs[:, 0::2], pairs[:, 1::2]
        if self.form == "ri":
            entries = first + 1j * second
        else:
            size = first if self.form == "ma" else 10.0 ** (np.minimum(first, _LARGEST_DB) / 20.0)
            entries = size * np.exp(1j * np.radians(second))
        if self.matrix != "full":
            rows, columns = np.tril_indices(ports) if self.matrix == "lower" else np.triu_indices(ports)
            matrices = np.zeros((pairs.shape[0], ports, ports), dtype=np.complex128)
            matrices[:, rows, columns] = entries
            matrices[:, columns, rows] = entries
            return matrices
        matrices = entries.reshape(-1, ports, ports)
        if ports == _TWO_PORTS and not self.rows_first:  # a two-port lists 11 21 12 22
            return matrices.swapaxes(1, 2)
        return matrices

    def _numbers(self, line: _Line, content: str) -> Iterator[float]:
        for word in content.split():
            if _NUMBER.fullmatch(word) is None:
                self._refuse(line, f"{word[:40]} is no number", "check that the file was exported whole")
            value = float(word.lower().replace("d", "e"))
            if not abs(value) <= _LARGEST:
                self._refuse(line, f"{word[:40]} is out of range", "check that the file was exported whole")
            yield value

    def _positive(self, line: _Line, word: str) -> float:
        values = list(self._numbers(line, word))
        if len(values) != 1 or values[0] <= 0.0:
            self._refuse(line, "a reference that is not above zero", "an option line reads like # MHz S RI R 50")
        return values[0]

    def _count(self, line: _Line, word: str) -> int:
        if not re.fullmatch(r"[0-9]{1,9}", word):
            self._refuse(line, f"{word[:40] or 'nothing'} is no count", "write a whole number")
        return int(word)

    def _choice(self, line: _Line, word: str, choices: tuple[str, ...]) -> str:
        if word.lower() not in choices:
            self._refuse(line, f"{word[:40] or 'nothing'} here", f"write {' or '.join(choices)}")
        return word.lower()

    def _refuse(self, line: _Line, message: str, next_step: str) -> NoReturn:
        raise InputError(
            message=message,
            next_step=next_step,
            path=self.path,
            line=line.number,
            column=1 if line.number else 0,
            excerpt=line.raw.strip()[:80],
        )


def _denormalised(values: NDArray[np.complex128], parameter: str, reference_ohm: float) -> NDArray[np.complex128]:
    """Undo version 1's normalisation to the reference (specification 1.1, data lines)."""
    if parameter == "z":
        return values * reference_ohm
    if parameter == "y":
        return values / reference_ohm
    if parameter in {"g", "h"}:
        scale = np.array([[reference_ohm, 1.0], [1.0, 1.0 / reference_ohm]])
        return np.asarray(values * scale if parameter == "h" else values / scale)
    return values
