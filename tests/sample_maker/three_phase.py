"""The pump's three-phase stage: the half bridge three times, one below the other, with a bus bar along the right."""

from __future__ import annotations

from dataclasses import replace

from . import symbols
from .channel import Channel
from .circuit import Circuit, Part, Sheet, Zone
from .half_bridge import HALF_BRIDGE
from .stock import mounting_holes

_LETTERS = "ABC"
_PITCH_MM = 40.0
# Connectors, bulk capacitor and holes of the single half bridge: the three legs share others.
_NOT_IN_A_LEG = ("J1", "J2", "J3", "C4", "H1", "H2", "H3", "H4")
_SHARED_ZONES = frozenset({"BUS", "GND_PLANE"})


def _leg() -> Circuit:
    """The half bridge as the sheet that is shown three times."""
    leg = HALF_BRIDGE
    for ref in _NOT_IN_A_LEG:
        leg = leg.without(ref)
    leg = leg.rerouted(
        away=("0.5 F C3.1 ,90.2",),
        instead=("0.5 F U1.9 113.3, ,90.2 110.2,", "0.25 F R10.1 R8.1", "0.25 F R11.1 R9.1"),
    )
    return replace(leg, zones=tuple(zone for zone in leg.zones if zone.name not in _SHARED_ZONES))


_CHANNELS = tuple(
    Channel(
        Sheet(f"Leg {letter}", "leg.kicad_sch"),
        i + 1,
        (0.0, i * _PITCH_MM),
        {
            "/PHASE": f"/PHASE_{letter}",
            "/PWM_H": f"/PWM_{letter}H",
            "/PWM_L": f"/PWM_{letter}L",
            "/EN": "/EN",
        },
    )
    for i, letter in enumerate(_LETTERS)
)
_LEGS = tuple(channel.placed(_leg()) for channel in _CHANNELS)

_CONTROL_NETS = (*(f"/PWM_{letter}{side}" for letter in _LETTERS for side in "HL"), "/EN", "+12V", "GND", "GND")

_PARTS = (
    Part(
        "J1",
        symbols.connector(2, screw=True),
        "48V in",
        "TerminalBlock_1x02_P5.08mm",
        ("+48V", "GND"),
        (189, 74),
    ),
    Part("J2", symbols.connector(10), "Control", "PinHeader_1x10_P2.54mm", _CONTROL_NETS, (93, 111.12)),
    *(
        Part(
            f"J{3 + i}",
            symbols.connector(2, screw=True),
            f"Phase {letter} out",
            "TerminalBlock_1x02_P5.08mm",
            (f"/PHASE_{letter}", "GND"),
            (174, 91 + i * _PITCH_MM),
        )
        for i, letter in enumerate(_LETTERS)
    ),
    *(
        Part(
            f"C{i + 1}",
            symbols.POLARIZED,
            "470uF 63V",
            "CP_Radial_D12.5mm_P5.0mm",
            ("+48V", "GND"),
            (185, y),
            fields=(("Rating", "63V"),),
        )
        for i, y in enumerate((106.5, 120.5, 153.5))  # clear of the wires at the phase terminals
    ),
    *mounting_holes((94, 66), (192, 66), (94, 188), (192, 188)),
)

_ROUTES = (
    # drive signals: up to leg A on the upper side, to the others below the enable and supply rails
    "0.25 F J2.1 94.9, ,76.2 R108.1",
    "0.25 F J2.2 95.6, ,78.2 R109.1",
    "0.25 B J2.3 100.3, @ R208.1",
    "0.25 B J2.4 100.3, @ R209.1",
    "0.25 F J2.5 95.6, ,156.2 @ 100.3, @ R308.1",
    "0.25 F J2.6 94.9, ,158.2 @ 100.3, @ R309.1",
    # enable, a rail at 97.2
    "0.25 B J2.7 97.2, @ ,81.4 108.3, 108.97,80.73 U101.3",
    "0.25 F U201.3 108.97,120.73 108.3,121.4 100.3, @ 97.2, @",
    "0.25 F 97.2,126.36 ,161.4 @ 100.3, @ 108.3, 108.97,160.73 U301.3",
    # driver supply, a rail at 98.8
    "0.8 B J2.8 98.8, @ ,90.2 110.2, C103.1",
    "0.8 F C203.1 ,130.2 98.8,",
    "0.8 F 98.8,128.9 ,170.2 110.2, C303.1",
)


def _bus() -> tuple[tuple[float, float], ...]:
    """A comb: the bar along the right edge and a finger to the drain of each upper switch."""
    fingers = [
        (x, y + i * _PITCH_MM)
        for i in reversed(range(len(_LETTERS)))
        for x, y in ((179.5, 78.4), (151.6, 78.4), (151.6, 82.9), (140.8, 82.9), (140.8, 71.2), (179.5, 71.2))
    ]
    return ((195, 71.2), (195, 163), (179.5, 163), *fingers)


_ZONES = (
    Zone("BUS", "+48V", "F.Cu", _bus(), priority=2),
    Zone("GND_PLANE", "GND", "B.Cu", ((90.5, 62.5), (195.5, 62.5), (195.5, 191.5), (90.5, 191.5))),
)

THREE_PHASE = Circuit(
    name="three_phase",
    title="Alder Weir pump stage, three phases",
    origin_mm=(90, 62),
    size_mm=(106, 130),
    parts=(*(part for leg in _LEGS for part in leg.parts), *_PARTS),
    routes=(*(route for leg in _LEGS for route in leg.routes), *_ROUTES),
    stitches={
        net: tuple(at for leg in _LEGS for at in leg.stitches.get(net, ()))
        for net in ("GND", *(f"/PHASE_{letter}" for letter in _LETTERS))
    },
    zones=(*(zone for leg in _LEGS for zone in leg.zones), *_ZONES),
    notes=(
        ("ALDER WEIR PUMP STAGE", (122, 64.5)),
        ("THREE PHASES, REV A", (122, 67)),
        ("INVENTED SAMPLE", (112, 186)),
        *((f"LEG {letter}", (122, 98 + i * _PITCH_MM)) for i, letter in enumerate(_LETTERS)),
    ),
)
