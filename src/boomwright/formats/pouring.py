"""The room for resin in a closed mould: its volume, whether it is one, and where it is highest while pouring.

Millimetres, in the design's frame.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats.brep import StepReading
from boomwright.formats.placed import Arguments, box_of, boxes_meet, manifold_of, obstacles_of, plugs_of, solids_of

SLAB_MM = 0.3
"""Resin's last layer: how far under the ceiling the cavity's ends are looked for."""

SEGMENTS = 32
SLIVER_MM3 = 1e-2
"""Spaces smaller than this are rounding: a box that ends a nanometre beyond the mould."""


def measure_cavity_volume(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Room for resin in `box`: less the file's bodies, those of the further files, and `solids` [mm³].

    fill, hollows      what plugs a tube's bore, and where grooves go through the plug
    density_g_mm3      given: the resin's mass [g] instead

    Taken from meshes: round bodies come out smaller by two thirds of the chord on their surface.
    """
    volume = sum(space.volume() for space in spaces_of(reading, arguments, also))
    return float(volume * float(arguments.get("density_g_mm3", 1.0)))


def measure_connected(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """In how many separate spaces of the room of `cavity_volume_mm3` the `points` lie; 0 if one lies in none."""
    import manifold3d

    spaces, found = spaces_of(reading, arguments, also), set()
    for point in np.asarray(arguments["points"], dtype=float):
        drop = manifold3d.Manifold.sphere(0.05, 16).translate(tuple(point))
        shares = [(space ^ drop).volume() for space in spaces]
        if not shares or max(shares) < 0.5 * drop.volume():
            return 0.0
        found.add(int(np.argmax(shares)))
    return float(len(found))


def spaces_of(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> list[Any]:
    """The separate spaces of the room in `box`."""
    import manifold3d

    low, high = np.asarray(arguments["box"], dtype=float)
    room = manifold3d.Manifold.cube(tuple(high - low)).translate(tuple(low))
    inserts = [*solids_of(reading, arguments.get("frame")), *obstacles_of(arguments, also), *plugs_of(arguments)]
    near = [one for one in inserts if boxes_meet(box_of(one), (low, high))]
    left = manifold3d.Manifold.batch_boolean([room, *map(manifold_of, near)], manifold3d.OpType.Subtract)
    return list(left.decompose())


def measure_ceiling(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """About the cavity's ceiling and one opening in it [mm]; further arguments as for `cavity_volume_mm3`.

    up         the direction that is up while pouring, (x, y, z), along one axis
    openings   for each opening a point on its axis where it begins, and the radius within which all of it lies
    passages   other ways through the ceiling along `up`, a coax's: likewise; they count for nothing
    opening    which of them is asked about, from 0
    quantity   above_mm: how far the cavity reaches above the opening's beginning; beside_mm: from the opening's axis
               along y to the end of the cavity on its side, just under the ceiling
    """
    up = np.asarray(arguments["up"], dtype=float)
    axis = int(np.argmax(np.abs(up)))
    columns = [*arguments["openings"], *arguments.get("passages", ())]
    whole = spaces_of(reading, arguments, also)
    left = _without_columns(whole, columns, axis)
    boxes = [np.reshape(space.bounding_box(), (2, 3)) for space in left]
    if not boxes:
        raise MeasureError(f"{reading.path.name}: no cavity is left beside the openings")
    ends = [(box[1] if up[axis] > 0.0 else -box[0])[axis] for box in boxes]
    at = np.asarray(arguments["openings"][int(arguments["opening"])][0], dtype=float)
    quantity = str(arguments["quantity"])
    if quantity == "above_mm":
        return float(max(ends) - up[axis] * at[axis])
    if quantity != "beside_mm":
        raise CatalogueError(f"no such quantity of a ceiling: {quantity!r}")
    level = up[axis] * max(ends)
    slabs = [_slab(space, axis, sorted((level, level - up[axis] * SLAB_MM))) for space in whole]
    reach = [np.reshape(slab.bounding_box(), (2, 3))[:, 1] for slab in slabs if slab.volume() > SLIVER_MM3]
    side = np.sign(at[1])
    return float(max(side * (high if side > 0.0 else low) for low, high in reach) - side * at[1])


def _without_columns(spaces: Sequence[Any], openings: Sequence[Any], axis: int) -> list[Any]:
    """The spaces less a column round each opening, all the way up and down."""
    import manifold3d

    columns = []
    for point, radius in openings:
        column = manifold3d.Manifold.cylinder(1e3, float(radius), float(radius), SEGMENTS, True)
        turned = column if axis == 2 else column.rotate((0.0, 90.0, 0.0) if axis == 0 else (90.0, 0.0, 0.0))
        columns.append(turned.translate(tuple(float(value) for value in point)))
    left = [manifold3d.Manifold.batch_boolean([one, *columns], manifold3d.OpType.Subtract) for one in spaces]
    return [piece for one in left for piece in one.decompose() if piece.volume() > SLIVER_MM3]


def _slab(space: Any, axis: int, span: Sequence[float]) -> Any:
    normal = tuple(float(index == axis) for index in range(3))
    below = space.trim_by_plane(tuple(-value for value in normal), -float(span[1]))
    return below.trim_by_plane(normal, float(span[0]))


MEASURES: dict[str, Callable[[Any, Arguments, Sequence[Any]], float]] = {
    "cavity_volume_mm3": measure_cavity_volume,
    "cavity_connected": measure_connected,
    "ceiling": measure_ceiling,
}
