"""Pictures without a graphics card: against a plain ray test, and as files a general library reads."""

import io
from itertools import combinations, product

import numpy as np
import pytest
import trimesh
from PIL import Image
from scene_cases import GREY, RED, box, boxes

from boomwright.book.content import Picture
from boomwright.book.pictures import PAPER, Shot, View, picture, pictures
from boomwright.book.raster import Canvas, Sheet, png
from boomwright.book.scene import ANTENNA, ReadPart, Scene

FRONT = View(0.0, 0.0)
"""Along +y, x to the right, z up."""


def pixels(data: bytes) -> np.ndarray:
    return np.asarray(Image.open(io.BytesIO(data)).convert("RGB")).astype(int)


def is_paper(image: np.ndarray) -> np.ndarray:
    return np.all(image == PAPER, axis=-1)


def nearest_by_rays(corners: np.ndarray, width: int, height: int) -> np.ndarray:
    """Per sample the triangle nearest to the viewer by barycentric coordinates, -1 = none: slow, plainly right."""
    owner, depth = np.full((height, width), -1), np.full((height, width), -np.inf)
    y, x = np.mgrid[0:height, 0:width] + 0.5
    for number, ((ax, ay, az), (bx, by, bz), (cx, cy, cz)) in enumerate(corners):
        whole = (bx - ax) * (cy - ay) - (cx - ax) * (by - ay)
        v = ((x - ax) * (cy - ay) - (cx - ax) * (y - ay)) / whole
        w = ((bx - ax) * (y - ay) - (x - ax) * (by - ay)) / whole
        z = az + v * (bz - az) + w * (cz - az)
        nearer = (v >= 0) & (w >= 0) & (v + w <= 1) & (z > depth)
        owner[nearer], depth[nearer] = number, z[nearer]
    return owner


def test_every_sample_shows_the_triangle_that_a_ray_meets_first():
    random = np.random.default_rng(7)
    corners = random.uniform((-20, -20, 0), (100, 80, 50), (200, 3, 3))
    corners[::4] = corners[::4, :1] + random.uniform(-3, 3, (50, 3, 3))
    shades = np.stack([np.arange(200), np.zeros(200), np.zeros(200)], axis=1).astype(np.uint8)
    sheet = Sheet(Canvas(80, 60, -100.0, 200.0), PAPER)
    sheet.fill(corners, shades)
    wanted = nearest_by_rays(corners, 80, 60)
    found = np.where(np.isfinite(sheet.depth()), sheet.owner(), -1)
    assert np.array_equal(found, wanted)


def test_a_file_holds_the_picture_to_a_step_of_its_colours():
    image = np.zeros((9, 14, 3), np.uint8)
    image[2:5, 3:11] = (200, 40, 80)
    image[6] = (252, 248, 4)
    assert np.abs(pixels(png(image)) - image).max() <= 2


def test_more_colours_than_a_file_holds_become_near_ones():
    image = np.random.default_rng(3).integers(0, 256, (64, 64, 3)).astype(np.uint8)
    found = pixels(png(image))
    assert len(np.unique(found.reshape(-1, 3), axis=0)) <= 256
    assert np.abs(found - image).mean() < 32


def test_what_stands_behind_is_hidden_with_its_edges():
    plate, behind = box("plate", (0, 0, 0), (100, 1, 60)), box("behind", (30, 20, 20), (70, 40, 40), RED)
    scene = boxes(plate, behind)
    with_both = picture(scene, Shot(("plate", "behind"), view=FRONT), 200)
    assert with_both == picture(scene, Shot(("plate",), view=FRONT), 200)
    from_the_back = pixels(picture(scene, Shot(("plate", "behind"), view=View(180.0, 0.0)), 200))
    middle = from_the_back[from_the_back.shape[0] // 2, 100]
    assert middle[0] > 2 * middle[1]


def ink_at(scene: Scene, view: View, points: list) -> list[bool]:
    """Whether there is ink at points of a scene of one part [mm], found by where its picture begins and ends."""
    image = pixels(picture(scene, Shot((scene.parts[0].key,), view=view), 500))
    rows, columns = np.flatnonzero(~is_paper(image).all(axis=1)), np.flatnonzero(~is_paper(image).all(axis=0))
    seen, wanted = scene.parts[0].vertices_mm @ view.axes[:2].T, np.array(points) @ view.axes[:2].T
    share = (wanted - seen.min(axis=0)) / np.ptp(seen, axis=0)
    x = np.round(columns[0] + share[:, 0] * (columns[-1] - columns[0])).astype(int)
    y = np.round(rows[-1] - share[:, 1] * (rows[-1] - rows[0])).astype(int)
    near = [image[max(b - 1, 0) : b + 2, max(a - 1, 0) : a + 2].sum(axis=2).min() for a, b in zip(x, y, strict=True)]
    return [value < 3 * 95 for value in near]


def test_a_cube_shows_its_nine_edges_in_front_and_not_the_three_behind():
    view = View(-30.0, 25.0)
    ends = [np.array(p, float) for p in product((0, 10), repeat=3)]
    edges = [(a + b) / 2.0 for a, b in combinations(ends, 2) if np.abs(a - b).sum() == 10.0]
    farthest = min(ends, key=lambda end: end @ view.axes[2])
    wanted = [bool(np.abs(middle - farthest).sum() > 5.0) for middle in edges]
    assert wanted.count(False) == 3
    assert ink_at(boxes(box("cube", (0, 0, 0), (10, 10, 10))), view, edges) == wanted


def test_a_round_bar_has_an_outline_but_no_lines_along_it():
    along_x = np.array([(0, 0, 1, 0), (0, 1, 0, 0), (-1, 0, 0, 0), (0, 0, 0, 1)])
    bar = trimesh.creation.cylinder(5.0, 60.0, sections=48, transform=along_x)
    scene = boxes(ReadPart("bar", "bar", ANTENNA, GREY, np.array(bar.vertices), np.array(bar.faces)))
    places = [(x, 0.0, z) for z in (5.0, -5.0, 2.0, 0.0, -1.0) for x in (-20.0, 3.0, 20.0)]
    assert ink_at(scene, FRONT, places) == [True] * 6 + [False] * 9


def test_the_content_fills_the_picture_up_to_a_margin():
    image = pixels(picture(boxes(box("a", (0, 0, 0), (100, 10, 50))), Shot(("a",), view=FRONT), 300))
    rows, columns = np.flatnonzero(~is_paper(image).all(axis=1)), np.flatnonzero(~is_paper(image).all(axis=0))
    assert 8 <= columns[0] <= 12
    assert 287 <= columns[-1] <= 291
    assert columns[-1] - columns[0] == pytest.approx(2 * (rows[-1] - rows[0]), abs=3)


def test_a_rod_far_thinner_than_a_pixel_can_still_be_seen_all_along():
    thin = box("rod", (0, 0, 0), (1000, 0.2, 0.2))
    image = pixels(picture(boxes(thin), Shot(("rod",), view=View(-28.0, 38.0)), 400))
    dark = (image.sum(axis=2) < 3 * 200).any(axis=0)
    assert dark[12:388].all()


def test_what_is_not_the_point_is_pale():
    scene = boxes(box("a", (0, 0, 0), (10, 10, 10), RED), box("b", (20, 0, 0), (30, 10, 10), RED))
    image = pixels(picture(scene, Shot(("a", "b"), view=FRONT, highlight=("a",)), 200))
    row = image[image.shape[0] // 2]
    assert row[40, 1] + 60 < row[160, 1]


def test_the_focus_fills_the_picture_and_the_rest_is_cut_off():
    scene = boxes(box("long", (-500, 0, 4), (500, 1, 6)), box("small", (-5, -9, 0), (5, -8, 10), RED))
    image = pixels(picture(scene, Shot(("long", "small"), view=FRONT, focus=("small",)), 200))
    assert not is_paper(image[:, 0]).all()
    assert not is_paper(image[:, -1]).all()


def test_pictures_of_what_was_not_made_are_absent():
    made = pictures(boxes(box("boom", (0, -1, -1), (100, 1, 1), GREY), box("DE", (20, -30, 0), (22, 30, 2), RED)), 120)
    assert set(made) == {Picture.ANTENNA, Picture.CRADLE_DRIVEN}


def test_unknown_parts_and_poses_are_refused():
    scene = boxes(box("a", (0, 0, 0), (1, 1, 1)))
    with pytest.raises(KeyError, match="b"):
        picture(scene, Shot(("b",)))
    with pytest.raises(KeyError, match="flying"):
        picture(scene, Shot(("a",), "flying"))
