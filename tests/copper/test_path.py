"""Distances along copper on boards whose lengths are seen at once. All lengths in millimetres, edge to edge."""

from __future__ import annotations

import math

import pytest

from gatecheck.copper.path import CopperWay, NoWay, straight_m
from tests.copper.boards import copper, fill, pad, track, via


def way(*items: str, version: int = 20241229) -> CopperWay | NoWay:
    found = copper(pad("P1", "0 0"), pad("P2", "10 0"), *items, version=version)
    start, goal = (found.design.parts[name].pins[0].pads for name in ("P1", "P2"))
    return found.way("A", start, goal)


def length_mm(*items: str, version: int = 20241229) -> float:
    found = way(*items, version=version)
    assert isinstance(found, CopperWay), found
    assert found.length_m[0] == pytest.approx(found.length_m[1])
    return found.length_m[0] * 1e3


def test_a_straight_track_counts_from_edge_to_edge() -> None:
    assert length_mm(track("0 0", "10 0")) == pytest.approx(9)


def test_the_shortest_of_two_ways_counts() -> None:
    detour = [track("0 0", "0 5"), track("0 5", "10 5"), track("10 5", "10 0")]
    assert length_mm(*detour) == pytest.approx(19)
    assert length_mm(*detour, track("0 0", "10 0")) == pytest.approx(9)


def test_an_arc_counts_its_length() -> None:
    arc = '(arc (start 0 0) (mid 5 -5) (end 10 0) (width 0.3) (layer "F.Cu") (net 1))'
    inside = 5 * math.asin(0.5 / 5) * 2  # about what lies in the two pads, whose edges the arc meets upright
    assert length_mm(arc) == pytest.approx(math.pi * 5 - inside, abs=0.06)


def test_tracks_meet_at_tees_and_crossings_without_a_common_end() -> None:
    tee = [track("0 0", "0 3"), track("-2 3", "12 3"), track("10 3", "10 0")]
    assert length_mm(*tee) == pytest.approx(15)
    crossing = [track("0 0", "10 3"), track("0 3", "10 0")]
    assert length_mm(*crossing) == pytest.approx(2 * (math.hypot(5, 1.5) - math.hypot(0.5, 0.15)), abs=1e-3)


def test_a_via_leads_to_the_other_side_and_costs_its_height() -> None:
    down = [track("0 0", "2 0"), via("2 0"), track("2 0", "8 0", layer="B.Cu"), via("8 0"), track("8 0", "10 0")]
    found = way(*down)
    assert isinstance(found, CopperWay)
    assert found.vias == 2
    assert found.length_m[0] * 1e3 == pytest.approx(9 + 2 * 1.5)
    assert isinstance(way(*[item for item in down if "via" not in item]), NoWay)


def test_a_via_on_the_body_of_a_track_touches_it() -> None:
    on_body = [track("0 0", "4 0"), via("2 0.2"), track("2 0.2", "10 0.2", layer="B.Cu"), via("10 0.2")]
    assert length_mm(*on_body) == pytest.approx(1.5 + 0.2 + 8 - 0 + 2 * 1.5, abs=0.3)


def test_a_fill_is_crossed_straight() -> None:
    assert length_mm(fill(1, "F.Cu", "-1 -1", "11 -1", "11 1", "-1 1")) == pytest.approx(9)


def test_a_fill_with_a_bay_between_gives_an_interval() -> None:
    bay = fill(1, "F.Cu", "-1 -1", "4 -1", "4 5", "6 5", "6 -1", "11 -1", "11 6", "-1 6")
    found = way(bay)
    assert isinstance(found, CopperWay)
    low, high = found.length_m
    assert low * 1e3 == pytest.approx(9)
    assert high > low


def test_the_stroke_of_old_fills_reaches_out_and_newer_ones_end_where_drawn() -> None:
    # Fill edges at x = 0.55 and 9.45 miss the pads' edges by 0.05; half a stroke of 0.2 bridges that.
    short = ("0.55 -0.4", "9.45 -0.4", "9.45 0.4", "0.55 0.4")
    assert isinstance(way(fill(1, "F.Cu", *short)), NoWay)
    assert isinstance(way(fill(1, "F.Cu", *short, rest="(filled_areas_thickness yes)")), CopperWay)
    assert isinstance(way(fill(1, "F.Cu", *short), version=20171130), CopperWay)
    assert isinstance(way(fill(1, "F.Cu", *short, rest="(filled_areas_thickness no)"), version=20171130), NoWay)


def test_other_nets_and_other_layers_lead_nowhere() -> None:
    assert isinstance(way(track("0 0", "10 0", net=2)), NoWay)
    assert isinstance(way(track("0 0", "10 0", layer="B.Cu")), NoWay)


def test_what_is_missing_is_named() -> None:
    gone = way()
    assert isinstance(gone, NoWay)
    assert "not routed" in gone.reason
    unfilled = way('(zone (net 1) (net_name "A") (layer "F.Cu") (polygon (pts (xy 0 0) (xy 9 0) (xy 9 9))))')
    assert isinstance(unfilled, NoWay)
    assert "not filled" in unfilled.reason


def test_nets_by_name_give_the_same() -> None:
    text = [
        item.replace('(net 1 "A")', '(net "A")').replace("(net 1)", '(net "A")')
        for item in (pad("P1", "0 0"), pad("P2", "10 0"), track("0 0", "10 0"))
    ]
    found = copper(*text, version=20260206)
    start, goal = (found.design.parts[name].pins[0].pads for name in ("P1", "P2"))
    got = found.way("A", start, goal)
    assert isinstance(got, CopperWay)
    assert got.length_m[0] == pytest.approx(9e-3)


def test_straight_distance_is_from_edge_to_edge() -> None:
    found = copper(pad("P1", "0 0"), pad("P2", "3 4 0"), pad("P3", "0.5 0.5"))
    one, two, three = (found.design.parts[name].pins[0].pads for name in ("P1", "P2", "P3"))
    assert straight_m(one, two) * 1e3 == pytest.approx(math.hypot(2, 3))
    assert straight_m(one, three) == 0


@pytest.mark.parametrize("turn", [0, 30, 90, 135])
def test_turning_the_board_changes_no_length(turn: float) -> None:
    cos, sin = math.cos(math.radians(turn)), math.sin(math.radians(turn))

    def at(x: float, y: float) -> str:
        return f"{x * cos + y * sin:.6f} {y * cos - x * sin:.6f}"

    def turned(name: str, x: float, y: float) -> str:
        return pad(name, at(x, y) + f" {turn}").replace("(at 0 0)", f"(at 0 0 {turn})")

    found = copper(turned("P1", 0, 0), turned("P2", 10, 0), track(at(0, 0), at(5, 0)), track(at(5, 0), at(10, 0)))
    start, goal = (found.design.parts[name].pins[0].pads for name in ("P1", "P2"))
    got = found.way("A", start, goal)
    assert isinstance(got, CopperWay)
    assert got.length_m[0] * 1e3 == pytest.approx(9, abs=1e-4)
