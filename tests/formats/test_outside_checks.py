"""Libraries that our readers do not use open our files: lib3mf's strict reader, trimesh, ezdxf, cadquery's importer."""

import cadquery as cq
import ezdxf
import lib3mf
import numpy as np
import pytest
import trimesh
from specimens import AXIS_MM, NOTCHES_MM, TABLE, antenna_piece, drawing_piece, rail_piece, write

from boomwright.shop.profile import Printer

NOMINAL = Printer(hole_shrink_mm=0.0)


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    path = tmp_path_factory.mktemp("files")
    for piece in (rail_piece(NOMINAL, printed=None, offsets={}), antenna_piece(), drawing_piece(), TABLE):
        write(piece, path)
    return path


def test_lib3mf_reads_the_3mf_strictly_without_a_warning(folder):
    model = lib3mf.get_wrapper().CreateModel()
    reader = model.QueryReader("3mf")
    reader.SetStrictModeActive(True)
    reader.ReadFromFile(str(folder / "rail-1.3mf"))
    assert reader.GetWarningCount() == 0
    assert model.GetUnit() == lib3mf.ModelUnit.MilliMeter
    objects = model.GetMeshObjects()
    assert objects.Count() == 1
    objects.MoveNext()
    mesh = objects.GetCurrentMeshObject()
    assert mesh.GetName() == "rail-1"
    assert mesh.IsManifoldAndOriented()
    corners = np.array([list(vertex.Coordinates) for vertex in mesh.GetVertices()])
    triangles = np.array([list(triangle.Indices) for triangle in mesh.GetTriangleIndices()])
    stl = trimesh.load_mesh(folder / "rail-1.stl", process=False)
    assert np.array_equal(corners[triangles], stl.triangles)


def test_trimesh_finds_the_stl_closed_and_as_large_as_the_solid(folder):
    solid = cq.importers.importStep(str(folder / "rail-1.step")).val()
    mesh = trimesh.load_mesh(folder / "rail-1.stl")
    assert mesh.is_watertight
    assert mesh.is_winding_consistent
    assert mesh.body_count == 1
    # A bore of 4 mm with chords of at most 0.01 mm loses less than 0.1 mm² of its section, 4 mm long.
    assert mesh.volume == pytest.approx(solid.Volume(), abs=0.4)
    assert mesh.bounds[0][2] == 0.0
    assert np.allclose(mesh.bounds, [[0, -20, 0], [60, 20, AXIS_MM]], atol=1e-4)


def test_trimesh_finds_every_notch_at_its_place(folder):
    mesh = trimesh.load_mesh(folder / "rail-1.stl")
    normals = mesh.face_normals
    sloped = np.flatnonzero((np.abs(normals[:, 1]) < 1e-6) & (np.abs(np.abs(normals[:, 0]) - normals[:, 2]) < 1e-4))
    for at in NOTCHES_MM:
        # Both faces of a 90° notch touch a rod of radius 1.5 there: n . (axis - corner) = 1.5.
        axis = np.array([at, 0.0, AXIS_MM])
        near = [i for i in sloped if abs(mesh.triangles_center[i][0] - at) < 5.0]
        assert len(near) >= 8
        for index in near:
            assert normals[index] @ (axis - mesh.triangles[index][0]) == pytest.approx(1.5, abs=2e-5)


def test_cadquery_reads_names_colours_and_places(folder):
    assembly = cq.Assembly.importStep(str(folder / "antenna.step"))
    children = {child.name: child for child in assembly.children}
    assert list(children) == ["boom", "R", "D1", "DE"]
    rod = children["D1"].obj.moved(children["D1"].loc)
    box = rod.BoundingBox(1e-4)
    assert (box.xmin + box.xmax) / 2.0 == pytest.approx(50.0, abs=1e-6)
    assert (box.zmin + box.zmax) / 2.0 == pytest.approx(0.0, abs=1e-6)
    assert box.ylen == pytest.approx(140.0, abs=1e-5)
    assert len(children["DE"].obj.Solids()) == 2
    cylinders = [face for face in rod.Faces() if face.geomType() == "CYLINDER"]
    assert cylinders[0]._geomAdaptor().Cylinder().Radius() == pytest.approx(1.5, abs=1e-12)
    from boomwright.formats.step import STEP

    colours = {body.name: body.colour for body in STEP.read(folder / "antenna.step").bodies}
    assert colours["boom"] == pytest.approx((0.76, 0.58, 0.41), abs=1e-6)
    for name, colour in list(colours.items())[:3]:  # the importer takes no colour from a body of two solids
        own = children[name].color
        assert own is not None, name
        assert own.toTuple()[:3] == pytest.approx(colour, abs=1e-4), name


def test_a_step_file_alone_holds_the_nominal_part(folder):
    solid = cq.importers.importStep(str(folder / "rail-1.step")).val()
    bores = [f for f in solid.Faces() if f.geomType() == "CYLINDER"]
    assert [bore._geomAdaptor().Cylinder().Radius() for bore in bores] == [pytest.approx(2.0, abs=1e-12)] * len(bores)
    assert solid.isValid()


def test_ezdxf_finds_nothing_to_mend_and_reads_true_arcs(folder):
    document = ezdxf.readfile(folder / "comb-1.dxf")
    audit = document.audit()
    assert (audit.errors, audit.fixes) == ([], [])
    assert document.dxfversion == "AC1024"
    assert document.header["$INSUNITS"] == 4
    lines = document.modelspace().query("LWPOLYLINE")
    assert [(line.dxf.layer, line.closed) for line in lines] == [("CUT", True)] * 3 + [("SCORE", False)]
    assert [bulge for *_, bulge in lines[0].get_points("xyb") if bulge] == [-1.0]
    texts = document.modelspace().query("TEXT")
    assert [text.dxf.text for text in texts] == ["R <b> 5 %"]


def test_writing_a_dxf_leaves_the_librarys_settings_alone(tmp_path):
    before = ezdxf.options.write_fixed_meta_data_for_testing
    write(drawing_piece(), tmp_path)
    assert ezdxf.options.write_fixed_meta_data_for_testing is before is False
