"""The mould as written: every half measured on its own STEP file beside the antenna's."""

import math
from dataclasses import replace
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory

import cadquery as cq
import mould_cases
import numpy as np
import pytest
import samples

from boomwright.design.model import Design
from boomwright.formats.brep import StepReading
from boomwright.formats.meshes import CHORD_MM, ROUNDING_MM
from boomwright.formats.step import STEP
from boomwright.formats.stl import STL
from boomwright.formats.surfaces import samples as samples_of
from boomwright.judging import Bench
from boomwright.parts.antenna import AntennaPart, antenna_bodies
from boomwright.parts.mould import Mould
from boomwright.parts.mould_halves import cavity_shape, half_shape
from boomwright.pieces import Expectation, Probe, SolidPiece
from boomwright.plan.mould import HALVES
from boomwright.plan.plan import Plan, make_plan
from boomwright.shop.profile import Printer, Shop

QUICK = ("straight, 7 mm from both rods", "square loop")
EACH = [name if name in QUICK else pytest.param(name, marks=pytest.mark.slow) for name in mould_cases.ALL]
STEEPEST = -math.sqrt(0.5) - 1e-6
"""Downward part of the normal of a face that overhangs by 45 degrees."""


@cache
def planned(name: str) -> Plan:
    plan = make_plan(mould_cases.ALL[name], Shop())
    assert not plan.faults["mould"]
    return plan


def written(plan: Plan, folder: Path) -> None:
    (folder / "print").mkdir()
    for part, place in ((AntennaPart(), folder), (Mould(), folder / "print")):
        for piece in part.build(plan):
            for form in (STEP, STL):
                if form.takes(piece):
                    form.write(piece, place / f"{piece.stem}{form.suffix}")


@cache
def findings(name: str) -> tuple[dict[str, object], dict[str, StepReading]]:
    """What the audit finds on the written files, by what; and the files as read."""
    plan = planned(name)
    with TemporaryDirectory() as place:
        written(plan, Path(place))
        found = {one.what: one for one in Bench(Path(place)).judge(Mould().expect(plan))}
        files = {path.stem: STEP.read(path) for path in (Path(place) / "print").glob("*.step")}
    return found, files


@pytest.mark.parametrize("name", EACH)
def test_the_audit_finds_everything_as_planned(name: str) -> None:
    found, _ = findings(name)
    assert [str(one) for one in found.values() if not one.ok] == []
    for half in HALVES:
        assert found[f"mould-{half} least draft"].measured == pytest.approx(2.0, abs=1e-4)
        assert found[f"mould-{half} overlap with the antenna"].measured == 0.0
        assert found[f"mould-{half} meets antenna or coax on its way off"].measured == 0.0
    resin = found["resin volume"]
    assert resin.measured == pytest.approx(resin.expected, rel=0.005)
    assert ("mould-clip meets the antenna on its way off" in found) == ("loop" in name)


@pytest.mark.parametrize("name", EACH)
def test_both_halves_print_without_support(name: str) -> None:
    """No face looks down by more than 45 degrees but on the bed (common practice for filament printers)."""
    _, files = findings(name)
    assert set(files) == {"mould-upper", "mould-lower"} | ({"mould-clip"} if "loop" in name else set())
    for reading in files.values():
        (body,) = reading.bodies
        assert len(body.solids) == 1
        assert body.box[0][2] == pytest.approx(0.0, abs=1e-9)
        for face in body.faces:
            beside = samples_of(face, 0.02)
            down = beside.outward[:, 2] < STEEPEST
            assert np.all(beside.points[down, 2] < 1e-6), (reading.path, face.kind, face.low, face.high)


@pytest.mark.slow
@pytest.mark.parametrize("name", mould_cases.ALL)
def test_resin_by_exact_booleans(name: str) -> None:
    """The plan's arithmetic against the kernel's exact volume of cavity less all that stands in it."""
    plan = planned(name)
    mould = plan.mould
    tools = [body.shape for body in antenna_bodies(plan)]
    if plan.boom.wall_mm > 0.0:  # as if solid: grooved with its plug in
        boom = replace(plan.boom, wall_mm=0.0)
        tools[0] = antenna_bodies(replace(plan, boom=boom))[0].shape
    if mould.coax is not None:
        way = cq.Vector(*mould.coax.end) - cq.Vector(*mould.coax.start)
        tools.append(cq.Solid.makeCylinder(mould.coax.radius_mm, way.Length, cq.Vector(*mould.coax.start), way))
    room = cavity_shape(mould).cut(*tools)
    assert mould.resin_mm3 == pytest.approx(room.Volume(1e-6), rel=0.002)


@pytest.mark.slow
@pytest.mark.parametrize("offsets_mm", [(0.15, 0.3), (-0.05, 0.1)])
@pytest.mark.parametrize("name", ["flat on a square boom", "straight, 7 mm from both rods", "square loop", "upright"])
def test_the_printers_offsets_move_faces_and_nothing_else(
    name: str, offsets_mm: tuple[float, float], tmp_path: Path
) -> None:
    growth, shrink = offsets_mm
    shop = Shop(printer=Printer(outline_growth_mm=growth, hole_shrink_mm=shrink))
    for piece in Mould().build(make_plan(mould_cases.ALL[name], shop)):
        assert isinstance(piece, SolidPiece)
        STEP.write(piece, tmp_path / "half.step")
        STL.write(piece, tmp_path / "half.stl")
        solid, mesh = STEP.read(tmp_path / "half.step"), STL.read(tmp_path / "half.stl")
        taken = {"growth_mm": growth, "hole_shrink_mm": shrink}
        for measure in ("deviation_mm", "coverage_mm"):
            assert STL.measure(mesh, Probe(measure, taken), [solid]) <= CHORD_MM + ROUNDING_MM
        assert STL.measure(mesh, Probe("watertight"), []) == 1.0


def test_an_exact_printer_changes_nothing() -> None:
    exact = Shop(printer=Printer(outline_growth_mm=0.0, hole_shrink_mm=0.0))
    pieces = Mould().build(make_plan(samples.MIXED_1296, exact))
    assert [piece.stem for piece in pieces] == ["mould-upper", "mould-lower"]
    assert all(isinstance(piece, SolidPiece) and piece.printed is None for piece in pieces)


def judged(plan: Plan, folder: Path) -> list[str]:
    return [one.what for one in Bench(folder).judge(Mould().expect(plan)) if not one.ok]


@pytest.mark.slow
def test_a_half_out_of_a_nearby_design_is_found(tmp_path: Path) -> None:
    """The files of a mould with another gap to the director, coax and draft, audited as if they were this design's."""
    plan = planned("straight, 7 mm from both rods")
    written(plan, tmp_path)
    assert judged(plan, tmp_path) == []
    design: Design = mould_cases.ALL["straight, 7 mm from both rods"]
    wider = replace(design, rods=(design.rods[0], replace(design.rods[1], at_mm=16.0)))
    for piece in Mould().build(make_plan(wider, Shop())):
        STEP.write(piece, tmp_path / "print" / f"{piece.stem}.step")
    assert "mould-upper distance from D1" in judged(plan, tmp_path)
    for piece in Mould().build(make_plan(replace(design, feed=replace(design.feed, coax=None)), Shop())):
        STEP.write(piece, tmp_path / "print" / f"{piece.stem}.step")
    assert "mould-lower overlap with the coax" in judged(plan, tmp_path)


def test_a_filled_corner_is_found(tmp_path: Path) -> None:
    """Half a millimetre of plastic left in a corner of the cavity: more than the resin's 1 %, and an upright face."""
    plan = planned("straight, 7 mm from both rods")
    written(plan, tmp_path)
    lower = half_shape(plan.mould, "lower")
    (x0, _), (_, y1), (z0, z1) = plan.mould.cavity.box_mm
    extra = cq.Solid.makeBox(3.0, 3.0, z1 - z0 - 4.0, pnt=cq.Vector(x0, y1 - 3.0, z0 - 0.5))
    spoilt = lower.fuse(extra)
    piece = next(one for one in Mould().build(plan) if one.stem == "mould-lower")
    assert isinstance(piece, SolidPiece)
    body = replace(piece.bodies[0], shape=spoilt)
    STEP.write(replace(piece, bodies=(body,)), tmp_path / "print" / "mould-lower.step")
    assert {"resin volume", "mould-lower least draft"} <= set(judged(plan, tmp_path))


def test_expectations_rest_on_the_plan_alone() -> None:
    plan = planned("square loop")
    found: tuple[Expectation, ...] = Mould().expect(plan)
    files = {f"print/mould-{stem}.{suffix}" for stem in ("upper", "lower", "clip") for suffix in ("step", "stl")}
    assert {e.file for e in found} == files
    assert len({(e.file, e.what) for e in found}) == len(found)
