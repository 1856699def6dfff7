"""The length gauge: for every distinct rod length a slot it must drop into, and one it must not.

Each plate lies on the bed in its own frame, slots along x, all beginning at the same line. All in millimetres.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from boomwright.data.lettering import text_width_mm
from boomwright.data.tables import general_tolerance_mm
from boomwright.design.model import Design
from boomwright.plan.label import Label
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

END_MM = 5.0
"""Plate beyond both ends of a slot."""

FLOOR_MM = 2.0
DEPTH_PER_DIAMETER = 0.75
"""A slot holds the rod by its ends and leaves it standing out to be lifted."""

WALL_MM = 3.0
"""Between the no-go slot of a length and the go slot of the next."""

TEXT_MM = 4.0
ROOM_MM = 1.4
"""Above and below a line of text."""

PUSH_MM = 10.0
"""Length of the opening under a slot's middle through which the rod is pushed out."""

LONGEST_TOLERANCE_MM = 2000.0
SHORTEST_MM = 0.5


@dataclass(frozen=True)
class GaugeSlot:
    """A slot: its words, length and width, the middle of its width, its floor's height."""

    tags: str
    is_go: bool
    length_mm: float
    width_mm: float
    y_mm: float
    floor_mm: float


@dataclass(frozen=True)
class GaugePlate:
    """One plate: outer sizes, slots, labels."""

    size_mm: tuple[float, float, float]
    slots: tuple[GaugeSlot, ...]
    labels: tuple[Label, ...]


@dataclass(frozen=True)
class GaugePlan:
    """The plates; lengths that no plate takes, in words; why there is no gauge at all."""

    plates: tuple[GaugePlate, ...]
    beyond: tuple[str, ...] = ()
    left_out: str | None = None


@dataclass(frozen=True)
class _Kind:
    tags: str
    length_mm: float
    diameter_mm: float
    tolerance_mm: float


@lru_cache(maxsize=8)
def plan_gauge(design: Design, shop: Shop) -> tuple[GaugePlan, tuple[Size, ...]]:
    """The gauge of a design's rods and straight halves on this shop's bed, and its sizes with their origins."""
    bed = sorted(shop.printer.bed_mm[:2], reverse=True)
    kinds = _kinds(design)
    fitting = [k for k in kinds if k.length_mm + k.tolerance_mm + 2.0 * END_MM <= bed[0]]
    beyond = tuple(f"{k.tags} {k.length_mm:g} mm" for k in kinds if k not in fitting)
    ruled = tuple(_ruled(kind, bed[0]) for kind in kinds if kind not in fitting)
    if not fitting:
        found = f"no rod length fits the bed of {bed[0]:g} mm ({', '.join(beyond)}): check with a steel rule"
        return GaugePlan((), beyond, found if kinds else "the design has no straight rod to check"), ruled
    slide, plates, sizes = shop.printer.slide_clearance_mm, list[GaugePlate](), list[Size](ruled)
    rest = fitting
    while rest:
        count = next(n for n in range(len(rest), 0, -1) if n == 1 or _height(rest[:n], slide) <= bed[1])
        plates.append(_plate(rest[:count], slide))
        rest = rest[count:]
    for kind in fitting:
        for word, sign in (("go", 1.0), ("no_go", -1.0)):
            size = kind.length_mm + sign * kind.tolerance_mm
            origin = f"{kind.tags}: {kind.length_mm:g} {'+' if sign > 0 else '-'} {kind.tolerance_mm:g} (ISO 2768 fine)"
            sizes.append(Size(f"gauge.{_key(kind)}.{word}_mm", size, "mm", origin))
    return GaugePlan(tuple(plates), beyond), tuple(sizes)


def _ruled(kind: _Kind, bed_mm: float) -> Size:
    """A length that no plate takes: two pieces set apart on a board would be no truer than the rule that sets them."""
    within = f"within {kind.tolerance_mm:g} (ISO 2768 fine)" if kind.tolerance_mm else "as near as it lets you"
    words = f"longer than the bed of {bed_mm:g} takes: check it with a steel rule, {within}"
    return Size(f"gauge.{_key(kind)}.rule_mm", kind.length_mm, "mm", words)


def _key(kind: _Kind) -> str:
    return kind.tags.replace(" ", "+")


def _kinds(design: Design) -> list[_Kind]:
    """Distinct lengths and diameters, the longest first."""
    rods: dict[tuple[float, float], list[str]] = {}
    for rod in design.rods:
        rods.setdefault((rod.length_mm, rod.diameter_mm), []).append(rod.tag)
    driven = design.driven
    if driven.form == "straight":
        assert driven.length_mm is not None
        rods.setdefault(((driven.length_mm - driven.gap_mm) / 2.0, driven.diameter_mm), []).append("DE")
    kinds = []
    for (length, diameter), tags in sorted(rods.items(), reverse=True):
        if SHORTEST_MM <= length <= LONGEST_TOLERANCE_MM:
            kinds.append(_Kind(" ".join(tags), length, diameter, general_tolerance_mm(length)))
        else:
            kinds.append(_Kind(" ".join(tags), length, diameter, 0.0))
    return kinds


def _height(kinds: Sequence[_Kind], slide_mm: float) -> float:
    pairs = [2.0 * (k.diameter_mm + 2.0 * slide_mm) + TEXT_MM + 2.0 * ROOM_MM + WALL_MM for k in kinds]
    return WALL_MM + sum(pairs)


def _plate(kinds: Sequence[_Kind], slide_mm: float) -> GaugePlate:
    top = FLOOR_MM + DEPTH_PER_DIAMETER * max(k.diameter_mm for k in kinds)
    length = max(k.length_mm + k.tolerance_mm for k in kinds) + 2.0 * END_MM
    slots, labels, y = list[GaugeSlot](), list[Label](), WALL_MM
    for kind in kinds:
        width = kind.diameter_mm + 2.0 * slide_mm
        floor = top - DEPTH_PER_DIAMETER * kind.diameter_mm
        for is_go in (True, False):
            size = kind.length_mm + (kind.tolerance_mm if is_go else -kind.tolerance_mm)
            slots.append(GaugeSlot(kind.tags, is_go, size, width, y + width / 2.0, floor))
            y += width + (TEXT_MM + 2.0 * ROOM_MM if is_go else WALL_MM)
        labels.append(
            Label(_text(kind, length - 2.0 * END_MM), END_MM, y - WALL_MM - width - ROOM_MM - TEXT_MM, TEXT_MM, top)
        )
    return GaugePlate((length, y, top), tuple(slots), tuple(labels))


def _text(kind: _Kind, room_mm: float) -> str:
    """The length between its two slots, where it fits: every letter costs time, and the cut list has the tags."""
    choices = [f"{kind.length_mm:g}", ""]
    return next(text for text in choices if text_width_mm(text, TEXT_MM) <= room_mm)
