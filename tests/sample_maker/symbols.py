"""The schematic symbols of the sample designs: what each pin is called and what kind of pin it is."""

from __future__ import annotations

from dataclasses import dataclass

LIBRARY = "AlderWeir"


@dataclass(frozen=True, slots=True)
class Pin:
    """One pin; an empty name means that the symbol draws none."""

    number: str
    name: str
    kind: str


@dataclass(frozen=True, slots=True)
class Symbol:
    """A symbol of the library; `description` is the library's, a part may have its own."""

    name: str
    description: str
    pins: tuple[Pin, ...]


def _two_pin(name: str, description: str, first: str = "", second: str = "") -> Symbol:
    return Symbol(name, description, (Pin("1", first, "passive"), Pin("2", second, "passive")))


def _numbered(name: str, description: str, pins: str) -> Symbol:
    """Pins in number order from text such as `HIN:input NC:no_connect`."""
    pairs = [word.rsplit(":", 1) for word in pins.split()]
    return Symbol(name, description, tuple(Pin(str(i), pin, kind) for i, (pin, kind) in enumerate(pairs, start=1)))


def connector(count: int, *, screw: bool = False) -> Symbol:
    """A one-row connector with `count` pins."""
    name = f"{'Screw_Terminal' if screw else 'Conn'}_01x{count:02d}"
    what = "screw terminal" if screw else "connector"
    pins = tuple(Pin(str(i), f"Pin_{i}", "passive") for i in range(1, count + 1))
    return Symbol(name, f"Generic {what}, single row, {count} pins", pins)


RESISTOR = _two_pin("R", "Resistor")
CAPACITOR = _two_pin("C", "Unpolarized capacitor")
POLARIZED = _two_pin("C_Polarized", "Polarized capacitor")
BEAD = _two_pin("FerriteBead", "Ferrite bead")
DIODE = _two_pin("D", "Diode", "K", "A")
SCHOTTKY = _two_pin("D_Schottky", "Schottky diode", "K", "A")
ZENER = _two_pin("D_Zener", "Zener diode", "K", "A")
LED = _two_pin("LED", "Light emitting diode", "K", "A")
TEST_POINT = Symbol("TestPoint", "Test point", (Pin("1", "1", "passive"),))
MOUNTING_HOLE = Symbol("MountingHole", "Mounting hole without connection", ())
MOSFET_N_GDS = _numbered("MOSFET_N_GDS", "N-channel MOSFET, gate/drain/source", "G:input D:passive S:passive")
MOSFET_N_GSD = _numbered("MOSFET_N_GSD", "N-channel MOSFET, gate/source/drain", "G:input S:passive D:passive")
MOSFET_P_GDS = _numbered("MOSFET_P_GDS", "P-channel MOSFET, gate/drain/source", "G:input D:passive S:passive")
MOSFET_P_GSD = _numbered("MOSFET_P_GSD", "P-channel MOSFET, gate/source/drain", "G:input S:passive D:passive")
NPN_BEC = _numbered("NPN_BEC", "NPN transistor, base/emitter/collector", "B:input E:passive C:passive")
REGULATOR = _numbered("Regulator_Linear", "Linear regulator, fixed output", "GND:power_in VO:power_out VI:power_in")
HALF_BRIDGE_DRIVER = _numbered(
    "GateDriver_HalfBridge",
    "Half-bridge gate driver, bootstrap supply, 120V, 3A source, 4A sink",
    "HIN:input LIN:input EN:input DT:passive VSS:power_in NC:no_connect NC:no_connect "
    "COM:power_in VDD:power_in LO:output NC:no_connect VS:passive HO:output VB:passive",
)
RELAY = Symbol(
    "Relay_SPDT",
    "Relay, one change-over contact",
    (
        Pin("A1", "", "passive"),
        Pin("A2", "", "passive"),
        Pin("11", "", "passive"),
        Pin("12", "", "passive"),
        Pin("14", "", "passive"),
    ),
)
MICROCONTROLLER = _numbered(
    "Microcontroller_32",
    "Microcontroller, 32 pins, 3.3V",
    "PC0:bidirectional PC1:bidirectional PA0:bidirectional PA1:bidirectional "
    "PA2:bidirectional PA3:bidirectional VSS:power_in VDD:power_in "
    "~{RST}:input DIO:bidirectional CLK:input PA4:bidirectional "
    "PA5:bidirectional PA6:bidirectional BOOT:input PA7:bidirectional "
    "PB0:bidirectional PB1:bidirectional PB2:bidirectional PB3:bidirectional "
    "PB4:bidirectional PB5:bidirectional PB6:bidirectional PB7:bidirectional "
    "VSS:power_in VDD:power_in PB8:bidirectional PB9:bidirectional "
    "PB10:bidirectional PB11:bidirectional VSS:power_in VDDA:power_in",
)
