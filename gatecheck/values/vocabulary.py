"""The words of value texts: not fitted, kinds of part, outlines, labels of ratings.

All of it is common practice, collected from texts that engineers write.
"""

from __future__ import annotations

import re

METRIC_SIZES = {
    "1005": "0402",
    "1608": "0603",
    "2012": "0805",
    "3216": "1206",
    "3225": "1210",
    "4532": "1812",
}
_CHIP_SIZES = {
    "01005",
    "0201",
    "0402",
    "0603",
    "0805",
    "1008",
    "1206",
    "1210",
    "1806",
    "1808",
    "1812",
    "1825",
}
_LARGE_CHIP_SIZES = {"2010", "2220", "2225", "2512", "2725", "2728", "2816", "2817", "4527"}
_WIDE_CHIP_SIZES = {"0306", "0508", "0612", "1020", "1218", "1225"}  # terminals on the long sides
_MELF_SIZES = {"0204", "0207", "0411"}
SIZES = frozenset(METRIC_SIZES.keys() | _CHIP_SIZES | _LARGE_CHIP_SIZES | _WIDE_CHIP_SIZES | _MELF_SIZES)
"""Size codes of two-terminal parts: tenths of a millimetre if a key of ``METRIC_SIZES``, else 0.01 inch."""

NAMED_OUTLINE = (
    r"(?:MINI|MICRO)?MELF|D2?PAK|SM[ABC]F?|TOLL|LFPAK\d{0,2}"
    r"|(?:SOT|SOD|SOIC|SO|SC|TO|DO|DFN|PDFN|QFN|PQFN|TSSOP|MSOP)-?\d{1,4}[A-Z]{0,2}(?:-\d{1,2})?"
)
"""Regular expression for an outline with a name."""

NOT_FITTED = re.compile(
    r"""
    (?<![A-Za-z0-9.])(?:
        [Xx]?[Dd][Nn][PpFfIiSsMm](?![A-Za-z])
      | (?: N[IPMFC] | n[ipmfc]
          | [Nn]\.\ ?[IiPpMmFfCc]\.?
          | [Nn]/[AaMmPpFfCc]
          | (?i: no[-\ ]?(?:stuff|pop|mount|load|fit|place)
               | (?:not|un)[-\ ]?(?:fitted|populated|placed|mounted|installed|stuffed|assembled)
               | do[-\ ]not[-\ ](?:fit|populate|place|mount|install|stuff|assemble)
               | omit(?:ted)? )
        )(?![A-Za-z0-9])
    )
    """,
    re.VERBOSE,
)
"""Words that keep a part off the board."""

THERMISTOR_WORDS = frozenset({"ntc", "ptc", "thermistor"})
COMMON_MODE = re.compile(r"(?i)(?<![a-z0-9])(?:cmc|common[- ]?mode|[3-9][- ]?pins?)(?![a-z0-9])")
"""Words for a common-mode choke; a bead has two pins."""

BEAD_WORDS = frozenset({"bead", "ferritebead"})
JUMPER_WORDS = frozenset({"zero", "jumper", "link", "short"})
PARALLEL_WORDS = frozenset({"parallel", "par"})
SERIES_WORDS = frozenset({"series", "ser"})
ARRAY_WORDS = frozenset({"array", "network", "isolated"})

SUPPRESSOR_WORDS = frozenset({"tvs", "transil", "suppressor"})
ZENER_WORDS = frozenset({"zener", "clamp", "breakdown"}) | SUPPRESSOR_WORDS
RECTIFIER_WORDS = frozenset({"schottky", "led", "rectifier", "fast", "ultrafast", "switching", "signal", "bridge"})
ZENER_NAME = re.compile(r"[Zz][Dd]?(?P<volt>\d{1,3}(?:\.\d{1,3})?|\d{1,2}[Vv]\d)[Vv]?")
"""A Zener diode named by its voltage: "Z16", "ZD5V1"."""

BIDIRECTIONAL_WORDS = frozenset({"bidirectional", "bidir", "bi", "ca"})

RESISTANCE_LABELS = frozenset({"dcr", "rdc", "dcrmax", "rdcmax"})
PEAK_LABELS = frozenset({"pk", "peak", "ipk", "ipeak", "pulse", "surge"})
SATURATION_LABELS = frozenset({"isat", "sat"})
