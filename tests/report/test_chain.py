"""Networks as lines: what an engineer reads from driver to gate."""

from __future__ import annotations

from gatecheck.report.chain import alike, chain, listed, names, shunts
from tests.circuits import BRIDGE, networks_of


def drawn(parts: str) -> list[str]:
    networks = networks_of(BRIDGE + "R9 10 lo g2\n" + parts)
    return chain(networks, networks.gates[0])


def test_same_way_for_both_edges_is_one_line() -> None:
    assert drawn("R1 10 ho a\nFB1 60R a g1") == ["U1.HO -- R1 10 -- FB1 60R -- gate"]


def test_edges_that_differ_are_two_lines_with_branches_in_brackets() -> None:
    assert drawn("R1 10 ho j\nR2 2R2 ho d\nD1 SS14 K=d A=j\nFB1 60R j g1") == [
        " on: U1.HO --> R1 10 --> FB1 60R --> gate",
        "off: U1.HO <-- [R1 10 | R2 2R2 + D1] <-- FB1 60R <-- gate",
    ]


def test_straight_drive_and_open_way() -> None:
    assert drawn("NT1 NetTie footprint=NetTie-2 ho g1") == ["U1.HO -- gate"]
    assert drawn("R1 10 dnp ho g1") == ["U1.HO -- R1 10 (not fitted) -- (open) gate"]


def test_repeated_channels_are_one_group() -> None:
    two = networks_of(
        BRIDGE
        + "R1 10 ho g1\nR2 10 lo g2\n"
        + BRIDGE.replace("Q1", "Q3")
        .replace("Q2", "Q4")
        .replace("U1", "U2")
        .replace("g1", "g3")
        .replace("g2", "g4")
        .replace("ho", "ho2")
        .replace("lo", "lo2")
        .replace(" sw", " sx")
        .replace("=sw", "=sx")
        .replace("C1", "C2")
        .replace("L1", "L2")
        .replace("boot", "boot2")
        + "R3 10 ho2 g3\nR4 10 lo2 g4\n"
    )
    assert [names(group) for group in alike(two)] == ["Q1 Q3", "Q2 Q4"]


def test_shunts_are_listed_with_values() -> None:
    networks = networks_of(
        BRIDGE + "R9 10 lo g2\nR1 10 ho g1\nR5 10k g1 sw\nC5 1n g1 sw\nD5 15V lib=D_Zener K=g1 A=sw\n"
    )
    assert shunts(networks, networks.gates[0]) == "R5 10k to source, C5 1n to source, clamp D5"


def test_long_lists_are_cut_with_a_count() -> None:
    assert listed([f"Q{i}" for i in range(8)]) == "Q0 Q1 Q2 Q3 Q4 Q5 Q6 Q7"
    assert listed([f"Q{i}" for i in range(9)]) == "Q0 Q1 Q2 Q3 Q4 Q5 and 3 more"
