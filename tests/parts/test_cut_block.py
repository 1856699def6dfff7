"""The cut block: a rod against the stop ends where its slot begins, whatever its diameter."""

from dataclasses import replace

import pytest
import samples

from boomwright.parts.cut_block import CutBlockPart, _shape
from boomwright.parts.solids import box, cylinder
from boomwright.plan.compensation import NOMINAL
from boomwright.plan.cut_block import plan_cut_block
from boomwright.plan.notch import resting_axis_height_mm
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Printer, Saw, Shop


def common(solid, tool):
    return sum(s.Volume() for s in solid.intersect(tool).Solids())


@pytest.mark.parametrize("design", [samples.GAUGE, samples.CAMERA, samples.MIXED_1296], ids=lambda d: d.name)
def test_the_blade_passes_just_beside_the_rods_end(design):
    plan, _ = plan_cut_block(design, Shop())
    saw = plan.slot_mm - 0.01
    for block in plan.blocks:
        solid = _shape(plan, block, NOMINAL)
        assert solid.isValid()
        for slot in block.slots:
            blade = box((slot.length_mm, slot.length_mm + saw), (-50.0, 50.0), (plan.apex_mm, 99.0))
            assert common(solid, blade) < 1e-6
            early = box((slot.length_mm - 0.05, slot.length_mm), (-50.0, 50.0), (plan.apex_mm, 99.0))
            assert common(solid, early) > 1e-3
            for rod in (r for r in design.rods if r.length_mm == slot.length_mm):
                z = resting_axis_height_mm(plan.apex_mm, rod.diameter_mm)
                assert common(solid, cylinder((0.0, 0.0, z), (1, 0, 0), rod.diameter_mm / 2.0, rod.length_mm)) < 1e-6
                assert common(solid, cylinder((-0.1, 0.0, z), (1, 0, 0), rod.diameter_mm / 2.0, 1.0)) > 1e-3


def test_lengths_too_close_go_on_another_block():
    plan, sizes = plan_cut_block(samples.GAUGE, Shop(saw=Saw(kerf_mm=0.8)))
    assert [[s.length_mm for s in block.slots] for block in plan.blocks] == [[168.0, 148.0], [145.0]]
    assert plan.slot_mm == 1.0
    assert {s.key: s.value for s in sizes}["cut-block.D1.stop_mm"] == 148.0


def test_rods_longer_than_the_bed_take_two_blocks_on_a_board():
    long = replace(samples.GAUGE, rods=(samples.rod("R", 0, 1000.0, 4), samples.rod("D1", 95, 900.0, 4, 1)))
    plan, sizes = plan_cut_block(long, Shop())
    stop, saw = plan.blocks
    assert (stop.has_stop, stop.slots, saw.has_stop, len(saw.slots)) == (True, (), False, 1)
    origin = next(s.origin for s in sizes if s.key == "cut-block.R.stop_mm")
    # The stop block reaches 32 past its stop's face, the slot's wall stands 40 past the other block's end.
    assert origin == "longer than the bed: two blocks on a straight board, 928 mm between their facing ends"
    assert stop.x_mm[1] + 928.0 + saw.slots[0].length_mm == pytest.approx(1000.0)


def test_reasons_to_have_no_block():
    bare = replace(samples.LOOP_868, rods=())
    assert plan_cut_block(bare, Shop())[0].left_out == "the design has no straight rod to cut"
    tiny = Shop(printer=Printer(bed_mm=(60.0, 60.0, 60.0)))
    rods = (samples.rod("R", 0, 70.0, 3),)
    reason = CutBlockPart().left_out(make_plan(replace(samples.LOOP_868, rods=rods), tiny))
    assert reason == "a bed of 60 mm takes no block for its rods: saw them in a mitre box"
