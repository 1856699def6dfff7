"""Designs that tests of several rooms share. Invented figures: shapes to build, not antennas to use."""

from dataclasses import replace

from boomwright.design.model import Band, Boom, Design, Driven, Feed, Rod, Seat


def rod(tag: str, at_mm: float, length_mm: float, diameter_mm: float, index: int = 0) -> Rod:
    role = "reflector" if tag == "R" else "director"
    return Rod(tag, role, float(at_mm), float(length_mm), float(diameter_mm), "brass", file_index=index)


GAUGE = Design(
    "gauge-868",
    Band(863.0, 870.0, 866.5),
    Driven("folded", 62.0, 2.0, "copper", 4.0, length_mm=158.0, spacing_mm=12.0, plane="flat"),
    Feed(50.0, "RG-316"),
    (rod("R", 0, 168, 3), rod("D1", 95, 148, 3, 1), rod("D2", 150, 145, 3, 2)),
    Boom("round", 12.0, "beech", 30.0, 20.0),
    Seat(),
)
CAMERA = Design(
    "camera-5g8",
    Band(5725.0, 5875.0, 5800.0),
    Driven("straight", 10.0, 2.0, "copper", 2.0, length_mm=22.0),
    Feed(50.0, "RG-405"),
    (rod("R", 0, 25, 2), rod("D1", 17, 19, 2, 1), rod("D2", 24, 19, 2, 2)),
    Boom("round", 6.0, "beech", 10.0, 8.0),
    Seat(),
)
CAMERA_FOLDED = replace(
    CAMERA,
    name="camera-folded",
    driven=Driven("folded", 10.0, 2.0, "copper", 2.0, length_mm=22.0, spacing_mm=5.0, plane="flat"),
    rods=(rod("R", 0, 25, 2), rod("D1", 22, 19, 2, 1), rod("D2", 29, 19, 2, 2)),
)
SQUARE_915 = Design(
    "gate-915",
    Band(902.0, 928.0, 915.0),
    Driven("folded", 55.0, 3.0, "brass", 5.0, length_mm=150.0, spacing_mm=14.0, plane="flat"),
    Feed(50.0, "RG-58"),
    (rod("R", 0, 160, 4), rod("D1", 110, 140, 4, 1)),
    Boom("square", 15.0, "pine", 25.0, 25.0),
    Seat(),
)
MIXED_1296 = Design(
    "mixed-1296",
    Band(1290.0, 1300.0, 1295.0),
    Driven("straight", 40.0, 3.0, "brass", 3.0, length_mm=105.0),
    Feed(50.0, None),
    (rod("R", 0, 112, 4), rod("D1", 58, 101, 2, 1), rod("D2", 100, 98, 1.6, 2)),
    Boom("round", 10.0, "birch", 20.0, 20.0),
    Seat(),
)
TUBE_915 = Design(
    "tube-915",
    Band(902.0, 928.0, 915.0),
    Driven("straight", 60.0, 4.0, "copper", 22.0, length_mm=150.0),
    Feed(50.0, "RG-58"),
    (rod("R", 0, 160, 4), rod("D1", 110, 140, 3, 1)),
    Boom("square", 15.0, "aluminium", 30.0, 20.0, 1.5),
    Seat("through", bond="insulated", sleeve_mm=1.0),
)
UPRIGHT_868 = replace(
    GAUGE,
    name="upright-868",
    driven=replace(GAUGE.driven, plane="upright"),
    rods=(rod("R", 0, 168, 3), rod("D1", 95, 148, 4, 1), rod("D2", 150, 145, 1, 2)),
)
LOOP_868 = replace(
    GAUGE, name="loop-868", driven=Driven("loop", 62.0, 2.0, "copper", 4.0, perimeter_mm=350.0, shape="circle")
)
LOOP_2450 = Design(
    "loop-2450",
    Band(2400.0, 2500.0, 2450.0),
    Driven("loop", 22.0, 1.6, "copper", 2.5, perimeter_mm=126.0, shape="square"),
    Feed(50.0, "RG-316"),
    (rod("R", 0, 60, 2), rod("D1", 40, 54, 2, 1), rod("D2", 70, 53, 2, 2)),
    Boom("round", 8.0, "beech", 14.0, 12.0),
    Seat(),
)
LONG_145 = Design(
    "long-145",
    Band(144.0, 146.0, 145.0),
    Driven("folded", 420.0, 6.0, "aluminium", 10.0, length_mm=970.0, spacing_mm=40.0, plane="flat"),
    Feed(50.0, "RG-58"),
    (rod("R", 0, 1030, 6), rod("D1", 780, 940, 6, 1), rod("D2", 1320, 920, 6, 2), rod("D3", 1900, 900, 6, 3)),
    Boom("round", 25.0, "beech", 60.0, 60.0),
    Seat(),
)
"""Rods of a metre on two metres of boom: a printed cradle in many sections, with outriggers."""

LONE_LOOP = replace(LOOP_2450, name="lone-loop", rods=())
"""The least that `make` makes: no rod to hold, to cut or to measure."""

FITTING = (GAUGE, CAMERA, CAMERA_FOLDED, SQUARE_915, MIXED_1296, TUBE_915, UPRIGHT_868, LOOP_868, LOOP_2450)
"""Designs whose every part fits the built-in shop."""
