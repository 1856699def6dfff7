"""What the 3D view and the step pictures show: the written solids as small meshes, with axes to measure between.

A part's mesh is in its file's frame; a pose says where every part then stands. Millimetres.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from boomwright.book.axes import Axis, axes_of
from boomwright.book.facets import sharp_edges, thinned
from boomwright.book.poses import Pose, Room, poses_of
from boomwright.formats.catalogue import FORMATS
from boomwright.formats.format import FileEntry
from boomwright.formats.placed import mesh_of
from boomwright.manifest import Manifest
from boomwright.parts.palette import PLAIN, PRINTED
from boomwright.pieces import Colour
from boomwright.plan.plan import Plan

ANTENNA, CRADLE, MOULD, AIDS = "Antenna", "Cradle", "Mould", "Jigs and shop aids"
GROUPS = (ANTENNA, CRADLE, MOULD, AIDS)

MOST_TRIANGLES = 60_000
"""Of the printed parts together: keeps a scene near a megabyte, and a small computer turning it without a jerk."""

THIN_MM = (0.005, 0.02, 0.06, 0.2, 0.6)
"""How far a printed part's surface may move when triangles are saved; the first that saves enough is taken [mm]."""

UPPER: Colour = (0.42, 0.60, 0.68)
"""Of the upper half of a mould: the printed colour, lighter."""

STEPS = 32767
"""Half the grid steps that a part's box is divided into along each axis: what 16 bits with a sign hold."""


@dataclass(frozen=True)
class ScenePart:
    """One part to show, its mesh rounded to a grid of 16 bits within its own box.

    key        name of the body in the assembly, or stem of the printed file
    label      the same in words
    group      one of GROUPS
    colour     red, green, blue, each 0 to 1
    grid       corners on the grid, int16, (n, 3)
    scale_mm   size of a grid step along x, y, z [mm], (3,)
    offset_mm  where the grid's zero lies [mm], (3,)
    triangles  corner indices, outward, (m, 3)
    edges      corner indices of the edges to draw, (k, 2)
    """

    key: str
    label: str
    group: str
    colour: Colour
    grid: NDArray[np.int16]
    scale_mm: NDArray[np.float64]
    offset_mm: NDArray[np.float64]
    triangles: NDArray[np.int64]
    edges: NDArray[np.int64]

    @cached_property
    def vertices_mm(self) -> NDArray[np.float64]:
        """Corners in the file's frame [mm], (n, 3)."""
        return np.asarray(self.grid * self.scale_mm + self.offset_mm)


@dataclass(frozen=True)
class Scene:
    """Everything to show.

    title    as the user wrote it
    parts    by group
    axes     to measure between
    poses    `assembled` first
    through  keys of the rods that pass through the boom
    """

    title: str
    parts: tuple[ScenePart, ...]
    axes: tuple[Axis, ...]
    poses: tuple[Pose, ...]
    through: tuple[str, ...] = ()

    def part(self, key: str) -> ScenePart:
        """A part by its key; KeyError when there is none."""
        return {part.key: part for part in self.parts}[key]

    def pose(self, key: str) -> Pose | None:
        """A pose by its key; None when this antenna has no such pose."""
        return next((pose for pose in self.poses if pose.key == key), None)

    def keys(self, *groups: str) -> tuple[str, ...]:
        """Keys of the parts of some groups."""
        return tuple(part.key for part in self.parts if part.group in groups)


@dataclass(frozen=True)
class ReadPart:
    """A part as read: what a ScenePart is made of, corners in the file's frame [mm], (n, 3); triangles, (m, 3)."""

    key: str
    label: str
    group: str
    colour: Colour
    vertices: NDArray[np.float64]
    triangles: NDArray[np.int64]


def read_scene(folder: Path, plan: Plan, manifest: Manifest) -> Scene:
    """The scene of a finished output folder.

    folder    the output folder
    plan      the plan its files were made from
    manifest  what it holds, with every file's frame

    Raises MeasureError when a file cannot be read back.
    """
    printed = [entry for entry in manifest.entries if entry.process == "print" and entry.format == "stl"]
    bodies = list(_antenna_bodies(folder, plan, manifest))
    bodies += _thinned([_printed_body(folder, entry, plan, printed) for entry in printed])
    bodies.sort(key=lambda body: GROUPS.index(body.group))
    frames = {Path(entry.path).stem: np.array(entry.frame) for entry in printed}
    rooms = [
        Room(b.key, b.group, frames.get(b.key, np.eye(4)), b.vertices.min(axis=0), b.vertices.max(axis=0))
        for b in bodies
    ]
    title = plan.design.title or plan.design.name
    through = tuple(hole.tag for hole in plan.seat.holes)
    return Scene(title, tuple(part_of(body) for body in bodies), axes_of(plan), poses_of(plan, rooms), through)


def _antenna_bodies(folder: Path, plan: Plan, manifest: Manifest) -> Iterable[ReadPart]:
    entry = next(e for e in manifest.entries if e.part == "antenna" and e.format == "step")
    reading = FORMATS["step"].read(folder / entry.path)
    for body in reading.bodies:
        meshes = [mesh_of(solid) for solid in body.solids]
        vertices, triangles = _joined(meshes)
        yield ReadPart(body.name, _antenna_label(plan, body.name), ANTENNA, body.colour or PLAIN, vertices, triangles)


def _printed_body(folder: Path, entry: FileEntry, plan: Plan, printed: Sequence[FileEntry]) -> ReadPart:
    stem = Path(entry.path).stem
    reading = FORMATS["stl"].read(folder / entry.path)
    group = {"cradle": CRADLE, "mould": MOULD}.get(entry.part, AIDS)
    alone = sum(1 for other in printed if other.part == entry.part) == 1
    # The two halves must be told apart where they meet.
    colour = UPPER if stem == "mould-upper" else PRINTED
    return ReadPart(stem, _printed_label(plan, stem, alone), group, colour, reading.vertices, reading.triangles)


def _joined(meshes: Sequence[tuple[NDArray[np.float64], NDArray[np.int64]]]) -> tuple[Any, Any]:
    starts = np.cumsum([0, *(len(vertices) for vertices, _ in meshes)])
    triangles = [faces + start for (_, faces), start in zip(meshes, starts, strict=False)]
    return np.concatenate([vertices for vertices, _ in meshes]), np.concatenate(triangles)


def _thinned(bodies: Sequence[ReadPart]) -> list[ReadPart]:
    """The printed bodies with fewer triangles, as many as a scene can carry."""
    thin = list(bodies)
    for allowed_mm in THIN_MM:
        meshes = [thinned(body.vertices, body.triangles, allowed_mm) for body in bodies]
        pairs = zip(bodies, meshes, strict=True)
        thin = [replace(body, vertices=vertices, triangles=faces) for body, (vertices, faces) in pairs]
        if sum(len(body.triangles) for body in thin) <= MOST_TRIANGLES:
            break
    return thin


def part_of(body: ReadPart) -> ScenePart:
    """The part to show: corners on a grid, edges found."""
    low, high = body.vertices.min(axis=0), body.vertices.max(axis=0)
    scale, offset = np.maximum(high - low, 1e-6) / (2.0 * STEPS), (low + high) / 2.0
    grid = np.clip(np.round((body.vertices - offset) / scale), -STEPS, STEPS).astype(np.int16)
    edges = sharp_edges(body.vertices, body.triangles)
    return ScenePart(body.key, body.label, body.group, body.colour, grid, scale, offset, body.triangles, edges)


def _antenna_label(plan: Plan, name: str) -> str:
    if name == "DE":
        return "driven element DE"
    if name.startswith("sleeve-"):
        return f"sleeve of {name.removeprefix('sleeve-')}"
    roles: Mapping[str, str] = {rod.tag: rod.role for rod in plan.design.rods}
    return f"rod {name}, {roles[name]}" if name in roles else name


def _printed_label(plan: Plan, stem: str, alone: bool) -> str:
    if stem == "mould-clip":
        return "clip that holds the loop"
    if stem in ("mould-upper", "mould-lower"):
        ends = {"z": ("upper", "lower"), "x": ("front", "rear")}[plan.mould.pull]
        return f"mould, {ends[stem == 'mould-lower']} half"
    if stem == "former" and plan.design.driven.form == "straight":
        return "former (sawing jig)"
    words, number = re.fullmatch(r"(.*?)(?:-(\d+))?", stem).groups()  # type: ignore[union-attr]
    words = words.replace("-", " ")
    if number is None or alone:
        return str(words)
    return f"{words}, section {number}" if words == "cradle" else f"{words} {number}"
