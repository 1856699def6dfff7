"""Starts from the published table."""

import numpy as np
import pytest

from boomwright.search.published import published_arrays, published_gain_dbi, start_of


def test_a_row_gives_itself():
    for row in published_arrays():
        start = start_of(row.boom_wl, len(row.directors_wl))
        assert start.lengths_wl == pytest.approx([row.reflector_wl, *row.directors_wl])
        assert start.places_wl[0] == 0.0
        assert start.places_wl[-1] == pytest.approx(row.boom_wl)


@pytest.mark.parametrize("boom_wl", [0.5, 1.1, 2.0, 3.0, 6.0])
def test_between_and_beyond_rows(boom_wl):
    start = start_of(boom_wl, 7)
    assert len(start.lengths_wl) == 8
    assert len(start.places_wl) == 9
    assert (np.diff(start.places_wl) > 0.0).all()
    assert start.places_wl[-1] == pytest.approx(boom_wl)
    assert (start.lengths_wl[1:] < start.lengths_wl[0]).all()


def test_gain_between_rows_is_in_proportion():
    low, high = published_gain_dbi(0.8), published_gain_dbi(2.2)
    assert published_gain_dbi(1.5) == pytest.approx((low + high) / 2.0)
    assert low < high < published_gain_dbi(4.2)
    assert published_gain_dbi(0.5) == low
