from __future__ import annotations

import pytest

from gatecheck.values import FLAGS, Amount


def test_an_exact_amount() -> None:
    assert Amount.exactly(4.7) == Amount(4.7, 4.7, 4.7)


def test_a_span_has_its_favourite_or_the_geometric_mean_as_nominal() -> None:
    assert Amount.spanning([10.0, 0.1], favoured=10.0) == Amount(0.1, 10.0, 10.0)
    assert Amount.spanning([1.0, 100.0]).nominal == pytest.approx(10.0)


def test_a_span_from_zero_has_the_arithmetic_mean() -> None:
    assert Amount.spanning([0.0, 10e3]) == Amount(0.0, 5e3, 10e3)


def test_the_nominal_of_a_span_never_leaves_it() -> None:
    assert Amount.spanning([3.0, 3.0]) == Amount.exactly(3.0)


def test_every_flag_is_explained() -> None:
    assert all(len(meaning.split()) > 3 for meaning in FLAGS.values())
