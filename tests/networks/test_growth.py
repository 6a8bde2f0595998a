"""Work grows with the design, not with its square: counts of time ratios on circuits made to hurt."""

from __future__ import annotations

import time

import pytest

from gatecheck.networks.find import find_networks
from tests.circuits import design_of

pytestmark = pytest.mark.alone

HURTING = {
    "independent switches": lambda n: "".join(
        f"Q{i} NMOS footprint=TO-263-2 G=g{i} D=d{i} S=s{i}\nR{i} 10 o{i} g{i}\nU{i} chip OUT=o{i} VS=s{i}\n"
        for i in range(n)
    ),
    "gates on one net": lambda n: (
        "".join(f"Q{i} NMOS G=g D=d{i} S=s{i}\n" for i in range(n)) + "R1 10 o g\nU1 chip OUT=o\n"
    ),
    "drains on one supply": lambda n: "".join(f"Q{i} NMOS G=g{i} D=VBUS S=s{i}\nR{i} 1k VBUS x{i}\n" for i in range(n)),
    "shunts to ground": lambda n: "".join(f"Q{i} NMOS G=g{i} D=d{i} S=s{i}\nR{i} 1mR s{i} GND\n" for i in range(n)),
    "all in parallel": lambda n: (
        "U1 gate_driver OUT=o\n"
        + "".join(f"Q{i} NMOS footprint=TO-263-2 G=g{i} D=VBUS S=sw\nR{i} 10 o g{i}\n" for i in range(n))
    ),
    "resistors on one gate": lambda n: "Q1 NMOS G=g D=d S=s\n" + "".join(f"R{i} 10 g x{i}\n" for i in range(n)),
}


@pytest.mark.parametrize("make", HURTING.values(), ids=HURTING)
def test_four_times_the_parts_take_at_most_seven_times_as_long(make: object) -> None:
    times = []
    for count in (500, 2000):
        design = design_of(make(count))  # type: ignore[operator]
        best = min(_timed(design) for _ in range(4))
        times.append(best)
    print(f"{times[0]:.2f} s, {times[1]:.2f} s")
    assert times[1] <= 7 * max(times[0], 0.05)


def _timed(design: object) -> float:
    started = time.perf_counter()
    find_networks(design)  # type: ignore[arg-type]
    return time.perf_counter() - started
