"""Designs that the mould must serve: every form, seat, boom and neighbour that it treats in its own way."""

from dataclasses import replace

import samples
from samples import rod

from boomwright.design.model import Band, Boom, Design, Driven, Feed, Seat

BEECH_12 = Boom("round", 12.0, "beech", 30.0, 20.0)
DOWEL_6 = Boom("round", 6.0, "beech", 12.0, 12.0)
TUBE = ("glass-fibre rod", 30.0, 20.0, 1.5)
PAIR_868 = (rod("R", 0, 168, 3), rod("D1", 95, 148, 3, 1))
PAIR_145 = (rod("R", 0, 1000, 6), rod("D1", 800, 920, 6, 1))
FLAT_868 = samples.GAUGE.driven
UPRIGHT_868 = replace(FLAT_868, plane="upright")
CIRCLE_868 = samples.LOOP_868.driven
SQUARE_LOOP = Driven("loop", 60.0, 2.0, "copper", 4.0, perimeter_mm=300.0, shape="square")
FLAT_145 = Driven("folded", 400.0, 6.0, "aluminium", 10.0, length_mm=950.0, spacing_mm=40.0, plane="flat")
FLAT_5G8 = Driven("folded", 7.0, 2.0, "copper", 2.0, length_mm=22.0, spacing_mm=5.0, plane="flat")
RING_5G8 = Driven("loop", 12.0, 1.0, "copper", 1.0, perimeter_mm=57.0, shape="circle")
SMALL_UPRIGHT = Driven("folded", 30.0, 2.0, "copper", 3.0, length_mm=100.0, spacing_mm=10.0, plane="upright")


def made(driven: Driven, rods: tuple, boom: Boom, coax: str | None = "RG-316", seat: Seat | None = None) -> Design:
    return Design("made", Band(863.0, 870.0, 866.5), driven, Feed(50.0, coax), rods, boom, seat or Seat())


def seven_apart() -> Design:
    """5.8 GHz on 2 mm rods, the driven element 7 mm from both its neighbours."""
    rods = (rod("R", 0, 25, 2), rod("D1", 14, 19, 2, 1))
    return replace(samples.CAMERA, driven=replace(samples.CAMERA.driven, at_mm=7.0), rods=rods)


FAST = {
    "flat, second conductor outside": samples.GAUGE,
    "straight, 7 mm from both rods": seven_apart(),
    "upright": samples.UPRIGHT_868,
    "square loop": samples.LOOP_2450,
    "straight in a tube with through seats": samples.TUBE_915,
}
REST = {
    "flat, both conductors inside": made(FLAT_5G8, (rod("R", 0, 25, 2), rod("D1", 19, 19, 2, 1)), DOWEL_6, "RG-405"),
    "flat, 7 mm to the second conductor": made(
        replace(FLAT_5G8, spacing_mm=7.0), (rod("R", 0, 25, 2), rod("D1", 21, 19, 2, 1)), DOWEL_6, "RG-405"
    ),
    "thick coax on a thin boom": replace(samples.CAMERA, feed=Feed(50.0, "RG-58")),
    "three rod diameters": samples.MIXED_1296,
    "flat on a square boom": samples.SQUARE_915,
    "145 MHz": made(FLAT_145, PAIR_145, Boom("square", 20.0, "pine", 40.0, 40.0), "RG-58"),
    "145 MHz, upright": made(
        replace(FLAT_145, spacing_mm=60.0, plane="upright"), PAIR_145, Boom("square", 20.0, "pine", 40.0, 40.0), "RG-58"
    ),
    "grooves through a round tube": made(FLAT_868, PAIR_868, Boom("round", 12.0, *TUBE)),
    "upright on a square tube": made(UPRIGHT_868, PAIR_868, Boom("square", 12.0, *TUBE)),
    "upright on a thin boom": made(SMALL_UPRIGHT, (rod("R", 0, 110, 2), rod("D1", 60, 90, 2, 1)), DOWEL_6, "RG-58"),
    "circular loop": samples.LOOP_868,
    "loop on a tube with through seats": made(
        SQUARE_LOOP,
        (rod("R", 0, 168, 4), rod("D1", 95, 148, 4, 1)),
        Boom("square", 15.0, "aluminium", 30.0, 20.0, 1.5),
        seat=Seat("through", bond="insulated", sleeve_mm=1.0),
    ),
    "circular loop with through seats": made(
        CIRCLE_868,
        (rod("R", 0, 168, 4), rod("D1", 95, 148, 4, 1)),
        Boom("round", 15.0, "birch", 30.0, 20.0),
        "RG-58",
        Seat("through"),
    ),
    "loop smaller than its mould": made(RING_5G8, (rod("R", 0, 25, 2), rod("D1", 20, 19, 2, 1)), DOWEL_6, "RG-405"),
    "flat without coax": replace(samples.GAUGE, feed=Feed()),
    "loop without coax": replace(samples.LOOP_868, feed=Feed()),
    "foremost, the boom ends in the wall": made(
        Driven("straight", 62.0, 2.0, "copper", 4.0, length_mm=158.0), PAIR_868[:1], replace(BEECH_12, nose_mm=5.0)
    ),
    "alone, the boom ends in the walls": made(
        Driven("straight", 0.0, 2.0, "copper", 4.0, length_mm=158.0), (), replace(BEECH_12, tail_mm=5.5, nose_mm=5.5)
    ),
    "loop alone": replace(samples.LOOP_868, rods=()),
    "upright alone": made(UPRIGHT_868, (), Boom("square", 12.0, "beech", 5.0, 5.0)),
    "coated": replace(samples.GAUGE, driven=replace(FLAT_868, coat_mm=0.3, coat_material="PTFE")),
}
ALL = FAST | REST
