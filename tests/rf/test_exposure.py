"""Exposure: the shipped limits against the published table, distances against calculations by hand."""

import csv
import math
from pathlib import Path

import pytest

from boomwright.data.exposure import exposure_limits, limits_at
from boomwright.errors import CatalogueError
from boomwright.rf.exposure import (
    GROUND_REFLECTION,
    Source,
    distances,
    eirp_w,
    far_field_m,
    power_density_w_m2,
    reactive_m,
)

PUBLISHED = Path(__file__).parents[1] / "published" / "exposure.csv"
GAUGE = Source(eirp_w(0.5, 10.0), 0.1, (863e6, 870e6), 0.2)


def by_name(source):
    return {(d.limit.guideline, d.limit.population): d for d in distances(source)}


@pytest.mark.parametrize(
    "row", list(csv.DictReader(PUBLISHED.read_text("utf-8").splitlines())), ids=lambda r: " ".join(list(r.values())[:3])
)
def test_limits_are_the_published_ones(row):
    found = [
        limit
        for limit in exposure_limits()
        if (limit.guideline, limit.population, limit.low_mhz)
        == (row["guideline"], row["population"], float(row["low_mhz"]))
    ]
    assert len(found) == 1
    mhz = (found[0].low_mhz + found[0].high_mhz) / 2.0
    expected = eval(row["power_density_w_m2"].replace("^", "**"), {"f_mhz": mhz, "f_ghz": mhz / 1e3})
    assert found[0].power_density_w_m2(mhz) == pytest.approx(expected, rel=1e-12)
    assert (found[0].high_mhz, found[0].averaging) == (float(row["high_mhz"]), row["averaging"])


# 47 CFR 1.1310 table 1 (A), seen: 1.0, f / 300 and 5 mW/cm2; 1 mW/cm2 = 10 W/m2.
@pytest.mark.parametrize(("mhz", "mw_cm2"), [(145.0, 1.0), (900.0, 3.0), (5800.0, 5.0)])
def test_controlled_limits_are_the_rules_of_1_1310(mhz, mw_cm2):
    (limit,) = [one for one in limits_at(mhz) if one.population == "controlled"]
    assert limit.power_density_w_m2(mhz) == pytest.approx(10.0 * mw_cm2)


def test_limits_join_at_their_corners():
    """Within 1 %: the published laws are rounded there. ICNIRP's local ones step at 6 GHz from 40 to 55 / 6^0.177."""
    rows = exposure_limits()
    for one in rows:
        for other in rows:
            if (one.guideline, one.population, one.high_mhz) == (other.guideline, other.population, other.low_mhz):
                ends = one.power_density_w_m2(one.high_mhz), other.power_density_w_m2(other.low_mhz * (1 + 1e-9))
                assert ends[1] == pytest.approx(ends[0], rel=0.011)


def test_a_limit_is_refused_where_it_is_not_stated():
    with pytest.raises(CatalogueError, match=r"^ICNIRP 2020 local, general public: no limit stated at 500 MHz$"):
        exposure_limits()[0].power_density_w_m2(500.0)
    assert distances(Source(10.0, 1.0, (14e6, 14.35e6), 10.0)) == ()


def test_distances_by_hand():
    """0.5 W into 10 dBi a tenth of the time: EIRP x duty = 0.5 x 10 x 0.1 = 0.5 W.

    ICNIRP whole body, general public, 863 MHz: 863 / 200 = 4.315 W/m2; r = sqrt(0.5 / (4 pi 4.315)) = 0.0960 m;
    with the ground 1.6 times that, 0.1536 m. FCC uncontrolled: 863 / 150 = 5.753 W/m2; r = 0.0832 m.
    """
    found = by_name(GAUGE)
    body = found["ICNIRP 2020 whole body", "general public"]
    assert body.limit_w_m2 == pytest.approx(4.315)
    assert body.free_m == pytest.approx(math.sqrt(0.5 / (4.0 * 3.14159265 * 4.315)))
    assert body.free_m == pytest.approx(0.0960, abs=5e-5)
    assert body.ground_m == body.stated_m == pytest.approx(0.1536, abs=1e-4)
    assert found["FCC OET 65", "uncontrolled"].free_m == pytest.approx(0.0832, abs=5e-5)
    assert power_density_w_m2(GAUGE, body.ground_m, GROUND_REFLECTION) == pytest.approx(body.limit_w_m2)


def test_ground_reflection_is_the_bulletins():
    """OET 65: field x 1.6, so S = 2.56 EIRP / (4 pi r^2) = 0.64 EIRP / (pi r^2) (eq. 6); value from memory."""
    source = Source(1000.0, 1.0, (100e6, 100e6), 1.0)
    assert power_density_w_m2(source, 10.0, GROUND_REFLECTION) == pytest.approx(0.64 * 1000.0 / (math.pi * 100.0))


def test_no_distance_is_stated_inside_the_reactive_near_field():
    """25 mW, a hundredth of the time: the formula's distance lies where it means nothing; lambda / 2 pi = 55.3 mm."""
    weak = Source(eirp_w(0.025, 10.0), 0.01, (863e6, 870e6), 0.2)
    body = by_name(weak)["ICNIRP 2020 whole body", "general public"]
    assert body.ground_m < reactive_m(weak) == body.stated_m == pytest.approx(0.05529, abs=1e-5)
    assert body.region == "reactive near field"


def test_far_field_begins_at_twice_the_square_of_the_size():
    """0.2 m at 870 MHz: 2 x 0.04 / 0.3446 = 0.2322 m; a small antenna's begins at lambda / 2 pi."""
    assert far_field_m(GAUGE) == pytest.approx(0.2322, abs=1e-4)
    assert far_field_m(Source(1.0, 1.0, (863e6, 870e6), 0.05)) == reactive_m(GAUGE)
    assert {d.region for d in distances(GAUGE)} == {"radiating near field", "reactive near field"}
    assert {d.region for d in distances(Source(5000.0, 1.0, (863e6, 870e6), 0.2))} == {"far field"}


def test_the_lowest_limit_of_a_band_counts():
    wide = by_name(Source(100.0, 1.0, (350e6, 700e6), 0.5))["FCC OET 65", "uncontrolled"]
    assert wide.limit_w_m2 == pytest.approx(350.0 / 150.0)
    across = by_name(Source(100.0, 1.0, (5.9e9, 7e9), 0.1))["ICNIRP 2020 local", "general public"]
    assert across.limit_w_m2 == pytest.approx(55.0 / 7.0**0.177)
