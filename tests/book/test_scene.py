"""The scene against the files it was read from, and its poses against each other."""

import base64
import json
import shutil
from dataclasses import replace
from itertools import combinations

import manifold3d
import numpy as np
import pytest
import trimesh
from scene_cases import NASTY, box, boxes, written

from boomwright.book.pictures import ALTS, pictures
from boomwright.book.poses import EXPLODED, LAID
from boomwright.book.scene import read_scene
from boomwright.book.view.section import scene_json, view_html

TOUCH_MM3 = 0.5
"""What facets of round seats may share with what lies in them."""


@pytest.fixture(scope="module")
def gauge(tmp_path_factory):
    folder = tmp_path_factory.mktemp("gauge")
    plan, manifest = written(folder)
    return folder, plan, manifest, read_scene(folder, plan, manifest)


def mesh_of(part):
    return trimesh.Trimesh(part.vertices_mm, part.triangles, process=False)


def placed(scene, pose, key):
    part = scene.part(key)
    points = part.vertices_mm @ pose.places[key][:3, :3].T + pose.places[key][:3, 3]
    solid = manifold3d.Manifold(manifold3d.Mesh64(points, part.triangles.astype(np.uint64)))
    assert solid.status() == manifold3d.Error.NoError, key
    return solid


@pytest.mark.slow
def test_printed_parts_are_those_of_the_files_as_a_general_library_reads_them(gauge):
    folder, _, manifest, scene = gauge
    files = [entry.path for entry in manifest.entries if entry.path.endswith(".stl")]
    assert len(files) == 4
    for path in files:
        file, part = trimesh.load_mesh(folder / path), scene.part(path.split("/")[1].removesuffix(".stl"))
        assert mesh_of(part).volume == pytest.approx(file.volume, rel=1e-3)
        assert mesh_of(part).bounds == pytest.approx(file.bounds, abs=0.01)


@pytest.mark.slow
def test_rods_have_the_design_s_size_and_place(gauge):
    _, plan, _, scene = gauge
    for rod in plan.design.rods:
        low, high = mesh_of(scene.part(rod.tag)).bounds
        r, half = rod.diameter_mm / 2.0, rod.length_mm / 2.0
        assert (low + high) / 2.0 == pytest.approx((rod.at_mm, 0.0, 0.0), abs=0.02)
        assert high - low == pytest.approx((2.0 * r, 2.0 * half, 2.0 * r), abs=0.1)


@pytest.mark.slow
def test_axes_stand_apart_as_the_design_says(gauge):
    _, plan, _, scene = gauge
    axes = {axis.key: axis for axis in scene.axes}
    assert [axis.key for axis in scene.axes] == ["R", "DE", "DE-2", "D1", "D2", "boom"]
    driven = plan.design.driven
    assert axes["DE"].start[0] == driven.at_mm
    assert axes["DE-2"].start[0] == driven.at_mm + driven.spacing_mm
    for rod in plan.design.rods:
        assert axes[rod.tag].start == (rod.at_mm, -rod.length_mm / 2.0, 0.0)
        assert axes[rod.tag].end == (rod.at_mm, rod.length_mm / 2.0, 0.0)


@pytest.mark.slow
def test_no_two_parts_share_room_in_any_pose(gauge):
    scene = gauge[3]
    for pose in scene.poses:
        solids = {key: placed(scene, pose, key) for key in pose.shows}
        for one, other in combinations(solids, 2):
            shared = (solids[one] ^ solids[other]).volume()
            assert shared < TOUCH_MM3, f"{pose.key}: {one} and {other} share {shared} mm3"


@pytest.mark.slow
def test_laid_rods_lie_at_the_cradle_s_axis_height_over_a_bed_at_zero(gauge):
    _, plan, _, scene = gauge
    pose = scene.pose(LAID)
    assert placed(scene, pose, "cradle-1").bounding_box()[2] == pytest.approx(0.0, abs=1e-3)
    for rod in plan.design.rods:
        low, high = np.array(placed(scene, pose, rod.tag).bounding_box()).reshape(2, 3)
        assert (low[2] + high[2]) / 2.0 == pytest.approx(plan.cradle.axis_height_mm, abs=0.02)


@pytest.mark.slow
def test_exploded_parts_go_the_way_they_are_put_together(gauge):
    _, plan, _, scene = gauge
    boxes_of = {
        key: np.array(placed(scene, scene.pose(EXPLODED), key).bounding_box()) for key in scene.pose(EXPLODED).shows
    }
    boom = boxes_of["boom"]
    assert plan.mould.pull == "z"
    assert boxes_of["mould-upper"][2] > boxes_of["DE"][5] > boxes_of["R"][2] > boom[5]
    assert boxes_of["mould-lower"][5] < boom[2]
    assert boxes_of["cradle-1"][5] < boxes_of["mould-lower"][2]


@pytest.mark.slow
def test_a_second_section_of_the_cradle_stands_where_its_own_frame_says(gauge, tmp_path):
    folder, plan, manifest, _ = gauge
    shutil.copytree(folder, tmp_path / "two")
    shutil.copy(folder / "print/cradle-1.stl", tmp_path / "two/print/cradle-2.stl")
    entry = next(entry for entry in manifest.entries if entry.path == "print/cradle-1.stl")
    shifted = tuple((*row[:3], row[3] - (300.0 if i == 0 else 0.0)) for i, row in enumerate(entry.frame))
    second = replace(entry, path="print/cradle-2.stl", frame=shifted)
    scene = read_scene(tmp_path / "two", plan, replace(manifest, entries=(*manifest.entries, second)))
    assert scene.part("cradle-2").label == "cradle, section 2"
    first, other = (placed(scene, scene.pose(LAID), key).bounding_box() for key in ("cradle-1", "cradle-2"))
    assert np.subtract(other, first) == pytest.approx((300.0, 0, 0, 300.0, 0, 0), abs=1e-3)


@pytest.mark.slow
def test_every_picture_is_made_and_is_the_same_twice(gauge):
    folder, plan, manifest, scene = gauge
    made = pictures(scene, 240)
    names = "antenna cradle cradle-rods cradle-boom cradle-driven mould-open mould-closed former"
    assert {str(name) for name in made} == set(names.split())
    assert set(ALTS) == set(made)
    assert pictures(read_scene(folder, plan, manifest), 240) == made


@pytest.mark.slow
def test_the_fragment_is_small_and_refers_to_nothing_outside(gauge):
    scene = gauge[3]
    assert len(scene_json(scene)) < 1_200_000
    html = view_html(scene, b"")
    assert len(html) < 2_000_000
    # The one address in it is the name of a markup language, which nothing fetches.
    assert html.replace("http://www.w3.org/1999/xhtml", "").replace("http://www.w3.org/2000/svg", "").count("http") == 0


def test_the_page_s_numbers_give_the_mesh_back():
    scene = boxes(box("a", (-3, 1, 2), (7, 1.5, 90)))
    part = json.loads(scene_json(scene))["parts"][0]
    grid = np.frombuffer(base64.b64decode(part["vertices"]), "<i2").reshape(-1, 3)
    triangles = np.frombuffer(base64.b64decode(part["triangles"]), "<u2").reshape(-1, 3)
    edges = np.frombuffer(base64.b64decode(part["edges"]), "<u2").reshape(-1, 2)
    points = grid * np.array(part["scale"]) + np.array(part["offset"])
    assert trimesh.Trimesh(points, triangles).volume == pytest.approx(10 * 0.5 * 88, rel=1e-4)
    assert len(edges) == 12


def test_words_of_the_user_cannot_leave_their_place():
    html = view_html(boxes(box("a", (0, 0, 0), (1, 1, 1), label=NASTY), title=NASTY), b"")
    assert "<script>alert" not in html
    assert html.count("</script>") == 2
    assert "<!--" not in html
    data = html.split('<script type="application/json">')[1].split("</script>")[0]
    assert json.loads(data)["title"] == NASTY
