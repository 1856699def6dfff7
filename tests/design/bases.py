"""Sound designs that tests start from, and random ones."""

from __future__ import annotations

from hypothesis import strategies as st

from boomwright.data.tables import boom_material_names, cable_names, conductor_names, material_names
from boomwright.design.model import (
    Adhesive,
    Band,
    Boom,
    Design,
    Driven,
    Feed,
    Resin,
    Rod,
    Seat,
    Spec,
    Transmitter,
    arranged,
)

HEAD = """schema = 1
name = "beam"
title = "A beam"

[band]
low_mhz = 863.0
high_mhz = 870.0
"""
BOOM = """
[boom]
section = "round"
width_mm = 12.0
material = "beech"
tail_mm = 20.0
nose_mm = 20.0
"""
RODS = """
[[rod]]
role = "reflector"
at_mm = 0.0
length_mm = 166.0
diameter_mm = 3.0
material = "brass"

[[rod]]
role = "director"
at_mm = 110.0
length_mm = 148.0
diameter_mm = 3.0
material = "brass"
"""
FED = """
[driven]
form = "{form}"
at_mm = 52.0
diameter_mm = 2.0
material = "copper"
gap_mm = 4.0
"""
FOLDED = HEAD + BOOM + RODS + FED.format(form="folded") + 'length_mm = 156.0\nspacing_mm = 12.0\nplane = "flat"\n'
STRAIGHT = HEAD + BOOM + RODS + FED.format(form="straight") + "length_mm = 156.0\n"
LOOP = HEAD + BOOM + RODS + FED.format(form="loop") + 'perimeter_mm = 360.0\nshape = "square"\n'
DIPOLE = HEAD + FED.format(form="straight") + "length_mm = 156.0\n"
BASES = {"folded": FOLDED, "straight": STRAIGHT, "loop": LOOP, "dipole": DIPOLE}


def _number(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high, allow_nan=False).map(lambda value: value + 0.0)


@st.composite
def _driven(draw: st.DrawFn, at_mm: float, boom_width_mm: float) -> Driven:
    form = draw(st.sampled_from(["straight", "folded", "loop"]))
    coat_mm = draw(st.sampled_from([0.0, 0.05]))
    common = {
        "at_mm": at_mm,
        "diameter_mm": draw(_number(0.5, 3.0)),
        "material": draw(st.sampled_from(conductor_names())),
        "gap_mm": draw(_number(1.0, 5.0)),
        "coat_mm": coat_mm,
        "coat_material": "acrylic paint" if coat_mm else draw(st.sampled_from([None, "PTFE"])),
    }
    if form == "straight":
        return Driven(form="straight", length_mm=draw(_number(20.0, 500.0)), **common)
    if form == "folded":
        return Driven(
            form="folded",
            length_mm=draw(_number(60.0, 500.0)),
            spacing_mm=draw(_number(5.0, 20.0)),
            plane=draw(st.sampled_from(["flat", "upright"])),
            bend_radius_mm=draw(st.sampled_from([None, 0.5])),
            **common,
        )
    shape = draw(st.sampled_from(["circle", "square"]))
    return Driven(
        form="loop",
        perimeter_mm=draw(_number(8.0 * (2.0 * boom_width_mm + 12.0), 2000.0)),
        shape=shape,
        bend_radius_mm=draw(st.sampled_from([None, 2.0])) if shape == "square" else None,
        **common,
    )


@st.composite
def _rods(draw: st.DrawFn, rear_mm: float, front_mm: float) -> list[Rod]:
    """A reflector or none behind `rear_mm`, directors or none ahead of `front_mm`, in any order."""
    places = [("reflector", rear_mm - draw(_number(4.0, 50.0)))] if draw(st.booleans()) else []
    for _ in range(draw(st.integers(0, 5))):
        front_mm += draw(_number(4.0, 50.0))
        places.append(("director", front_mm))
    rods = [
        Rod(
            tag="",
            role=role,
            at_mm=at_mm,
            length_mm=draw(_number(0.001, 100_000.0)),
            diameter_mm=draw(_number(0.5, 3.5)),
            material=draw(st.sampled_from(conductor_names())),
            coat_mm=draw(st.sampled_from([0.0, 0.1])),
            coat_material=draw(st.sampled_from(material_names())),
        )
        for role, at_mm in places
    ]
    return draw(st.permutations(rods))


@st.composite
def designs(draw: st.DrawFn) -> Design:
    """Random sound designs: every form, seat, section and optional table, with and without rods and boom."""
    low_mhz = draw(_number(10.0, 19_000.0))
    high_mhz = draw(_number(low_mhz + 0.1, 20_000.0))
    width_mm = draw(_number(6.0, 20.0))
    at_mm = draw(_number(-1000.0, 1000.0))
    driven = draw(_driven(at_mm, width_mm))
    front_mm = at_mm + (driven.spacing_mm or 0.0)
    boom = draw(
        st.none()
        | st.builds(
            Boom,
            section=st.sampled_from(["round", "square"]),
            width_mm=st.just(width_mm),
            material=st.sampled_from(boom_material_names()),
            tail_mm=_number(2.0, 100.0),
            nose_mm=_number(2.0, 100.0),
            wall_mm=st.sampled_from([0.0, 1.0]),
        )
    )
    seats = [Seat(), Seat(glue_gap_mm=0.05)]
    if driven.form == "loop" or driven.gap_mm >= width_mm + 2.0:
        seats += [Seat(kind="through", hole_clearance_mm=0.2), Seat(kind="through", bond="insulated", sleeve_mm=0.5)]
    optional = st.none() | _number(1.5, 30.0)
    return Design(
        name=draw(st.from_regex(r"[a-z0-9-]{1,64}", fullmatch=True)),
        title=draw(st.none() | st.text(st.characters(exclude_categories=["C", "Zl", "Zp"]), max_size=200)),
        band=Band(low_mhz, high_mhz, draw(_number(low_mhz, high_mhz))),
        feed=Feed(draw(_number(1.0, 10_000.0)), draw(st.sampled_from([None, *cable_names()]))),
        boom=boom,
        seat=draw(st.sampled_from(seats)) if boom else None,
        rods=arranged(draw(_rods(at_mm, front_mm))),
        driven=driven,
        adhesive=draw(st.sampled_from([Adhesive(), Adhesive('"quick" \\ set')])),
        resin=Resin("clear", draw(_number(0.1, 25.0))),
        spec=draw(st.none() | st.builds(Spec, optional, optional, optional)),
        transmitter=draw(st.none() | st.builds(Transmitter, _number(1e-6, 1e6), _number(0.0, 1.0))),
    )
