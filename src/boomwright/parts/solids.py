"""The few solids the parts are made of, and booleans that stay linear in the number of tools."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, Any, cast

from boomwright.errors import ShapeError

if TYPE_CHECKING:
    import cadquery as cq

    from boomwright.design.centreline import Run
    from boomwright.pieces import Matrix

Span = tuple[float, float]
Point2 = tuple[float, float]
Shape = Any
"""A `cadquery.Shape`."""


def box(x_mm: Span, y_mm: Span, z_mm: Span) -> cq.Solid:
    """An axis-parallel block between two values of each coordinate [mm]."""
    import cadquery as cq

    sizes = [high - low for low, high in (x_mm, y_mm, z_mm)]
    return cq.Solid.makeBox(*sizes, pnt=cq.Vector(x_mm[0], y_mm[0], z_mm[0]))


def cylinder(start: Sequence[float], direction: Sequence[float], radius_mm: float, length_mm: float) -> cq.Solid:
    """A cylinder from a point along a direction [mm]."""
    import cadquery as cq

    return cq.Solid.makeCylinder(radius_mm, length_mm, cq.Vector(*start), cq.Vector(*direction))


def wire_xz(points: Sequence[Point2], y_mm: float) -> cq.Wire:
    """A closed polygon of (x, z) points in a plane of constant y."""
    import cadquery as cq

    return cq.Wire.makePolygon([cq.Vector(x, y_mm, z) for x, z in points], close=True)


def prism_along_y(points_xz: Sequence[Point2], y_mm: Span) -> cq.Solid:
    """A polygon of (x, z) points drawn out between two values of y [mm]."""
    import cadquery as cq

    return cq.Solid.extrudeLinear(wire_xz(points_xz, y_mm[0]), [], cq.Vector(0.0, y_mm[1] - y_mm[0], 0.0))


def prism_along_x(points_yz: Sequence[Point2], x_mm: Span) -> cq.Solid:
    """A polygon of (y, z) points drawn out between two values of x [mm]."""
    import cadquery as cq

    wire = cq.Wire.makePolygon([cq.Vector(x_mm[0], y, z) for y, z in points_yz], close=True)
    return cq.Solid.extrudeLinear(wire, [], cq.Vector(x_mm[1] - x_mm[0], 0.0, 0.0))


def prism_along_z(polygon: Any, z_mm: Span) -> cq.Solid:
    """A shapely polygon (holes allowed) drawn out between two values of z [mm]."""
    import cadquery as cq

    def ring(coordinates: Iterable[Point2]) -> cq.Wire:
        return cq.Wire.makePolygon([cq.Vector(x, y, z_mm[0]) for x, y in list(coordinates)[:-1]], close=True)

    holes = [ring(interior.coords) for interior in polygon.interiors]
    return cq.Solid.extrudeLinear(ring(polygon.exterior.coords), holes, cq.Vector(0.0, 0.0, z_mm[1] - z_mm[0]))


def conductor(runs: Sequence[Run], radius_mm: float) -> cq.Solid:
    """A round conductor along the lines and arcs of its centreline: cylinders and tori, one solid."""
    import cadquery as cq
    from OCP.BRepOffsetAPI import BRepOffsetAPI_MakePipe

    edges = []
    for run in runs:
        start, end = cq.Vector(*run.start), cq.Vector(*run.end)
        if run.middle is None:
            edges.append(cq.Edge.makeLine(start, end))
        else:
            edges.append(cq.Edge.makeThreePointArc(start, cq.Vector(*run.middle), end))
    path = cq.Wire.assembleEdges(edges)
    circle = cq.Wire.makeCircle(radius_mm, path.startPoint(), path.tangentAt(0.0))
    face = cq.Face.makeFromWires(circle)
    return cast("cq.Solid", cq.Shape.cast(BRepOffsetAPI_MakePipe(path.wrapped, face.wrapped).Shape()))


def unite(first: Shape, others: Sequence[Shape]) -> Shape:
    """All shapes as one; refuses a result in several pieces."""
    return _single(first.fuse(*others).clean() if others else first)


def cut(body: Shape, tools: Sequence[Shape]) -> Shape:
    """A body less its tools, in one boolean; refuses a result in several pieces."""
    return _single(body.cut(*tools) if tools else body)


def place(shape: Shape, frame: Matrix) -> Shape:
    """A shape moved by a rigid 4 x 4 matrix; the geometry is moved, not deformed."""
    import cadquery as cq
    from OCP.gp import gp_Trsf

    motion = gp_Trsf()
    motion.SetValues(*(value for row in frame[:3] for value in row))
    return shape.moved(cq.Location(motion))


def _single(shape: Shape) -> Shape:
    solids = shape.Solids()
    if len(solids) != 1:
        raise ShapeError(f"{len(solids)} solids where one was built")
    return solids[0]
