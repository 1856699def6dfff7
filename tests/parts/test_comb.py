"""The spacing comb: every slot where the plan has its conductor, on the written file with the kerf undone."""

from dataclasses import dataclass, replace

import ezdxf
import pytest
from samples import CAMERA_FOLDED, GAUGE, LOOP_868, UPRIGHT_868

from boomwright.design.model import Design, Driven
from boomwright.formats.dxf import DXF
from boomwright.formats.format import FileEntry
from boomwright.parts.comb import SpacingComb
from boomwright.plan.comb import CLEARANCE_MM, CombPlan, plan_comb
from boomwright.plan.seat import SeatPlan, plan_seat
from boomwright.shop.profile import Laser, Layers, Shop

SMALL = Shop(laser=Laser(sheet_size_mm=(150.0, 90.0), kerf_mm=0.2, layers=Layers("Schnitt", "Ritz", "Gravur")))
TURNED = Shop(laser=Laser(sheet_size_mm=(120.0, 400.0), kerf_mm=0.3))
TALL = replace(LOOP_868, driven=Driven("loop", 62.0, 2.0, "copper", 4.0, perimeter_mm=520.0, shape="square"))


@dataclass(frozen=True)
class Bench:
    """As much of a plan as the comb asks for."""

    design: Design
    shop: Shop
    seat: SeatPlan
    comb: CombPlan


def planned(design, shop):
    seat, _, _ = plan_seat(design, design.boom, design.seat)
    return Bench(design, shop, seat, plan_comb(design, shop, seat)[0])


def written(plan, folder):
    (folder / "laser").mkdir()
    entries = []
    for piece in SpacingComb().build(plan):
        path = f"laser/{piece.stem}.dxf"
        DXF.write(piece, folder / path)
        entries.append(FileEntry(path, "spacing-comb", "laser", "dxf", "mm", piece.frame, piece.offsets))
    return entries


def findings(plan, folder, entries):
    wanted = [*SpacingComb().expect(plan), *(e for entry in entries for e in DXF.expect(entry, plan.shop))]
    readings = {entry.path: DXF.read(folder / entry.path) for entry in entries}
    return [(e, DXF.measure(readings[e.file], e.probe, [])) for e in wanted]


@pytest.mark.parametrize("shop", [Shop(), SMALL, TURNED], ids=["one sheet", "sections", "turned"])
@pytest.mark.parametrize("design", [GAUGE, UPRIGHT_868, LOOP_868, CAMERA_FOLDED, TALL], ids=lambda d: d.driven.form)
def test_every_slot_is_where_and_as_wide_as_planned(design, shop, tmp_path):
    plan = planned(design, shop)
    if plan.comb.left_out:
        assert shop is SMALL
        assert "two conductors stand farther apart than the laser's sheet takes, 87" in plan.comb.left_out
        return
    found = findings(plan, tmp_path, written(plan, tmp_path))
    assert len(found) > 3 * len(design.rods)
    for e, value in found:
        assert value == pytest.approx(e.expected, abs=e.allowed + 1e-12), (e.file, e.what)


def test_slots_stand_at_the_conductors_with_the_clearance(tmp_path):
    plan = planned(GAUGE, Shop())
    (section,) = plan.comb.sections
    places = [(slot.at_mm, slot.width_mm) for slot in section.slots]
    room = 2.0 * CLEARANCE_MM
    assert places == [
        pytest.approx(place)
        for place in [
            (0.0, 3.0 + room),
            (62.0, 2.0 + room),
            (74.0, 2.0 + room),
            (95.0, 3.0 + room),
            (150.0, 3.0 + room),
        ]
    ]
    # Read by ezdxf alone: the slot of D1 is the kerf narrower, its half circle centred on the rod's axis.
    (entry,) = written(plan, tmp_path)
    (outline,) = ezdxf.readfile(tmp_path / entry.path).modelspace().query("LWPOLYLINE[layer=='CUT']")
    shift = entry.frame[0][3], entry.frame[1][3]
    arcs = [(a, b) for a, b in zip(outline, list(outline)[1:], strict=False) if a[4] == pytest.approx(-1.0, abs=1e-9)]
    centres = [((a[0] + b[0]) / 2.0 - shift[0], a[1] - shift[1]) for a, b in arcs]
    assert centres == [pytest.approx((at, 0.0)) for at, _ in places]
    assert [b[0] - a[0] for a, b in arcs] == [pytest.approx(width - 0.16) for _, width in places]


def test_a_shifted_slot_is_named(tmp_path):
    plan = planned(GAUGE, Shop())
    entries = written(plan, tmp_path)
    moved = replace(GAUGE, rods=(*GAUGE.rods[:2], replace(GAUGE.rods[2], at_mm=150.05)))
    wrong = [
        e.what
        for e, value in findings(planned(moved, Shop()), tmp_path, entries)
        if abs(value - e.expected) > e.allowed
    ]
    assert wrong == ["D2 slot position", "plate length and kerf"]


def test_sections_share_a_rod_and_fit_the_sheet():
    sections = planned(GAUGE, SMALL).comb.sections
    assert [[slot.label for slot in section.slots] for section in sections] == [["R", "DE", "DE", "D1"], ["D1", "D2"]]
    # Margins of 2 kerfs + 1 on both sides, and the kerf: 150 - 2 x 1.4 - 0.2.
    assert all(section.end_mm - section.start_mm <= 147.0 for section in sections)
    # Both plates, about 25 high, lie on one sheet of 90.
    assert [piece.stem for piece in SpacingComb().build(planned(GAUGE, SMALL))] == ["spacing-comb-1"]


def test_a_plate_longer_than_the_sheet_is_wide_lies_turned():
    comb = planned(GAUGE, TURNED).comb
    assert [(len(comb.sections), place.turned) for place in comb.places] == [(1, True)]


def test_an_upright_element_gets_a_slot_for_both_conductors():
    plan = planned(UPRIGHT_868, Shop())
    slot = next(slot for slot in plan.comb.sections[0].slots if slot.tags == ("DE",))
    driven = UPRIGHT_868.driven
    assert slot.end_mm == pytest.approx(driven.spacing_mm + driven.outer_diameter_mm / 2.0 + CLEARANCE_MM)


def test_a_loop_taller_than_the_plate_is_passed_under():
    comb = planned(TALL, Shop()).comb
    assert comb.passed_under == ("DE",)
    assert all("DE" not in slot.tags for section in comb.sections for slot in section.slots)


def test_reasons_to_have_no_comb():
    alone = replace(GAUGE, rods=(), driven=Driven("straight", 62.0, 2.0, "copper", 4.0, length_mm=158.0))
    assert planned(alone, Shop()).comb.left_out == "fewer than two conductors give a place to compare"
    far = Shop(laser=Laser(sheet_size_mm=(70.0, 60.0)))
    assert "farther apart than the laser's sheet takes, 67.2 mm" in planned(GAUGE, far).comb.left_out
    stubby = replace(GAUGE, rods=(*GAUGE.rods[:2], replace(GAUGE.rods[2], length_mm=16.0)))
    assert planned(stubby, Shop()).comb.left_out == "a conductor is too short to pass a plate beside the boom"
    assert SpacingComb().left_out(planned(alone, Shop())) is not None


def test_the_shops_layer_names_are_used(tmp_path):
    plan = planned(GAUGE, SMALL)
    for entry in written(plan, tmp_path):
        layers = {e.dxf.layer for e in ezdxf.readfile(tmp_path / entry.path).modelspace()}
        assert layers == {"Schnitt", "Ritz"}
