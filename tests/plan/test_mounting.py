"""Mass, balance and wind by arithmetic: against hand calculation, laws, and the volumes of the actual solids."""

import math
from dataclasses import replace

import pytest
import samples

from boomwright.data.tables import density_g_cm3
from boomwright.design.model import Band, Boom, Design, Driven, Feed, Seat
from boomwright.plan.estimate import comb_estimate, print_estimate, sheet_estimate
from boomwright.plan.mounting import VIEWS, balance_from_nearest, clamp_room_mm, plan_mounting
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Laser, Printer, Shop

BARE = Design(
    "bare",
    Band(863.0, 870.0, 866.5),
    Driven("straight", 0.0, 2.0, "copper", 4.0, length_mm=164.0),
    Feed(),
    (samples.rod("D1", 60.0, 140.0, 4.0),),
    Boom("square", 15.0, "aluminium", 20.0, 40.0, 1.5),
    Seat("through", bond="insulated", sleeve_mm=1.0),
)


def mounted(design, with_resin=True):
    return plan_mounting(make_plan(design, Shop()), with_resin)


def test_a_drilled_square_tube_by_hand():
    """Tube 15 x 1.5, 120 long: (225 - 144) x 120 = 9720 mm3, less a hole of 6.1 through two walls of 1.5:
    pi / 4 x 6.1^2 x 3 = 87.67 mm3; 9632.33 mm3 x 2.70 g/cm3 = 26.007 g. Centre: (9720 x 40 - 87.67 x 60) / 9632.33.
    """
    plan = make_plan(replace(BARE, driven=replace(BARE.driven, gap_mm=22.0)), Shop())
    boom = plan_mounting(plan).masses[0]
    assert boom.volume_mm3 == pytest.approx(9632.33, abs=0.02)
    assert boom.mass_g == pytest.approx(26.007, abs=1e-3)
    assert boom.at_mm == pytest.approx(39.818, abs=1e-3)


def test_rod_mass_and_wind_by_hand():
    """3 mm brass, 168 long: pi / 4 x 9 x 168 = 1187.5 mm3 x 8.45 = 10.03 g.

    30 m/s: 0.5 x 1.25 x 900 = 562.5 N/m2. On the boom's side, 12 x 212 mm: 562.5 x 1.2 x 0.002544 = 1.717 N.
    """
    found = mounted(samples.GAUGE, with_resin=False)
    rod = next(one for one in found.masses if one.name == "R")
    assert rod.mass_g == pytest.approx(10.03, abs=0.005)
    boom = next(one for one in found.areas if one.name == "boom")
    plan = make_plan(samples.GAUGE, Shop())
    length = plan.seat.end_mm - plan.seat.start_mm
    assert boom.mm2["side"] == pytest.approx(12.0 * length)
    only = replace(found, areas=(boom,))
    assert only.wind_n("side", 30.0) == pytest.approx(562.5 * 1.2 * 12.0 * length * 1e-6)
    assert found.wind_n("flat", 40.0) == pytest.approx(4.0 * found.wind_n("flat", 20.0))


def test_a_bent_conductor_is_seen_from_each_side_by_its_shape():
    """A circle's projection on a line, both halves seen: 4 radii; across its plane all of the wire."""
    driven = replace(samples.LOOP_868.driven, gap_mm=0.001)
    areas = {one.name: one for one in mounted(replace(samples.LOOP_868, driven=driven)).areas}
    radius = 350.0 / (2.0 * math.pi)
    seen = areas["DE"].mm2
    assert seen["front"] == pytest.approx(2.0 * 350.0, rel=1e-3)
    assert seen["side"] == pytest.approx(2.0 * 4.0 * radius, rel=2e-3)
    assert seen["flat"] == pytest.approx(2.0 * 4.0 * radius, rel=2e-3)


@pytest.mark.parametrize("design", samples.FITTING, ids=lambda d: d.name)
def test_every_design_balances_on_its_boom(design):
    plan = make_plan(design, Shop())
    found = plan_mounting(plan)
    assert plan.seat.start_mm < found.balance_mm < plan.seat.end_mm
    assert all(one.mass_g > 0.0 for one in found.masses)
    assert all(area > 0.0 for one in found.areas for area in one.mm2.values())
    assert found.area_mm2("flat") > found.area_mm2("side")
    tag, ahead = balance_from_nearest(plan, found)
    at = {g.tag: g.at_mm for g in plan.seat.grooves} | {h.tag: h.at_mm for h in plan.seat.holes}
    assert at[tag] + ahead == pytest.approx(found.balance_mm)
    low, high = clamp_room_mm(plan, found)
    assert plan.seat.start_mm <= low < high <= plan.seat.end_mm
    assert not any(low < b.at_mm < high for b in plan.seat.bond_lines)


def test_a_heavier_reflector_moves_the_balance_back():
    heavy = replace(samples.GAUGE, rods=(replace(samples.GAUGE.rods[0], material="silver"), *samples.GAUGE.rods[1:]))
    assert mounted(heavy).balance_mm < mounted(samples.GAUGE).balance_mm
    assert set(VIEWS) == {"front", "side", "flat"}


@pytest.mark.slow
@pytest.mark.parametrize(
    "design", [samples.GAUGE, samples.TUBE_915, samples.UPRIGHT_868, samples.LOOP_2450], ids=lambda d: d.name
)
def test_volumes_and_balance_are_those_of_the_solids(design):
    """Boom: strips of a two-thousandth of the depth, 1e-4 of the boom. Rods and straight halves: the solids lack the
    edge break, a ring of b^2 / 2 round each end, so at most pi d b^2 a piece, b = 0.2. Bent wire: 1e-6.
    """
    from boomwright.parts.antenna import antenna_bodies

    plan = make_plan(design, Shop())
    found = {one.name: one for one in plan_mounting(plan, with_resin=False).masses}
    solids = {body.name.replace("sleeve-", "sleeve "): body.shape for body in antenna_bodies(plan)}
    assert set(solids) == set(found)
    moment = mass = 0.0
    for name, shape in solids.items():
        ours, volume = found[name], shape.Volume()
        pieces = 2 if name == "DE" and design.driven.form == "straight" else 1
        straight = name in {rod.tag for rod in design.rods} or pieces == 2
        diameter = {rod.tag: rod.diameter_mm for rod in design.rods}.get(name, design.driven.diameter_mm)
        lacking = pieces * math.pi * diameter * 0.2**2 if straight else 0.0
        share = 1e-4 if name == "boom" else 1e-6
        assert -share * volume <= ours.volume_mm3 - volume <= lacking + share * volume, name
        grams = volume * ours.mass_g / ours.volume_mm3
        centre = shape.centerOfMass(shape) if shape.ShapeType() == "Compound" else shape.Center()
        moment, mass = moment + grams * centre.x, mass + grams
    bare = plan_mounting(plan, with_resin=False)
    assert bare.mass_g == pytest.approx(mass, rel=2e-3)
    assert bare.balance_mm == pytest.approx(moment / mass, abs=0.05)


def test_print_estimate_by_hand():
    """20 cm3 of PETG at 1.27 g/cm3: 25.4 g. 0.4 x 0.2 x 40 = 3.2 mm3/s: 20000 / 3.2 / 3600 = 1.736 h, 30 to 60 mm/s."""
    found = print_estimate("cradle-1", 20_000.0, Printer())
    assert found.mass_g == pytest.approx((25.4, 25.4))
    assert found.hours == pytest.approx((1.736 / 1.5, 1.736 / 0.7), rel=1e-3)
    finer = print_estimate("cradle-1", 20_000.0, Printer(layer_mm=0.1))
    assert finer.hours[0] == pytest.approx(2.0 * found.hours[0])
    unknown = print_estimate("cradle-1", 20_000.0, Printer(material="house blend"))
    assert unknown.mass_g[0] < found.mass_g[0] < unknown.mass_g[1]


def test_sheet_estimate_takes_the_sheets_own_material():
    """100 cm2 of 3 mm birch plywood: 30 cm3 x 0.675 g/cm3 = 20.25 g."""
    found = sheet_estimate("plate", 1, 10_000.0, Laser())
    assert found.mass_g == pytest.approx(30.0 * density_g_cm3("birch plywood")) == pytest.approx(20.25)
    assert sheet_estimate("plate", 1, 10_000.0, Laser(material="acrylic")).mass_g is None


@pytest.mark.slow
def test_area_of_the_comb_is_that_of_its_drawing():
    """Kerf 0: the outline of the drawing is the part's. Marks are outlines of plates, slots within the outline."""
    import numpy as np
    from shapely.geometry import Polygon

    from boomwright.parts.comb import SpacingComb

    shop = Shop(laser=Laser(kerf_mm=0.0))
    plan = make_plan(samples.GAUGE, shop)
    area = 0.0
    for piece in SpacingComb().build(plan):
        for mark in piece.marks:
            if mark.layer != shop.laser.layers.cut:
                continue
            points = []
            vertices = mark.contour.vertices
            for (x0, y0, bulge), (x1, y1, _) in zip(vertices, vertices[1:] + vertices[:1], strict=True):
                points.append((x0, y0))
                if bulge:
                    a, b = complex(x0, y0), complex(x1, y1)
                    centre = (a + b) / 2 + 1j * (b - a) / 2 * (1 - bulge**2) / (2 * bulge)
                    turn = 4 * math.atan(bulge)
                    arc = [centre + (a - centre) * np.exp(1j * turn * s) for s in np.linspace(0, 1, 200)[1:-1]]
                    points += [(p.real, p.imag) for p in arc]
            area += Polygon(points).area
    assert comb_estimate(plan.comb, shop.laser).area_mm2 == pytest.approx(area, rel=1e-4)
