"""Reads the component values that people write on schematics and boards.

``parse_value`` reads the value of a two-terminal part, ``parse_transistor_text`` the library description of a
transistor. Neither raises, whatever the text: what cannot be read is None, what can be read in more than one
way is an interval over the readings, and flags say which of this happened.

The way of a text: ``scanner`` cuts it into quantities and words, ``reading`` says what a quantity can mean for
each kind of part, ``choice`` picks among several, ``principal`` finds the value and the kind of part,
``ratings`` and ``part_number`` what stands beside it, and ``value_text`` puts the answer together. ``numeral``
knows how numbers are written, ``vocabulary`` the words, ``model`` the results and their flags.
"""

from .model import FLAGS, Amount, Kind, TransistorText, Value
from .transistor_text import parse_transistor_text
from .value_text import parse_value

__all__ = ["FLAGS", "Amount", "Kind", "TransistorText", "Value", "parse_transistor_text", "parse_value"]
