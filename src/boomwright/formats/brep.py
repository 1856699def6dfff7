"""What a STEP file held, as the measures see it: named bodies and their faces. Coordinates in millimetres."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray

from boomwright.errors import MeasureError

Vector = NDArray[np.float64]
Kind = Literal["plane", "cylinder", "cone", "sphere", "torus", "general"]

ON_SURFACE_MM = 1e-7
"""Points this near to a surface lie on it."""

VOLUME_TOLERANCE = 1e-6
"""Relative error asked of the kernel's integration."""


@dataclass(frozen=True)
class FaceView:
    """One face of a body: what surface it lies on, which way it looks, and the box it fills.

    kind         the surface
    face         the kernel's face
    origin       a point of the plane; a point on the axis; the centre [mm]
    direction    outward normal of a plane; unit axis of a round surface (unset for a sphere: zeros)
    radius_mm    radius; of a cone at `origin`; of a torus the larger one; 0 for a plane
    minor_mm     a torus's smaller radius
    half_angle   a cone's, signed: radius grows along `direction` when positive [rad]
    concave      whether the material lies outside the round surface: a bore, a channel
    low, high    corners of the exact box [mm]
    """

    kind: Kind
    face: Any
    origin: Vector
    direction: Vector
    radius_mm: float
    minor_mm: float
    half_angle: float
    concave: bool
    low: Vector
    high: Vector

    @property
    def centre(self) -> Vector:
        """The middle of the face's box [mm]."""
        return (self.low + self.high) / 2.0


@dataclass(frozen=True)
class ReadBody:
    """A named body as read; `wrapped` is the kernel's bare shape, `shape` the same as a `cadquery.Shape`."""

    name: str
    colour: tuple[float, float, float] | None
    wrapped: Any

    @cached_property
    def shape(self) -> Any:
        """The body as a `cadquery.Shape`; loads cadquery."""
        import cadquery as cq

        return cq.Shape.cast(self.wrapped)

    @cached_property
    def solids(self) -> tuple[Any, ...]:
        """The kernel's solids of this body."""
        from OCP.TopAbs import TopAbs_SOLID

        return tuple(explore(self.wrapped, TopAbs_SOLID))

    @cached_property
    def solid_boxes(self) -> tuple[Vector, ...]:
        """Exact box of each solid [mm], as `box`."""
        return tuple(exact_box(solid) for solid in self.solids)

    @cached_property
    def box(self) -> Vector:
        """Exact box [mm]: two rows, the low and the high corner."""
        if not self.solids:
            return exact_box(self.wrapped)
        boxes = np.array(self.solid_boxes)
        return np.stack([boxes[:, 0].min(axis=0), boxes[:, 1].max(axis=0)])

    @cached_property
    def faces(self) -> tuple[FaceView, ...]:
        """Every face, in the file's order."""
        from OCP.TopAbs import TopAbs_FACE

        return tuple(_view(face) for face in explore(self.wrapped, TopAbs_FACE))

    @cached_property
    def _classifiers(self) -> tuple[Any, ...]:
        from OCP.BRepClass3d import BRepClass3d_SolidClassifier

        return tuple(BRepClass3d_SolidClassifier(solid) for solid in self.solids)

    def holds(self, point: Vector) -> bool:
        """Whether a point lies in the material of one of the solids, or on its surface."""
        from OCP.gp import gp_Pnt
        from OCP.TopAbs import TopAbs_OUT

        for box, classifier in zip(self.solid_boxes, self._classifiers, strict=True):
            if np.all(point >= box[0]) and np.all(point <= box[1]):
                classifier.Perform(gp_Pnt(*map(float, point)), ON_SURFACE_MM)
                if classifier.State() != TopAbs_OUT:
                    return True
        return False


@dataclass(frozen=True)
class StepReading:
    """One STEP file, read once."""

    path: Path
    bodies: tuple[ReadBody, ...]

    def body(self, name: str | None) -> ReadBody:
        """The body of this name; without a name the only one there is. Raises MeasureError otherwise."""
        names = [body.name for body in self.bodies]
        if name is None and len(names) == 1:
            return self.bodies[0]
        if names.count(str(name)) != 1:
            wanted = "one body" if name is None else f"one body named {name!r}"
            raise MeasureError(f"{self.path.name}: {wanted} expected, found {', '.join(names) or 'none'}")
        return self.bodies[names.index(str(name))]

    def chosen(self, names: Sequence[str] | None) -> tuple[ReadBody, ...]:
        """The bodies of these names, or all of them."""
        return self.bodies if names is None else tuple(self.body(name) for name in names)


def exact_box(shape: Any) -> Vector:
    """Exact axis-parallel box of a kernel shape [mm]: two rows, the low and the high corner; MeasureError if empty."""
    from OCP.Bnd import Bnd_Box
    from OCP.BRepBndLib import BRepBndLib

    box = Bnd_Box()
    BRepBndLib.AddOptimal_s(shape, box, False, False)
    if box.IsVoid():
        raise MeasureError("an empty body has no extent")
    return np.asarray(box.Get(), dtype=float).reshape(2, 3)


def volume_mm3(shape: Any) -> float:
    """Volume of a kernel shape [mm³]."""
    from OCP.BRepGProp import BRepGProp
    from OCP.GProp import GProp_GProps

    properties = GProp_GProps()
    BRepGProp.VolumeProperties_s(shape, properties, VOLUME_TOLERANCE)
    return float(properties.Mass())


def explore(shape: Any, kind: Any) -> list[Any]:
    from OCP.TopAbs import TopAbs_FACE
    from OCP.TopExp import TopExp_Explorer
    from OCP.TopoDS import TopoDS

    cast = TopoDS.Face_s if kind == TopAbs_FACE else TopoDS.Solid_s
    found, explorer = [], TopExp_Explorer(shape, kind)
    while explorer.More():
        found.append(cast(explorer.Current()))
        explorer.Next()
    return found


def _view(face: Any) -> FaceView:
    from OCP.BRepAdaptor import BRepAdaptor_Surface
    from OCP.GeomAbs import GeomAbs_Cone, GeomAbs_Cylinder, GeomAbs_Plane, GeomAbs_Sphere, GeomAbs_Torus
    from OCP.TopAbs import TopAbs_REVERSED

    surface = BRepAdaptor_Surface(face, True)
    kind = surface.GetType()
    low, high = exact_box(face)
    flipped = face.Orientation() == TopAbs_REVERSED
    none = np.zeros(3)

    def made(name: Kind, frame: Any, radii: tuple[float, float, float] = (0.0, 0.0, 0.0)) -> FaceView:
        origin, axis = _xyz(frame.Location()), _xyz(frame.Axis().Direction())
        inward = flipped == bool(frame.Direct())
        if name == "plane":
            axis = -axis if inward else axis
        return FaceView(name, face, origin, axis, *radii, inward, low, high)

    if kind == GeomAbs_Plane:
        return made("plane", surface.Plane().Position())
    if kind == GeomAbs_Cylinder:
        round_ = surface.Cylinder()
        return made("cylinder", round_.Position(), (round_.Radius(), 0.0, 0.0))
    if kind == GeomAbs_Cone:
        cone = surface.Cone()
        return made("cone", cone.Position(), (cone.RefRadius(), 0.0, cone.SemiAngle()))
    if kind == GeomAbs_Sphere:
        sphere = surface.Sphere()
        return made("sphere", sphere.Position(), (sphere.Radius(), 0.0, 0.0))
    if kind == GeomAbs_Torus:
        torus = surface.Torus()
        return made("torus", torus.Position(), (torus.MajorRadius(), torus.MinorRadius(), 0.0))
    return FaceView("general", face, none, none, 0.0, 0.0, 0.0, False, low, high)


def _xyz(point: Any) -> Vector:
    return np.array([point.X(), point.Y(), point.Z()])
