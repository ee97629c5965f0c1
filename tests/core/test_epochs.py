"""Cumulative change over the epochs of a baseline: what test objects add is no change of the device."""

from __future__ import annotations

import doctest
from decimal import Decimal

from qa_tracker.core import epochs
from qa_tracker.core.epochs import Epoch, changes

D = Decimal
OLD, NEW = 7, 8


def summed(*found):
    return [(one.step, one.object_step, one.cumulative) for one in changes(found).values()]


def test_examples_give_what_they_say():
    assert doctest.testmod(epochs).attempted > 0
    assert doctest.testmod(epochs).failed == 0


def test_no_epoch_changes_nothing():
    assert changes([]) == {}


def test_steps_on_one_object_add_up_exactly():
    told = summed(Epoch(1, D("0.1")), Epoch(2, D("0.3")), Epoch(3, D("0.2")))
    assert told == [(0, None, 0), (D("0.2"), None, D("0.2")), (D("-0.1"), None, D("0.1"))]


def test_kept_value_is_no_step():
    assert summed(Epoch(1, D("152")), Epoch(2, D("152")))[1] == (0, None, 0)


def test_step_between_objects_is_left_out():
    first, tied = Epoch(1, D("150"), False, OLD), Epoch(2, D("146"), False, NEW, 1, D("149"))
    assert summed(first, tied)[1] == (D("-1"), D("-3"), D("-1"))


def test_each_object_goes_on_from_its_own_epoch():
    first, tied = Epoch(1, D("150"), False, OLD), Epoch(2, D("146"), False, NEW, 1, D("149"))
    told = summed(first, tied, Epoch(3, D("148"), False, OLD), Epoch(4, D("145"), False, NEW))
    assert [one[2] for one in told] == [0, D("-1"), D("-2"), D("-2")]


def test_object_without_overlap_leaves_a_change_untold_from_there_on():
    first, lost = Epoch(1, D("150"), False, OLD), Epoch(2, D("140"), False, NEW, 1, None)
    found = changes([first, lost, Epoch(3, D("139"), False, NEW)])
    assert [(one.cumulative, one.untold) for one in found.values()] == [(0, False), (0, True), (-1, True)]


def test_object_that_nobody_tied_is_compared_with_the_epoch_before_and_untold():
    found = changes([Epoch(1, D("150"), False, OLD), Epoch(2, D("140"), False, NEW)])
    assert (found[2].before, found[2].step, found[2].untold) == (1, 0, True)


def test_value_on_no_object_follows_the_one_before_it():
    told = summed(Epoch(1, D("150"), False, OLD), Epoch(2, D("149")), Epoch(3, D("147"), False, NEW))
    assert [one[2] for one in told] == [0, D("-1"), D("-3")]


def test_bound_makes_what_follows_untold():
    found = changes([Epoch(1, D("160"), bound=True), Epoch(2, D("155")), Epoch(3, D("155"))])
    assert [one.untold for one in found.values()] == [True, True, True]


def test_overlap_of_an_epoch_that_is_not_known_is_passed_over():
    found = changes([Epoch(1, D("150"), False, OLD), Epoch(2, D("149"), False, OLD, 99, D("1"))])
    assert (found[2].before, found[2].step) == (1, D("-1"))
