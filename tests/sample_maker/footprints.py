"""The land patterns of the sample boards: pads, and the drawings that are derived from pads and body.

Dimensions are ordinary land patterns of the trade, drawn up for these samples; no library was copied.
"""

from __future__ import annotations

from dataclasses import dataclass, field

Point = tuple[float, float]
Box = tuple[float, float, float, float]
"""Left, top, right, bottom."""

SMD_LAYERS = ("F.Cu", "F.Mask", "F.Paste")
THROUGH_LAYERS = ("*.Cu", "*.Mask")

# Courtyard excess and silk clearances: common practice.
_COURTYARD_MM = 0.25
_SILK_OFFSET_MM = 0.11
_SILK_TO_PAD_MM = 0.25


@dataclass(frozen=True, slots=True)
class Pad:
    """One pad, relative to the footprint's origin at angle 0; `drill_mm` is 0 for a surface pad."""

    number: str
    shape: str
    at_mm: Point
    size_mm: Point
    drill_mm: float = 0.0
    layers: tuple[str, ...] = SMD_LAYERS

    @property
    def corner_share(self) -> float:
        """Corner radius of a rounded pad as a share of its shorter side: a quarter, at most 0.25 mm."""
        return round(min(0.25, 0.25 / min(self.size_mm)), 6)

    @property
    def kind(self) -> str:
        """The pad type as files spell it."""
        if not self.drill_mm:
            return "smd"
        return "thru_hole" if self.number else "np_thru_hole"

    def box(self, *, margin_mm: float = 0.0) -> Box:
        """The pad's bounding box, grown by a margin."""
        (x, y), (w, h) = self.at_mm, self.size_mm
        return x - w / 2 - margin_mm, y - h / 2 - margin_mm, x + w / 2 + margin_mm, y + h / 2 + margin_mm


@dataclass(frozen=True, slots=True)
class Footprint:
    """A land pattern; `body_mm` is the outline of the component seen from above."""

    name: str
    description: str
    pads: tuple[Pad, ...]
    body_mm: Box
    round_body: bool = False
    extra_silk_mm: tuple[tuple[Point, Point], ...] = field(default=())

    @property
    def attribute(self) -> str:
        """The mounting style as files spell it."""
        return "through_hole" if any(pad.drill_mm for pad in self.pads) else "smd"

    @property
    def courtyard_mm(self) -> Box:
        """The smallest box that keeps other parts away."""
        boxes = [pad.box() for pad in self.pads] + [self.body_mm]
        left, top = (min(box[i] for box in boxes) - _COURTYARD_MM for i in (0, 1))
        right, bottom = (max(box[i] for box in boxes) + _COURTYARD_MM for i in (2, 3))
        return round(left, 2), round(top, 2), round(right, 2), round(bottom, 2)

    def silk_lines(self) -> list[tuple[Point, Point]]:
        """The body outline on the silk screen, interrupted where pads are, and extra marks."""
        lines = list(self.extra_silk_mm)
        if self.round_body:
            return lines
        left, top, right, bottom = (
            round(edge + sign * _SILK_OFFSET_MM, 3) for edge, sign in zip(self.body_mm, (-1, -1, 1, 1), strict=True)
        )
        for y in (top, bottom):
            lines += [((a, y), (b, y)) for a, b in self._free_spans(y, left, right, axis=0)]
        for x in (left, right):
            lines += [((x, a), (x, b)) for a, b in self._free_spans(x, top, bottom, axis=1)]
        return lines

    def _free_spans(self, level: float, start: float, end: float, *, axis: int) -> list[tuple[float, float]]:
        """What is left of start..end along `axis` at `level` on the other one once the pads are left out."""
        other = 1 - axis
        boxes = [pad.box(margin_mm=_SILK_TO_PAD_MM) for pad in self.pads]
        blocked = sorted((box[axis], box[axis + 2]) for box in boxes if box[other] <= level <= box[other + 2])
        spans: list[tuple[float, float]] = []
        for low, high in blocked:
            if low > start:
                spans.append((start, min(low, end)))
            start = max(start, high)
        if start < end:
            spans.append((start, end))
        shortest = 0.1  # our choice: shorter marks do not print
        return [(round(a, 3), round(b, 3)) for a, b in spans if b - a > shortest]


def _centred(width: float, height: float) -> Box:
    return -width / 2, -height / 2, width / 2, height / 2


def _chip(name: str, what: str, pad: tuple[float, float, float], body: Point) -> Footprint:
    """Two equal pads: centre distance from the middle, pad width, pad height."""
    x, width, height = pad
    pads = tuple(Pad(number, "roundrect", (side * x, 0.0), (width, height)) for number, side in (("1", -1), ("2", 1)))
    return Footprint(name, what, pads, _centred(*body))


def _radial(name: str, diameter: float, pitch: float, drill: float) -> Footprint:
    size = (2 * drill, 2 * drill)
    pads = (
        Pad("1", "rect", (0.0, 0.0), size, drill, THROUGH_LAYERS),
        Pad("2", "circle", (pitch, 0.0), size, drill, THROUGH_LAYERS),
    )
    middle, radius = pitch / 2, diameter / 2
    body = (middle - radius, -radius, middle + radius, radius)
    plus = middle - radius - 0.9  # the plus sign stands just outside the can
    marks = (((plus, -2.0), (plus, -1.0)), ((plus - 0.5, -1.5), (plus + 0.5, -1.5)))
    return Footprint(
        name,
        f"Radial can capacitor, diameter {diameter} mm",
        pads,
        body,
        round_body=True,
        extra_silk_mm=marks,
    )


def _row(name: str, what: str, count: int, pitch: float, drill: float) -> Footprint:
    """Through-hole pins in a column below the origin, the first one square."""
    size = round(1.7 * drill if drill < 1.2 else 2 * drill, 2)  # ring width as usual for pins and for clamps
    pads = tuple(
        Pad(str(i + 1), "rect" if i == 0 else "circle", (0.0, i * pitch), (size, size), drill, THROUGH_LAYERS)
        for i in range(count)
    )
    half = pitch / 2
    depth = half if drill < 1.2 else 4.0
    return Footprint(name, what, pads, (-depth, -half, depth, (count - 1) * pitch + half))


def _quad(name: str, per_side: int, pitch: float, pad: tuple[float, float, float], body: float) -> Footprint:
    """Pins counted counter-clockwise from the upper left corner; a pad is distance, length, width."""
    centre, length, width = pad
    span = [(i - (per_side - 1) / 2) * pitch for i in range(per_side)]
    places = (
        [(-centre, s, length, width) for s in span]
        + [(s, centre, width, length) for s in span]
        + [(centre, -s, length, width) for s in span]
        + [(-s, -centre, width, length) for s in span]
    )
    pads = tuple(
        Pad(str(i), "roundrect", (round(x, 4), round(y, 4)), (w, h)) for i, (x, y, w, h) in enumerate(places, start=1)
    )
    return Footprint(name, f"Flat package, {4 * per_side} pins, pitch {pitch} mm", pads, _centred(body, body))


def _small_outline(name: str, count: int, centre: float, pad: Point, body: Point) -> Footprint:
    """Two columns with pitch 1.27, counted down the left side and up the right one."""
    rows = count // 2
    down = [(i - (rows - 1) / 2) * 1.27 for i in range(rows)]
    places = [(-centre, y) for y in down] + [(centre, -y) for y in down]
    pads = tuple(Pad(str(i), "roundrect", (x, round(y, 4)), pad) for i, (x, y) in enumerate(places, start=1))
    mark = ((-centre, -body[1] / 2 - 0.11), (0.0, -body[1] / 2 - 0.11))
    return Footprint(name, f"Small outline, {count} pins, pitch 1.27 mm", pads, _centred(*body), extra_silk_mm=(mark,))


def _tab_package(name: str, lead: tuple[Point, Point], tab: tuple[Point, Point], body: Box) -> Footprint:
    """Two leads on the left (1 above, 3 below) and the tab as pad 2, its paste in four windows."""
    (lead_x, lead_y), lead_size = lead
    (tab_x, tab_y), (tab_w, tab_h) = tab
    pads = [
        Pad("1", "roundrect", (lead_x, -lead_y), lead_size),
        Pad("2", "roundrect", (tab_x, tab_y), (tab_w, tab_h), layers=("F.Cu", "F.Mask")),
        Pad("3", "roundrect", (lead_x, lead_y), lead_size),
    ]
    window = (round(tab_w / 2 - 0.4, 3), round(tab_h / 2 - 0.4, 3))
    for right in (-1, 1):
        for down in (-1, 1):
            centre = (round(tab_x + right * tab_w / 4, 3), round(tab_y + down * tab_h / 4, 3))
            pads.append(Pad("", "roundrect", centre, window, layers=("F.Paste",)))
    return Footprint(name, "Power package with tab, two leads", tuple(pads), body)


_RELAY_PINS = {"A1": (0.0, 0.0), "A2": (0.0, 12.0), "11": (2.0, 6.0), "12": (14.2, 0.0), "14": (14.2, 12.0)}

_ALL = (
    _chip("R_0603", "Resistor 0603", (0.825, 0.8, 0.95), (1.6, 0.8)),
    _chip("R_0805", "Resistor 0805", (0.9125, 1.025, 1.4), (2.0, 1.25)),
    _chip("R_1206", "Resistor 1206", (1.4625, 1.125, 1.75), (3.2, 1.6)),
    _chip("C_0603", "Capacitor 0603", (0.775, 0.9, 0.95), (1.6, 0.8)),
    _chip("C_0805", "Capacitor 0805", (0.95, 1.0, 1.45), (2.0, 1.25)),
    _chip("C_1206", "Capacitor 1206", (1.475, 1.15, 1.8), (3.2, 1.6)),
    _chip("C_1210", "Capacitor 1210", (1.475, 1.15, 2.7), (3.2, 2.5)),
    _chip("L_0805", "Ferrite bead 0805", (1.05, 1.0, 1.3), (2.0, 1.25)),
    _chip("LED_0805", "Light emitting diode 0805", (0.94, 0.98, 1.4), (2.0, 1.25)),
    _chip("SOD-123", "Diode SOD-123", (1.65, 0.9, 1.2), (2.7, 1.6)),
    _chip("SMA", "Diode SMA", (2.0, 2.5, 1.8), (4.3, 2.6)),
    _radial("CP_Radial_D12.5mm_P5.0mm", 12.5, 5.0, 1.2),
    _radial("CP_Radial_D8.0mm_P3.5mm", 8.0, 3.5, 0.9),
    _row("PinHeader_1x04_P2.54mm", "Pin header, 4 pins", 4, 2.54, 1.0),
    _row("PinHeader_1x05_P2.54mm", "Pin header, 5 pins", 5, 2.54, 1.0),
    _row("PinHeader_1x06_P2.54mm", "Pin header, 6 pins", 6, 2.54, 1.0),
    _row("PinHeader_1x10_P2.54mm", "Pin header, 10 pins", 10, 2.54, 1.0),
    _row("TerminalBlock_1x02_P5.08mm", "Screw terminals, 2 poles", 2, 5.08, 1.3),
    _row("TerminalBlock_1x03_P5.08mm", "Screw terminals, 3 poles", 3, 5.08, 1.3),
    _small_outline("SOIC-14", 14, 2.475, (1.95, 0.6), (3.9, 8.65)),
    _quad("LQFP-32_7x7mm_P0.8mm", 8, 0.8, (4.175, 1.5, 0.5), 7.0),
    _tab_package("TO-263-2", ((-7.0, 2.54), (3.4, 1.2)), ((2.9, 0.0), (9.0, 10.8)), (-4.6, -5.1, 4.5, 5.1)),
    _tab_package("TO-252-2", ((-4.2, 2.28), (2.2, 1.2)), ((2.1, 0.0), (6.4, 5.8)), (-3.0, -3.3, 3.2, 3.3)),
    Footprint(
        "SOT-23",
        "Small transistor package, 3 pins",
        tuple(
            Pad(number, "roundrect", at, (1.475, 0.6))
            for number, at in (("1", (-0.9375, -0.95)), ("2", (-0.9375, 0.95)), ("3", (0.9375, 0.0)))
        ),
        _centred(1.3, 2.9),
    ),
    Footprint(
        "SOT-223",
        "Small power package, 3 pins and tab on pin 2",
        (
            *(Pad(str(i + 1), "roundrect", (-3.15, (i - 1) * 2.3), (2.0, 1.5)) for i in range(3)),
            Pad("2", "roundrect", (3.15, 0.0), (2.0, 3.8)),
        ),
        _centred(3.5, 6.5),
    ),
    Footprint(
        "Relay_SPDT_5pin",
        "Relay with one change-over contact",
        tuple(
            Pad(n, "rect" if n == "A1" else "oval", at, (2.5, 2.2), 1.3, THROUGH_LAYERS)
            for n, at in _RELAY_PINS.items()
        ),
        (-1.4, -1.8, 17.7, 13.8),
    ),
    Footprint(
        "TestPoint_Pad_D1.5mm",
        "Test point",
        (Pad("1", "circle", (0.0, 0.0), (1.5, 1.5), layers=("F.Cu", "F.Mask")),),
        _centred(1.5, 1.5),
        round_body=True,
    ),
    Footprint(
        "MountingHole_3.2mm_M3",
        "Mounting hole for M3, no copper",
        (Pad("", "circle", (0.0, 0.0), (3.2, 3.2), 3.2, ("F&B.Cu", "*.Mask")),),
        _centred(6.4, 6.4),
        round_body=True,
    ),
)

FOOTPRINTS = {footprint.name: footprint for footprint in _ALL}
