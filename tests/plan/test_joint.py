"""The dovetail and its play, by plane geometry; the budget of positions, by a drawn lot."""

import math

import numpy as np
import pytest
import shapely
from shapely import affinity

from boomwright.plan.joint import (
    WALL_MM,
    Dovetail,
    dovetail_mm,
    flank_play_mm,
    joint_box,
    most_play_mm,
    position_deviation_mm,
)

WAYS = [(1, 0), (0, 1), (0, -1)]


def pair(dovetail: Dovetail, clearance_mm: float) -> tuple[shapely.Polygon, shapely.Polygon]:
    """The tenon with a block behind its face, and the block with the socket ahead of it, butting."""
    (low, high), margin = joint_box([dovetail]), 10.0
    room = shapely.box(low[0] - margin, low[1] - margin, high[0] + margin, high[1] + margin)
    (x, y), (a, b) = dovetail.at_mm, dovetail.way
    far = 100.0
    ahead = shapely.Polygon(
        [
            (x + far * (a * u - b * v), y + far * (b * u + a * v))
            for u, v in ((0.0, -1.0), (1.0, -1.0), (1.0, 1.0), (0.0, 1.0))
        ]
    ).intersection(room)
    tenon = room.difference(ahead).union(shapely.Polygon(dovetail.outline()))
    return tenon, ahead.difference(shapely.Polygon(dovetail.outline(clearance_mm)))


@pytest.mark.parametrize("way", WAYS)
@pytest.mark.parametrize("clearance_mm", [0.05, 0.2])
def test_flanks_keep_the_clearance_and_the_faces_butt(way: tuple[int, int], clearance_mm: float) -> None:
    dovetail = Dovetail((3.0, -7.0), way)
    tenon, socket = pair(dovetail, clearance_mm)
    assert tenon.intersection(socket).area == pytest.approx(0.0, abs=1e-12)
    (x, y), (a, b) = dovetail.at_mm, way
    for u, v, apart in ((2.0, 4.3, clearance_mm), (3.5, 5.8, clearance_mm), (0.0, 9.0, 0.0)):  # two on a flank
        point = shapely.Point(x + a * u - b * v, y + b * u + a * v)
        assert tenon.boundary.distance(point) == pytest.approx(0.0, abs=1e-12)
        assert socket.distance(point) == pytest.approx(apart, abs=1e-9)


@pytest.mark.parametrize("way", WAYS)
@pytest.mark.parametrize("clearance_mm", [0.05, 0.2])
def test_every_face_keeps_the_clearance_but_the_butting_ones(way: tuple[int, int], clearance_mm: float) -> None:
    dovetail = Dovetail((3.0, -7.0), way)
    tenon, socket = pair(dovetail, clearance_mm)
    assert tenon.intersection(socket).area == pytest.approx(0.0, abs=1e-12)
    (x, y), (a, b) = dovetail.at_mm, way
    half = dovetail.tip_half_mm + 1.0
    beyond = shapely.LineString(
        [(x + a * u - b * v, y + b * u + a * v) for u, v in ((0.01, -half), (dovetail.length_mm, -half))]
    )
    wall = socket.boundary.difference(shapely.LineString(beyond.coords).buffer(1e-9))
    flank = [(x + a * u - b * v, y + b * u + a * v) for u, v in ((2.0, 4.3), (3.5, 5.8))]  # on the middle of a flank
    for point in flank:
        assert tenon.boundary.distance(shapely.Point(point)) == pytest.approx(0.0, abs=1e-12)
        assert wall.distance(shapely.Point(point)) == pytest.approx(clearance_mm, abs=1e-9)


@pytest.mark.parametrize("way", WAYS)
@pytest.mark.parametrize("clearance_mm", [0.0, 0.05, 0.2])
def test_the_flanks_meet_after_root_two_clearances_and_butt_behind(way: tuple[int, int], clearance_mm: float) -> None:
    tenon, socket = pair(Dovetail((0.0, 0.0), way), clearance_mm)
    play = flank_play_mm(clearance_mm)

    def overlap(move_mm: float) -> float:
        return float(tenon.intersection(affinity.translate(socket, move_mm * way[0], move_mm * way[1])).area)

    assert overlap(max(0.0, play - 1e-6)) < 1e-9
    assert overlap(play + 1e-3) > 1e-4
    assert overlap(-1e-3) > 1e-4
    assert play == pytest.approx(clearance_mm / math.sin(math.radians(45.0)))


@pytest.mark.parametrize("room_mm", [1.8, 3.0, 5.0, 40.0])
def test_a_dovetail_has_a_neck_that_prints(room_mm: float) -> None:
    found = dovetail_mm(room_mm)
    assert found is not None
    tip, flank = found
    assert tip <= room_mm
    assert 2.0 * (tip - flank) >= 1.2  # three widths of an ordinary nozzle
    assert WALL_MM >= 1.2


def test_there_is_none_where_the_neck_would_be_too_thin() -> None:
    assert dovetail_mm(1.0) is None


def test_independent_plays_add_like_a_drawn_lot_of_builds() -> None:
    plays, notch = [0.07, 0.07, 0.11], 0.03
    lot = np.random.default_rng(145)
    error = sum(lot.uniform(-play / 2.0, play / 2.0, 400_000) for play in plays) + lot.uniform(-notch, notch, 400_000)
    assert position_deviation_mm(plays, notch) == pytest.approx(float(np.std(error)), rel=5e-3)


def test_the_largest_play_uses_the_limit_up() -> None:
    most = most_play_mm(9, 0.01, 0.1)
    assert position_deviation_mm([most] * 9, 0.01) == pytest.approx(0.1)
    assert most_play_mm(9, 0.01, 0.0) == 0.0
