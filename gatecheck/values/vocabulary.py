"""The words of value texts: not fitted, kinds of part, outlines, labels of ratings.

All of it is common practice, collected from texts that engineers write.
"""

from __future__ import annotations

import re

# Two-terminal chip and MELF sizes, hundredths of an inch; wide-terminal ones included.
_SIZES = (
    "01005 0201 0204 0207 0306 0402 0411 0508 0603 0612 0805 1008 1020 1206 1210 1218 1225 1806 1808 1812 1825 "
    "2010 2220 2225 2512 2725 2728 2816 2817 4527"
).split()
METRIC_SIZES = {
    "1005": "0402",
    "1608": "0603",
    "2012": "0805",
    "3216": "1206",
    "3225": "1210",
    "4532": "1812",
}
SIZES = frozenset(_SIZES) | METRIC_SIZES.keys()

NAMED_OUTLINE = (
    r"(?:MINI|MICRO)?MELF|D2?PAK|SM[ABC]F?|TOLL|LFPAK\d{0,2}"
    r"|(?:SOT|SOD|SOIC|SO|SC|TO|DO|DFN|PDFN|QFN|PQFN|TSSOP|MSOP)-?\d{1,4}[A-Z]{0,2}(?:-\d{1,2})?"
)
"""Regular expression for an outline with a name."""

NOT_FITTED = re.compile(
    r"""
    (?<![A-Za-z0-9.])(?:
        [Xx]?[Dd][Nn][PpFfIiSsMm]
      | (?<![0-9]\ )(?:N[IPMFC]|n[ipmfc])           # not after a bare number: "10 nF", "100 NF"
      | [Nn]\.\ ?[IiPpMmFfCc]\.?
      | [Nn]/[AaMmPpFfCc]
      | (?i: no[-\ ]?(?:stuff|pop|mount|load|fit|place)
           | (?:not|un)[-\ ]?(?:fitted|populated|placed|mounted|installed|stuffed|assembled)
           | do[-\ ]not[-\ ](?:fit|populate|place|mount|install|stuff|assemble)
           | omit(?:ted)? )
    )(?![A-Za-z0-9])
    """,
    re.VERBOSE,
)
"""Words that keep a part off the board."""

THERMISTOR_WORDS = frozenset({"ntc", "ptc", "thermistor"})
COMMON_MODE = re.compile(r"(?i)(?<![a-z0-9])(?:cmc|common[- ]?mode|[3-9][- ]?pins?)(?![a-z0-9])")
"""Words for a common-mode choke; a bead has two pins."""

BEAD_WORDS = frozenset({"bead", "ferrite", "ferritebead"})
JUMPER_WORDS = frozenset({"zero", "jumper", "link", "short"})
PARALLEL_WORDS = frozenset({"parallel", "par"})
SERIES_WORDS = frozenset({"series", "ser"})
ARRAY_WORDS = frozenset({"array", "network", "isolated"})

SUPPRESSOR_WORDS = frozenset({"tvs", "transil", "suppressor"})
ZENER_WORDS = frozenset({"zener", "clamp", "breakdown"}) | SUPPRESSOR_WORDS
RECTIFIER_WORDS = frozenset(
    {"schottky", "led", "rectifier", "fast", "ultrafast", "switching", "signal", "bridge"}
)
BIDIRECTIONAL_WORDS = frozenset({"bidirectional", "bidir", "bi", "ca"})

RESISTANCE_LABELS = frozenset({"dcr", "rdc", "dcrmax", "rdcmax"})
PEAK_LABELS = frozenset({"pk", "peak", "ipk", "ipeak", "pulse", "surge"})
SATURATION_LABELS = frozenset({"isat", "sat"})
