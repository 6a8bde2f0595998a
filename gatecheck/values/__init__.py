"""Reads the component values that people write on schematics and boards.

``parse_value`` reads the value of a two-terminal part, ``parse_transistor_text`` the library description of a
transistor. Neither raises, whatever the text: what cannot be read is None, what can be read in more than one
way is an interval over the readings, and flags say which of this happened.

The way of a text: ``scanner`` cuts it into quantities and words, ``numeral`` knows how numbers are written,
``vocabulary`` knows the words, ``reading`` decides for each kind of part which quantity is its value,
``part_number`` looks for an order code, and ``value_text`` puts the answer together.
"""

from .model import FLAGS, Amount, Kind, TransistorText, Value
from .transistor_text import parse_transistor_text
from .value_text import parse_value

__all__ = ["FLAGS", "Amount", "Kind", "TransistorText", "Value", "parse_transistor_text", "parse_value"]
