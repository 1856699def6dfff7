"""The length gauge: a right rod drops into its go slot, a rod at its upper limit too, and none into the no-go slot."""

from dataclasses import replace

import samples

from boomwright.parts.gauge import LengthGauge
from boomwright.parts.rod import straight_rod
from boomwright.plan.compensation import NOMINAL
from boomwright.plan.gauge import END_MM, plan_gauge
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Printer, Shop


def test_slots_are_length_and_iso_2768_fine():
    """[ISO 2768-1] fine: 120 to 400 mm +-0.2, 30 to 120 +-0.15, 6 to 30 +-0.1."""
    gauge, sizes = plan_gauge(samples.GAUGE, Shop())
    (plate,) = gauge.plates
    assert [(s.tags, s.is_go, s.length_mm) for s in plate.slots] == [
        ("R", True, 168.2),
        ("R", False, 167.8),
        ("D1", True, 148.2),
        ("D1", False, 147.8),
        ("D2", True, 145.2),
        ("D2", False, 144.8),
    ]
    assert next(s for s in sizes if s.key == "gauge.D1.no_go_mm").origin == "D1: 148 - 0.2 (ISO 2768 fine)"
    assert [s.length_mm for s in plan_gauge(samples.CAMERA, Shop())[0].plates[0].slots][-2:] == [10.1, 9.9]


def test_a_right_rod_goes_in_one_slot_only():
    from boomwright.parts.gauge import _shape

    gauge, _ = plan_gauge(samples.CAMERA, Shop())
    solid = _shape(gauge.plates[0], NOMINAL)
    assert solid.isValid()
    for slot in gauge.plates[0].slots:
        d = slot.width_mm - 0.3
        nominal = slot.length_mm + (-0.1 if slot.is_go else 0.1)
        rod = straight_rod(0.0, (0.0, nominal), d).rotate((0, 0, 0), (0, 0, 1), -90.0)
        lying = rod.translate((END_MM + (slot.length_mm - nominal) / 2.0, slot.y_mm, slot.floor_mm + d / 2.0))
        overlap = sum(s.Volume() for s in solid.intersect(lying).Solids())
        assert (overlap < 1e-6) == slot.is_go


def test_lengths_beyond_the_bed_are_named():
    small = Shop(printer=Printer(bed_mm=(170.0, 120.0, 100.0)))
    gauge, _ = plan_gauge(samples.GAUGE, small)
    assert gauge.beyond == ("R 168 mm",)
    assert {s.tags for plate in gauge.plates for s in plate.slots} == {"D1", "D2"}
    tiny = Shop(printer=Printer(bed_mm=(100.0, 100.0, 100.0)))
    reason = LengthGauge().left_out(make_plan(samples.GAUGE, tiny))
    assert reason == ("no rod length fits the bed of 100 mm (R 168 mm, D1 148 mm, D2 145 mm): check with a steel rule")
    assert plan_gauge(replace(samples.LOOP_868, rods=()), Shop())[0].left_out is not None


def test_many_lengths_go_on_several_plates():
    rods = tuple(samples.rod(f"D{i}", 20.0 * i, 100.0 + i, 3, i) for i in range(1, 30))
    gauge, _ = plan_gauge(replace(samples.GAUGE, rods=rods), Shop())
    assert len(gauge.plates) > 1
    assert all(p.size_mm[0] <= 220.0 and p.size_mm[1] <= 220.0 for p in gauge.plates)
    assert sum(len(p.slots) for p in gauge.plates) == 2 * 29
