"""Designs that are hard to draw: long, dense, of many sizes."""

from dataclasses import replace

import samples

LONG_145 = replace(
    samples.SQUARE_915,
    name="beacon-145",
    title="Ridge beacon, 145 MHz",
    driven=replace(samples.SQUARE_915.driven, at_mm=400.0, length_mm=960.0, spacing_mm=40.0, gap_mm=10.0),
    rods=(
        samples.rod("R", 0, 1020, 6),
        samples.rod("D1", 640, 935, 6, 1),
        samples.rod("D2", 1150, 920.35, 6, 2),
        samples.rod("D3", 1960, 900, 6, 3),
    ),
    boom=replace(samples.SQUARE_915.boom, width_mm=20.0, tail_mm=30.0, nose_mm=30.0),
)
DENSE = replace(
    samples.CAMERA,
    name="dense-5g8",
    rods=(samples.CAMERA.rods[0], *(samples.rod(f"D{i + 1}", 17 + 7 * i, 19, 2, i + 1) for i in range(63))),
)
MANY_SIZES = replace(
    samples.GAUGE,
    name="many-sizes",
    rods=(
        *samples.GAUGE.rods[:2],
        *(samples.rod(f"D{i + 2}", 150.25 + 12 * i, 130 - i / 2, 3 - i % 4 / 2, i + 2) for i in range(62)),
    ),
)
DRAWN = (*samples.FITTING, LONG_145, DENSE, MANY_SIZES)
