from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.inductance import (
    RECTANGLE_GMD_RATIO,
    meeting_filaments_h,
    offset_filaments_h,
    parallel_filaments_h,
    rectangular_bar_h,
    round_wire_h,
    round_wire_skin_h,
)

MM, NH = 1e-3, 1e-9


@pytest.mark.parametrize(("length_mm", "radius_mm", "uniform_nh"), [(10.0, 0.25, 7.31374), (25.4, 0.254, 23.15613)])
def test_round_wire(length_mm: float, radius_mm: float, uniform_nh: float) -> None:
    # Rosa 1908, formula of p. 301 ff. evaluated apart.
    found = round_wire_h(length_m=length_mm * MM, radius_m=radius_mm * MM)
    assert float(found) == pytest.approx(uniform_nh * NH, rel=1e-6)


def test_round_wire_with_the_current_in_its_skin() -> None:
    found = round_wire_skin_h(length_m=10 * MM, radius_m=0.25 * MM)
    assert float(found) == pytest.approx(6.81374 * NH, rel=1e-6)


def test_long_wire_limit_of_the_handbooks() -> None:
    # Rosa 1908: L = 2 l [ln(2 l / r) - 3/4] in centimetres, for l much longer than r (from memory, page not
    # re-read). Here 10 m of 1 mm radius: 2000 cm (ln 20000 - 0.75) = 18307 cm, one centimetre being one
    # nanohenry.
    found = float(round_wire_h(length_m=10.0, radius_m=1 * MM)) / NH
    assert found == pytest.approx(2000.0 * (math.log(20000.0) - 0.75), rel=2e-5)


@pytest.mark.parametrize(("distance_mm", "expected_nh"), [(1.0, 4.186471), (10.0, 0.934320)])
def test_parallel_filaments(distance_mm: float, expected_nh: float) -> None:
    # Closed form and numerical quadrature, apart.
    found = parallel_filaments_h(length_m=10 * MM, distance_m=distance_mm * MM)
    assert float(found) == pytest.approx(expected_nh * NH, rel=1e-6)


def test_offset_filaments() -> None:
    # Closed form and numerical quadrature, apart.
    found = offset_filaments_h(first_length_m=10 * MM, second_length_m=5 * MM, gap_m=2 * MM, distance_m=1 * MM)
    assert float(found) == pytest.approx(0.603102 * NH, rel=1e-6)


def test_meeting_filaments() -> None:
    # 10 and 10 mm from one vertex at 45 degrees; closed form and numerical quadrature, apart.
    found = meeting_filaments_h(first_length_m=10 * MM, second_length_m=10 * MM, angle_rad=math.pi / 4)
    assert float(found) == pytest.approx(1.816661 * NH, rel=1e-6)


def test_perpendicular_filaments_do_not_couple() -> None:
    found = meeting_filaments_h(first_length_m=10 * MM, second_length_m=7 * MM, angle_rad=math.pi / 2)
    assert float(found) == pytest.approx(0.0, abs=1e-25)


@pytest.mark.parametrize(
    ("length_mm", "width_mm", "thickness_mm", "formula_nh", "exact_nh"),
    [
        (10.0, 0.3, 0.035, 9.193689, 9.194594),
        (20.0, 0.5, 0.035, 19.281386, 19.283896),
        (10.0, 1.0, 0.07, 6.903976, 6.918999),
        (5.0, 5.0, 0.035, 1.411236, 1.479377),
    ],
)
def test_rectangular_bar(
    length_mm: float, width_mm: float, thickness_mm: float, formula_nh: float, exact_nh: float
) -> None:
    # Grover's formula evaluated apart; the exact volume integral with 50 digits and by quadrature.
    found = float(rectangular_bar_h(length_m=length_mm * MM, width_m=width_mm * MM, thickness_m=thickness_mm * MM))
    assert found == pytest.approx(formula_nh * NH, rel=1e-6)
    slender = length_mm >= 10.0 * width_mm
    assert found == pytest.approx(exact_nh * NH, rel=3e-3 if slender else 0.05)


@pytest.mark.parametrize(("aspect", "printed"), [(0.0, 0.22313), (1.0, 0.22352)])
def test_geometric_mean_distance_of_a_rectangle(aspect: float, printed: float) -> None:
    # Printed for a thin strip and a square, 0.44705 of its side (Maxwell; Rosa and Grover 1912; page from
    # memory). Second opinion: mean of ln(distance) over the section, midpoints of 200 cells a side with the
    # cell's own GMD.
    count = 400 if aspect == 0.0 else 60
    rows = 1 if aspect == 0.0 else count
    x, y = np.meshgrid(np.arange(count), np.arange(rows))
    distance = np.hypot(x.reshape(-1)[:, None] - x.reshape(-1), y.reshape(-1)[:, None] - y.reshape(-1))
    own = math.exp(-1.5) if rows == 1 else 0.44705
    mean = np.exp(np.mean(np.log(np.where(distance > 0.0, distance, own))))
    girth = count if rows == 1 else 2 * count
    assert mean / girth == pytest.approx(printed, rel=1e-3)
    assert pytest.approx(printed, rel=2e-3) == RECTANGLE_GMD_RATIO


@given(
    length=st.floats(1.0, 50.0),
    other=st.floats(1.0, 50.0),
    gap=st.floats(-20.0, 20.0),
    distance=st.floats(0.5, 20.0),
)
@settings(max_examples=30, deadline=None)
def test_offset_filaments_by_quadrature(length: float, other: float, gap: float, distance: float) -> None:
    # Neumann's integral: 1e-7 times the double integral of 1 / r, inner part closed, outer by 400 point
    # Gauss.
    points, weights = np.polynomial.legendre.leggauss(400)
    along = 0.5 * length * (points + 1.0)
    start, end = length + gap - along, length + gap + other - along
    inner = np.arcsinh(end / distance) - np.arcsinh(start / distance)
    expected = 1e-7 * MM * 0.5 * length * float(weights @ inner)
    found = offset_filaments_h(
        first_length_m=length * MM, second_length_m=other * MM, gap_m=gap * MM, distance_m=distance * MM
    )
    assert float(found) == pytest.approx(expected, rel=1e-5, abs=1e-15)


@given(length=st.floats(1e-3, 0.1), distance=st.floats(1e-4, 0.05))
@settings(deadline=None)
def test_equal_filaments_are_a_special_case(length: float, distance: float) -> None:
    side_by_side = offset_filaments_h(first_length_m=length, second_length_m=length, gap_m=-length, distance_m=distance)
    assert float(side_by_side) == pytest.approx(
        float(parallel_filaments_h(length_m=length, distance_m=distance)), rel=1e-6
    )
