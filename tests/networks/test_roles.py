"""Roles: what switches hard and what is to be left alone. Expectations: common practice."""

from __future__ import annotations

import pytest

from gatecheck.catalogue.load import features, role_limits
from tests.circuits import BRIDGE, networks_of, switch_of

DRIVEN = BRIDGE + "R1 10 ho g1\nR2 10 lo g2\n"

LEFT_ALONE = {
    "level shifter": """
        Q1 NMOS footprint=SOT-23 G=+3V3 S=sda3 D=sda5
        R1 4k7 sda3 +3V3
        R2 4k7 sda5 +5V""",
    "reverse polarity": """
        Q1 PMOS description=P-channel~MOSFET footprint=PowerPAK_SO-8 G=g S=VIN D=vraw
        R1 100k g GND
        D1 12V lib=D_Zener K=VIN A=g
        J1 plug 1=vraw 2=GND""",
    "load switch": """
        Q1 PMOS description=P-channel~MOSFET footprint=SOT-23 G=g S=+5V D=load
        R1 10k g +5V
        R3 1k c g
        Q2 NPN B=b C=c E=GND
        U1 controller description=microcontroller PA3=m
        R2 10k m b
        J1 plug 1=load 2=GND""",
    "relay driver": """
        Q1 NMOS footprint=SOT-23 G=g S=GND D=coil
        U1 controller description=microcontroller PA3=m PB1=x
        R1 100R m g
        R2 10k g GND
        D1 1N K=+12V A=coil
        J1 plug 1=coil 2=+12V""",
    "led": """
        Q1 NMOS footprint=SOT-23 G=g S=GND D=k
        U1 controller description=microcontroller PA3=m PB1=x
        R1 1k m g
        LED1 red A=+5V K=k""",
    "battery disconnect": """
        Q1 NMOS footprint=HSOF-8 G=g1 S=BAT+ D=mid
        Q2 NMOS footprint=HSOF-8 G=g2 S=PACK D=mid
        U1 monitor description=battery~monitor CHG=c DSG=d VSS=GND
        R1 47 c g1
        R2 47 d g2""",
    "hot swap": """
        Q1 NMOS footprint=TO-263-2 G=g D=VIN S=vout
        U1 controller description=hot~swap~controller GATE=o SENSE=VIN OUT=vout
        R1 10 o g""",
    "peak held gate": """
        Q1 NMOS footprint=TO-220-3 G=g D=neg S=GND
        U1 driver description=half-bridge~gate~driver HO=h LO=l VB=b VS=sw COM=GND
        D1 SS14 A=l K=g
        R1 1M g GND""",
}


@pytest.mark.parametrize("circuit", LEFT_ALONE.values(), ids=LEFT_ALONE)
def test_what_does_not_switch_is_left_alone(circuit: str) -> None:
    networks = networks_of(circuit)
    assert {switch.role for switch in networks.switches} <= {"static", "small-signal", "unclear"}
    assert networks.gates == ()


def test_linear_loads_and_followers_are_linear() -> None:
    load = """
        Q1 NMOS footprint=TO-247-3 G=g D=in S=is
        U1 amplifier description=operational~amplifier +=ref -=is OUT=o
        R1 47 o g
        R2 10mR is GND"""
    follower = """
        Q1 NMOS footprint=SOT-223 G=g D=VIN S=vout
        R1 100k VIN g
        D1 47V lib=D_Zener K=g A=GND"""
    assert switch_of(load).role == "linear"
    assert switch_of(follower).role == "linear"


def test_half_bridge_with_a_named_driver_switches() -> None:
    for reference in ("Q1", "Q2"):
        switch = switch_of(DRIVEN, reference)
        assert switch.role == "switching"
        assert not switch.likely
        names = {entry.name for entry in switch.evidence}
        assert {"driver_output", "half_bridge", "low_resistance"} <= names


def test_a_boost_switch_without_a_bridge_switches() -> None:
    boost = """
        Q1 NMOS footprint=TO-252-2 G=g D=lx S=GND
        U1 controller description=boost~pwm~controller DRV=o VCC=+12V GND=GND
        R1 10 o g
        L1 22u VIN lx
        D1 SS14 A=lx K=VOUT"""
    assert switch_of(boost).role == "switching"


def test_score_is_the_sum_of_what_is_shown_and_the_strongest_comes_first() -> None:
    switch = switch_of(DRIVEN)
    assert switch.score == sum(entry.weight for entry in switch.evidence)
    weights = [abs(entry.weight) for entry in switch.evidence]
    assert weights == sorted(weights, reverse=True)
    assert switch.score >= role_limits()["switching"]


def test_thin_evidence_is_only_likely() -> None:
    thin = "Q1 NMOS footprint=TO-252-2 G=g D=d S=GND\nU1 chip OUT=g XX=y\nJ1 plug 1=d 2=VBUS"
    switch = switch_of(thin)
    assert (switch.role, switch.likely) == ("switching", True)


def test_every_weight_says_why() -> None:
    for name, feature in features().items():
        assert feature.text, name
