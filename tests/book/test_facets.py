"""Edges worth a line, and surfaces with fewer triangles, on shapes of a general library."""

import numpy as np
import pytest
import trimesh

from boomwright.book.facets import sharp_edges, thinned


def test_a_box_has_twelve_edges_and_a_cylinder_two_rims():
    box, sections = trimesh.creation.box((3, 4, 5)), 48
    assert len(sharp_edges(np.array(box.vertices), np.array(box.faces))) == 12
    round_bar = trimesh.creation.cylinder(2.0, 30.0, sections=sections)
    rims = sharp_edges(np.array(round_bar.vertices), np.array(round_bar.faces))
    assert len(rims) == 2 * sections
    assert np.abs(round_bar.vertices[rims][:, :, 2]) == pytest.approx(15.0)


def test_fewer_triangles_stay_within_what_is_allowed():
    ball = trimesh.creation.icosphere(5, 20.0)
    vertices, triangles = thinned(np.array(ball.vertices), np.array(ball.faces), 0.2)
    assert len(triangles) < len(ball.faces) / 4
    thin = trimesh.Trimesh(vertices, triangles)
    assert thin.is_watertight
    radii = np.linalg.norm(np.concatenate([vertices, thin.triangles_center]), axis=1)
    assert np.abs(radii - 20.0).max() < 0.22


def test_an_open_surface_is_left_as_it_is():
    vertices, triangles = np.array([(0.0, 0, 0), (1, 0, 0), (0, 1, 0)]), np.array([(0, 1, 2)])
    same = thinned(vertices, triangles, 1.0)
    assert same[0] is vertices
    assert same[1] is triangles
