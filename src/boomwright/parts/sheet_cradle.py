"""The laser-cut cradle: the fixture that holds the rods on the datum plane, from flat sheet."""

from __future__ import annotations

from typing import TYPE_CHECKING

from boomwright.data.lettering import strokes
from boomwright.errors import PlanFault
from boomwright.parts.contour import offset_contour, polygon, rectangle, reversed_contour
from boomwright.parts.sheet_cradle_checks import expect_assembly, expect_plates, stem
from boomwright.pieces import Contour, DrawingPiece, Expectation, Mark, Part, Piece
from boomwright.plan.sheet_plate import Plate, Rect
from boomwright.shop.nesting import Place

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan


class SheetCradlePart(Part):
    """The cradle's plates, nested on as many sheets as they need."""

    name = "sheet-cradle"
    purpose = "holds all rods on the datum plane, square and centred, while the adhesive cures; from flat sheet"
    processes = ("laser",)
    left_out_when = "as the cradle; or rods too short for rails of sheet, or no room for them clear of the adhesive"

    def left_out(self, plan: Plan) -> str | None:
        """Nothing to hold, or nothing that a sheet could hold."""
        return plan.sheet_cradle.left_out

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One drawing a sheet: outlines grown and holes shrunk by half the kerf, words scored."""
        cradle, laser = plan.sheet_cradle, plan.shop.laser
        if not cradle.plates:
            raise PlanFault(plan.faults["sheet-cradle"])
        sheets: list[list[Mark]] = [[] for _ in range(cradle.sheets)]
        drawn: dict[Plate, tuple[Contour, ...]] = {}
        for standing, place in zip(cradle.plates, cradle.places, strict=True):
            plate = standing.plate
            if plate not in drawn:
                drawn[plate] = plate_contours(plate, laser.kerf_mm)
            cuts = [Mark(on_sheet(c, plate, place, laser.kerf_mm), laser.layers.cut) for c in drawn[plate]]
            scores = [
                Mark(on_sheet(contour, plate, place, laser.kerf_mm), laser.layers.score)
                for contour in word_contours(plate)
            ]
            sheets[place.sheet] += [*scores, *cuts]
        offsets = {"kerf_mm": laser.kerf_mm}
        return tuple(
            DrawingPiece(stem(number), "laser", tuple(marks), offsets=offsets) for number, marks in enumerate(sheets)
        )

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Notches, slots and feet on every sheet, and what the plates show when they are put together."""
        if not plan.sheet_cradle.plates:
            return ()
        return (*expect_plates(plan), *expect_assembly(plan))


def plate_contours(plate: Plate, kerf_mm: float) -> tuple[Contour, ...]:
    """Holes and outline of a plate in its own u and v, half a kerf outside the part: inner cuts come first."""
    holes = [reversed_contour(rectangle(hole.u, hole.v)) for hole in (*plate.slots, *plate.windows)]
    return tuple(offset_contour(contour, kerf_mm / 2.0) for contour in (*holes, outline(plate)))


def outline(plate: Plate) -> Contour:
    """A plate's outline as cut, counter-clockwise: its body with the upper edge's profile, and its feet."""
    import shapely

    (u0, u1), (v0, v1) = plate.body.u, plate.body.v
    body = shapely.Polygon([(u0, v0), (u1, v0), (u1, v1), *plate.top[::-1], (u0, v1)])
    whole = shapely.union_all([body, *(_box(foot) for foot in plate.feet)])
    ring = shapely.geometry.polygon.orient(whole.simplify(0.0)).exterior
    return polygon([(float(u), float(v)) for u, v in ring.coords[:-1]])


def word_contours(plate: Plate) -> list[Contour]:
    """The strokes of a plate's words in its own u and v."""
    return [
        Contour(tuple((words.u_mm + u, words.v_mm + v, 0.0) for u, v in line), closed=False)
        for words in plate.words
        for line in strokes(words.text, words.height_mm)
    ]


def on_sheet(contour: Contour, plate: Plate, place: Place, kerf_mm: float) -> Contour:
    """A contour of a plate where the plate lies on its sheet, turned a quarter to the left or not."""
    extent, half = plate.extent, kerf_mm / 2.0
    x0, y0 = place.x_mm + half, place.y_mm + half
    if place.turned:
        return Contour(
            tuple((x0 + extent.v[1] - v, y0 + u - extent.u[0], bulge) for u, v, bulge in contour.vertices),
            contour.closed,
        )
    return Contour(
        tuple((x0 + u - extent.u[0], y0 + v - extent.v[0], bulge) for u, v, bulge in contour.vertices), contour.closed
    )


def _box(rect: Rect) -> object:
    import shapely

    return shapely.box(rect.u[0], rect.v[0], rect.u[1], rect.v[1])
