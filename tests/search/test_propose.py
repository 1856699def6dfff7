"""Proposals: at least the published array's gain, matched over the band, buildable, the same every time."""

import numpy as np
import pytest

from boomwright.design.tomlfile import read_design
from boomwright.prediction import predict
from boomwright.search.document import proposal_text
from boomwright.search.propose import propose
from boomwright.search.published import published_gain_dbi
from boomwright.search.request import Request
from boomwright.shop.profile import Bar, Shop
from boomwright.units import wavelength_mm


def worst(found):
    inside = list(found.prediction.in_band)
    sweep = found.prediction.sweep
    return sweep.gain_dbi[inside].min(), sweep.front_to_back_db[inside].min(), sweep.vswr[inside].max()


@pytest.mark.slow
def test_beats_the_published_array_over_the_band():
    boom_mm = round(0.8 * wavelength_mm(435.0), 1)
    found = propose(Request(430.0, 440.0, boom_mm=boom_mm))
    gain, _, vswr = worst(found)
    assert gain >= published_gain_dbi(0.8)
    assert vswr <= 1.5
    assert found.unbuilt == ()
    assert found.shortfalls == ()
    design = found.design
    assert design.rods[-1].at_mm - design.rods[0].at_mm == pytest.approx(boom_mm)
    sizes = [size for rod in design.rods for size in (rod.at_mm, rod.length_mm)]
    assert np.array(sizes) * 10.0 == pytest.approx(np.round(np.array(sizes) * 10.0))


@pytest.mark.slow
def test_mixed_stock_from_the_shelf_reads_back_the_same():
    shop = Shop(stock=(Bar(2.0, "brass", 1000.0, 5), Bar(4.0, "aluminium", 1000.0, 2), Bar(1.0, "copper", 1000.0, 2)))
    request = Request(2400.0, 2450.0, rods=3, rod_mm=2.0, reflector_mm=4.0, front_to_back_min_db=12.0, seed=4)
    found = propose(request, shop)
    assert [(rod.diameter_mm, rod.material) for rod in found.design.rods] == [
        (4.0, "aluminium"), (2.0, "brass"), (2.0, "brass"),
    ]  # fmt: skip
    assert {(2.0, "brass"), (4.0, "aluminium"), (1.0, "copper")} >= {
        (found.design.driven.diameter_mm, found.design.driven.material)
    }
    _, ratio, vswr = worst(found)
    assert ratio >= 12.0
    assert vswr <= 1.5
    text = proposal_text(found)
    assert "seed 4" in text
    again = read_design(text)
    assert again == found.design
    assert predict(again).shortfalls == ()
    assert proposal_text(propose(request, shop)) == text


@pytest.mark.slow
def test_a_wish_out_of_reach_is_said_and_the_best_is_given():
    found = propose(Request(863.0, 870.0, rods=1, driven="straight", gain_min_dbi=15.0))
    assert [shortfall.key for shortfall in found.shortfalls] == ["gain_dbi_min"]
    assert len(found.design.rods) == 1
    assert worst(found)[0] > 5.0
    assert "# Not met: spec.gain_dbi_min: gain is" in proposal_text(found)
