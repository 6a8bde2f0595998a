"""Touchstone reader against the examples of its specification and an independent reader.

Examples are numbered as in the Touchstone File Format Specification, Version 2.0 (IBIS Open Forum, 2009).
Their numbers were compared with the specification tests of scikit-rf 2.2.0; file texts are written from
memory of the grammar, and page numbers were not re-read.
"""

from __future__ import annotations

import io
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.errors import InputError
from gatecheck.parse.touchstone import read_touchstone


def polar(*pairs: tuple[float, float]) -> Any:
    return np.array([size * np.exp(1j * np.radians(angle)) for size, angle in pairs])


EXAMPLE_2 = """\
[Version] 2.0
# MHz Z MA
[Number of Ports] 1
[Number of Frequencies] 5
[Network Data]
1 11 10
2 12 20
3 13 30
4 14 40
5 15 50
[End]
"""
EXAMPLE_8 = """\
! one port, S parameters, one frequency
# MHz S MA R 50
2.000 0.894 -12.136
"""
EXAMPLE_9 = """\
! one port, Z parameters normalised to 75 ohm
# MHz Z MA R 75
100 0.99 -4
200 0.80 -22
300 0.707 -45
400 0.40 -62
500 0.01 -89
"""
EXAMPLE_7 = """\
[Version] 2.0
# MHz Z MA
[Number of Ports] 1
[Number of Frequencies] 5
[Reference] 20.0
[Network Data]
100 74.25 -4
200 60 -22
300 53.025 -45
400 30 -62
500 0.75 -89
[End]
"""
EXAMPLE_13 = """\
! two ports, three frequencies
# GHz S RI R 50.0
1.0000 0.3926 -0.1211 -0.0003 -0.0021 -0.0003 -0.0021 0.3926 -0.1211
2.0000 0.3517 -0.3054 -0.0096 -0.0298 -0.0096 -0.0298 0.3517 -0.3054
10.000 0.3419  0.3336 -0.0134  0.0379 -0.0134  0.0379 0.3419  0.3336
"""
EXAMPLE_14 = """\
# GHz S MA R 50
5.00000 0.60 161.24 0.40 -42.20 0.42 -66.58 0.53 -79.34 ! row 1
        0.40 -42.20 0.60 161.20 0.53 -79.34 0.42 -66.58 ! row 2
        0.42 -66.58 0.53 -79.34 0.60 161.24 0.40 -42.20
        0.53 -79.34 0.42 -66.58 0.40 -42.20 0.60 161.24
6.00000 0.57 150.37 0.40 -44.34 0.41 -81.24 0.57 -95.77
        0.40 -44.34 0.57 150.37 0.57 -95.77 0.41 -81.24
        0.41 -81.24 0.57 -95.77 0.57 150.37 0.40 -44.34
        0.57 -95.77 0.41 -81.24 0.40 -44.34 0.57 150.37
"""
EXAMPLE_5 = """\
[Version] 2.0
# GHz S MA R 50
[Number of Ports] 4
[Reference] 50 75
0.01 0.01
[Number of Frequencies] 1
[Matrix Format] {form}
[Network Data]
5.0 {entries}
[End]
"""
LOWER = """\
0.60 161.24
0.40 -42.20 0.60 161.20
0.42 -66.58 0.53 -79.34 0.60 161.24
0.53 -79.34 0.42 -66.58 0.40 -42.20 0.60 161.24
"""
UPPER = """\
0.60 161.24 0.40 -42.20 0.42 -66.58 0.53 -79.34
0.60 161.20 0.53 -79.34 0.42 -66.58
0.60 161.24 0.40 -42.20
0.60 161.24
"""
EXAMPLE_17 = """\
! two ports with noise data; no options but the sign: GHz, S, MA, 50 ohm
#
2  .95  -26 3.57 157 .04 76 .66 -14
22 .60 -144 1.30  40 .14 40 .56 -85
! noise
4  .7 .64 69 .38
18 2.7 .46 -33 .40
"""


def test_example_2() -> None:
    data = read_touchstone(EXAMPLE_2, path="part.ts")
    expected = polar((11, 10), (12, 20), (13, 30), (14, 40), (15, 50))
    assert data.parameter == "Z"
    assert data.values[:, 0, 0] == pytest.approx(expected)
    assert data.frequency_hz.tolist() == [1e6, 2e6, 3e6, 4e6, 5e6]
    assert data.reference_ohm.tolist() == [50.0]


def test_example_8() -> None:
    data = read_touchstone(EXAMPLE_8, path="part.s1p")
    assert data.frequency_hz.tolist() == [2e6]
    assert complex(data.values[0, 0, 0]) == pytest.approx(complex(polar((0.894, -12.136))[0]))


def test_examples_7_and_9_are_the_same_impedance() -> None:
    # 75 * (0.99, 0.80, 0.707, 0.40, 0.01) = 74.25, 60, 53.025, 30, 0.75: version 1 is normalised, version 2
    # is not.
    normalised = read_touchstone(EXAMPLE_9, path="part.s1p")
    plain = read_touchstone(EXAMPLE_7, path="part.ts")
    expected = polar((74.25, -4), (60, -22), (53.025, -45), (30, -62), (0.75, -89))
    assert plain.values[:, 0, 0] == pytest.approx(expected)
    assert normalised.values[:, 0, 0] == pytest.approx(expected)
    assert (float(normalised.reference_ohm[0]), float(plain.reference_ohm[0])) == (75.0, 20.0)


def test_example_13() -> None:
    data = read_touchstone(EXAMPLE_13, path="part.s2p")
    assert data.values.shape == (3, 2, 2)
    assert data.frequency_hz.tolist() == [1e9, 2e9, 10e9]
    assert data.values[1].tolist() == [
        [0.3517 - 0.3054j, -0.0096 - 0.0298j],
        [-0.0096 - 0.0298j, 0.3517 - 0.3054j],
    ]


def test_example_14() -> None:
    data = read_touchstone(EXAMPLE_14, path="part.s4p")
    assert data.values.shape == (2, 4, 4)
    assert data.values[0, 1] == pytest.approx(polar((0.40, -42.20), (0.60, 161.20), (0.53, -79.34), (0.42, -66.58)))
    assert complex(data.values[1, 3, 0]) == pytest.approx(complex(polar((0.57, -95.77))[0]))


@pytest.mark.parametrize(
    ("form", "entries"),
    [
        ("Lower", LOWER),
        ("Upper", UPPER),
    ],
)
def test_examples_5_and_6_fill_the_other_half(form: str, entries: str) -> None:
    data = read_touchstone(EXAMPLE_5.format(form=form, entries=entries), path="part.ts")
    full = read_touchstone(EXAMPLE_14, path="part.s4p")
    assert data.values[0] == pytest.approx(full.values[0])
    assert data.reference_ohm.tolist() == [50.0, 75.0, 0.01, 0.01]


def test_example_17_leaves_noise_out() -> None:
    data = read_touchstone(EXAMPLE_17, path="part.s2p")
    assert data.frequency_hz.tolist() == [2e9, 22e9]
    # A two-port lists 11 21 12 22.
    expected = [[0.95, -26.0], [3.57, 157.0], [0.04, 76.0], [0.66, -14.0]]
    found = data.values[0].T.reshape(-1)
    assert found == pytest.approx(polar(*[(size, angle) for size, angle in expected]))


@pytest.mark.parametrize(("order", "through"), [("21_12", 3.57), ("12_21", 0.04)])
def test_two_port_order_of_version_2(order: str, through: float) -> None:
    text = (
        f"[Version] 2.0\n# GHz S MA R 50\n[Number of Ports] 2\n[Two-Port Data Order] {order}\n"
        "[Number of Frequencies] 1\n[Begin Information]\nanything: 1 [x\n[Colour] red\n[End Information]\n"
        "[Network Data]\n2 .95 -26 3.57 157 .04 76 .66 -14\n[Noise Data]\n4 .7 .64 69 .38\n[End]\nleft over\n"
    )
    data = read_touchstone(text, path="part.ts")
    assert abs(complex(data.values[0, 1, 0])) == pytest.approx(through)


def test_only_the_first_option_line_counts() -> None:
    data = read_touchstone("# kHz S RI R 75\n# GHz Z MA R 50\n1 0.5 0\n", path="x.s1p")
    assert (data.parameter, data.frequency_hz.tolist(), data.reference_ohm.tolist()) == ("S", [1e3], [75.0])


def test_decibels_and_units() -> None:
    data = read_touchstone("# kHz S DB R 75\n1 -6.0205999 90\n", path="x")
    assert data.frequency_hz.tolist() == [1e3]
    assert complex(data.values[0, 0, 0]) == pytest.approx(0.5j, rel=1e-7)


@pytest.mark.parametrize(
    ("letter", "factors"), [("Y", [0.02] * 4), ("H", [50.0, 1.0, 1.0, 0.02]), ("G", [0.02, 1.0, 1.0, 50.0])]
)
def test_version_1_is_normalised(letter: str, factors: list[float]) -> None:
    data = read_touchstone(f"# Hz {letter} RI R 50\n1 1 0 2 0 3 0 4 0\n", path="x.s2p")
    assert data.values[0].T.reshape(-1).real == pytest.approx(
        np.array([1.0, 2.0, 3.0, 4.0]) * np.array(factors)[[0, 2, 1, 3]]
    )


@pytest.mark.parametrize("form", ["RI", "MA", "DB"])
@pytest.mark.parametrize("ports", [1, 2, 3])
def test_equals_an_independent_reader(form: str, ports: int) -> None:
    import skrf

    rng = np.random.default_rng(ports)
    scattering = rng.normal(size=(4, ports, ports)) + 1j * rng.normal(size=(4, ports, ports))
    network = skrf.Network(f=np.arange(1.0, 5.0), f_unit="MHz", s=scattering, z0=50.0)
    text = network.write_touchstone(filename=f"x.s{ports}p", form=form.lower(), return_string=True)
    stream = io.StringIO(text)
    stream.name = f"x.s{ports}p"
    theirs, ours = skrf.Network(stream), read_touchstone(text, path=f"x.s{ports}p")
    assert ours.values == pytest.approx(theirs.s, rel=1e-9)
    assert ours.frequency_hz == pytest.approx(theirs.f)


BAD = [
    ("", "option line"),
    ("1 2 3\n", "before the option line"),
    ("# MHz S MA R 50\n", "ports"),
    ("# MHz S MA R 50\n1 2 x\n", "no number"),
    ("# MHz S MA R 50\n1 2 nan\n", "no number"),
    ("# MHz S MA R 50\n1 2 1e999\n", "out of range"),
    ("# furlong S MA\n1 2 3\n", "unknown option furlong"),
    ("# MHz S MA R\n1 2 3\n", "not above zero"),
    ("# MHz S MA R -5\n1 2 3\n", "not above zero"),
    ("# MHz H MA R 50\n1 2 3\n", "hybrid"),
    ("# MHz S MA R 50\n2 2 3\n1 2 3\n", "do not rise"),
    ("# MHz S MA R 50\n1 2 3\n1\n", "not complete"),
    ("[Version] 3.0\n", "version 3.0"),
    ("[Version\n", "closing bracket"),
    ("[Number of Ports] many\n", "no count"),
    ("[Matrix Format] round\n", "round here"),
    ("[Mixed-Mode Order] D2,3\n", "mixed-mode"),
    ("[Colour] red\n", r"unknown keyword \[Colour\]"),
    ("[Version] 2.0\n# MHz S MA\n[Number of Ports] 1\n1 2 3\n", "outside"),
    (
        "[Version] 2.0\n# S MA\n[Number of Ports] 1\n[Number of Frequencies] 2\n[Network Data]\n1 2 3\n",
        "1 freq",
    ),
    (
        "[Version] 2.0\n# MHz S MA\n[Number of Ports] 1\n[Reference] 50 75\n[Network Data]\n1 2 3\n[End]\n",
        "2 references",
    ),
    ("[Version] 2.0\n# MHz S MA\n[Number of Ports] 1\n[Network Data]\n[End]\n", "no data"),
    ("[Version] 2.0\n# MHz S MA\n[Number of Ports] 9999\n[Network Data]\n1 2 3\n[End]\n", "ports"),
]


@pytest.mark.parametrize(("text", "message"), BAD)
def test_trouble_has_a_place_and_a_next_step(text: str, message: str) -> None:
    with pytest.raises(InputError, match=message) as caught:
        read_touchstone(text, path="part.txt")
    assert caught.value.path == "part.txt"
    assert caught.value.next_step


@given(text=st.text(alphabet="#! [].+-0123456789eEdDRISMAZYGHhzkKrVvnNuU\n\t", max_size=200))
@settings(deadline=None)
def test_any_text_is_read_or_refused(text: str) -> None:
    try:
        data = read_touchstone(text, path="part.s2p")
    except InputError:
        return
    assert np.isfinite(data.values).all()


@given(place=st.integers(0, len(EXAMPLE_14) - 1), letter=st.characters(max_codepoint=127))
@settings(deadline=None)
def test_any_damage_is_read_or_refused(place: int, letter: str) -> None:
    damaged = EXAMPLE_14[:place] + letter + EXAMPLE_14[place + 1 :]
    try:
        data = read_touchstone(damaged, path="part.s4p")
    except InputError:
        return
    assert np.isfinite(data.values).all()
