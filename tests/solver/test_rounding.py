"""Roundings of a fractional crew, in lots, before any line is looked at."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from solver.answer import Policy
from solver.rounding import SNAP, half_up, largest_remainder, rounded, snapped

ONES = [Fraction(1)] * 9


@pytest.mark.parametrize(
    ("value", "whole"),
    [(3.0, 3), (3 + 9e-7, 3), (3 - 9e-7, 3), (0.0, 0), (-1e-9, 0), (123456 - 1e-7, 123456)],
)
def test_values_within_a_millionth_of_a_whole_lot_are_that_lot(value: float, whole: int) -> None:
    assert snapped(value) == whole
    for policy in (Policy.DOWN, Policy.NEAREST, Policy.UP):
        assert rounded(policy, [value], ONES) == (whole,)
    assert largest_remainder([value], ONES, 1) == (whole,)


@pytest.mark.parametrize("value", [3 + 1.1 * SNAP, 3 - 1.1 * SNAP, 0.5, 2.4999])
def test_values_further_off_are_left_as_they_are(value: float) -> None:
    assert snapped(value) == value


@pytest.mark.parametrize(
    ("value", "down", "nearest", "up"),
    [
        (9.41, 9, 9, 10),
        (9.5, 9, 10, 10),
        (9.49999, 9, 9, 10),
        (0.5, 0, 1, 1),
        (2.5, 2, 3, 3),
        (0.00001, 0, 0, 1),
        (7.99999, 7, 8, 8),
    ],
)
def test_down_nearest_half_up_and_up(value: float, down: int, nearest: int, up: int) -> None:
    assert rounded(Policy.DOWN, [value], ONES) == (down,)
    assert rounded(Policy.NEAREST, [value], ONES) == (nearest,)
    assert rounded(Policy.UP, [value], ONES) == (up,)


def test_halves_go_up_also_where_doubles_show_a_hair_less() -> None:
    below = np.nextafter(2.5, 0)
    assert below < 2.5
    assert half_up(below) == 3
    assert half_up(2.5) == 3
    assert half_up(2.5 - 1e-6) == 2


@pytest.mark.parametrize("policy", [Policy.BEST_CORNER, Policy.PATCHED, Policy.EXACT, Policy.OWN])
def test_other_crews_are_no_roundings(policy: Policy) -> None:
    with pytest.raises(KeyError):
        rounded(policy, [1.5], ONES)


class TestLargestRemainder:
    def test_keeps_the_rounded_head_count_of_each_phase(self) -> None:
        """Two phases: 1.4 + 2.4 + 3.4 = 7.2 is 7, so one more than 1 + 2 + 3; 0.7 + 0.2 + 0.6 = 1.5 is 2."""
        fractional = [1.4, 0.7, 2.4, 0.2, 3.4, 0.6]
        assert largest_remainder(fractional, ONES, 2) == (2, 1, 2, 0, 3, 1)

    def test_equal_remainders_go_to_the_category_that_stands_first(self) -> None:
        assert largest_remainder([0.5, 0.5], ONES, 1) == (1, 0)
        assert largest_remainder([1 / 3, 1 / 3, 1 / 3], ONES, 1) == (1, 0, 0)

    def test_equal_remainders_that_doubles_tell_apart_are_equal(self) -> None:
        assert largest_remainder([0.1 + 0.2, 0.3, 0.4], ONES, 1) == (0, 0, 1)
        assert largest_remainder([0.3, 0.1 + 0.2, 0.4 + 1e-12, 0.4], ONES, 1) == (0, 0, 1, 0)

    def test_counts_people_where_lots_are_half_posts(self) -> None:
        """1.3 and 2.4 half posts are 1.85 people, rounded 2: one more half post, to the larger remainder."""
        assert largest_remainder([1.3, 2.4], [Fraction(1, 2)] * 2, 1) == (1, 3)

    def test_counts_people_where_lots_are_gangs_of_four(self) -> None:
        """2.3 gangs of four and 1.6 people: 10.8, rounded 11 people; 8 + 1 leaves 2: one more person,
        then half a gang or more: the other one is all that is left and brings it no nearer."""
        assert largest_remainder([2.3, 1.6], [Fraction(4), Fraction(1)], 1) == (2, 2)
        assert largest_remainder([2.6, 1.1], [Fraction(4), Fraction(1)], 1) == (3, 1)

    def test_whole_lots_are_never_added_to(self) -> None:
        assert largest_remainder([2.0, 0.4, 0.4], ONES, 1) == (2, 1, 0)

    @settings(max_examples=200, deadline=None, derandomize=True)
    @given(st.lists(st.integers(0, 4000), min_size=1, max_size=6))
    def test_single_people_make_the_total_exactly(self, thousandths: list[int]) -> None:
        values = [n / 1000 for n in thousandths]
        crew = largest_remainder(values, ONES, 1)
        assert sum(crew) == (sum(thousandths) + 500) // 1000
        assert all(n in (int(v), int(v) + 1) for n, v in zip(crew, values, strict=True))

    @settings(max_examples=200, deadline=None, derandomize=True)
    @given(
        st.lists(st.integers(0, 4000), min_size=1, max_size=4),
        st.lists(st.sampled_from(["0.5", "1", "4", "0.3"]), min_size=4, max_size=4),
    )
    def test_each_count_is_its_floor_or_one_more(self, thousandths: list[int], lots: list[str]) -> None:
        values = [n / 1000 for n in thousandths]
        sizes = [Fraction(lot) for lot in lots][: len(values)]
        crew = largest_remainder(values, sizes, 1)
        for n, value in zip(crew, values, strict=True):
            assert n in (int(value), int(value) + 1)
            assert n == value or value != int(value)


class TestPolicies:
    @settings(max_examples=200, deadline=None, derandomize=True)
    @given(st.lists(st.floats(0, 1000, allow_nan=False), min_size=1, max_size=8))
    def test_nearest_lies_between_down_and_up_and_within_half_a_lot(self, values: list[float]) -> None:
        lots = [Fraction(1)] * len(values)
        down, nearest, up = (rounded(p, values, lots) for p in (Policy.DOWN, Policy.NEAREST, Policy.UP))
        for low, near, high, value in zip(down, nearest, up, values, strict=True):
            assert low <= near <= high <= low + 1
            assert abs(near - value) <= 0.5 + 2 * SNAP
