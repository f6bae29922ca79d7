"""From layouts to meshes: connected, true to area, the same every time, refused when it must be."""

from dataclasses import replace

import numpy as np
import pytest
import shapely
from fullwave_shapes import probe_patch, small_ground, thick_air, thin_air
from scipy.sparse import coo_matrix
from scipy.sparse.csgraph import connected_components

from core.design.defaults import default_design
from core.design.polarisation import Polarisation
from core.engines import LEVELS
from core.errors import ModelError
from core.fullwave.basis import build_basis
from core.fullwave.mesh import Level, build_mesh
from core.fullwave.mesh_model import Sheet
from core.fullwave.mesh_report import coarse_doubts, mesh_report
from core.layout.build import build_layout
from core.layout.model import Role
from core.lines.stack import Layer
from core.response.model import Reading, TrustLevel
from core.shapes.outline import polygon

DESIGNS = {
    "default": default_design(),
    "thin": thin_air(),
    "thick": thick_air(),
    "small": small_ground(),
    "left-hand": replace(
        thin_air(), brief=replace(thin_air().brief, polarisation=Polarisation.LHCP)
    ),
}
LAYOUTS = {name: build_layout(design) for name, design in DESIGNS.items()}
LAYOUTS["probe"] = probe_patch("air:1.5mm", 58e-3, 7e-3, 0.1)
CASES = [(name, level) for name in LAYOUTS for level in Level]


def areas(mesh):
    corners = mesh.vertices[mesh.triangles]
    sides = corners[:, 1:] - corners[:, :1]
    return np.linalg.norm(np.cross(sides[:, 0], sides[:, 1]), axis=1) / 2.0


@pytest.mark.parametrize(("name", "level"), CASES)
def test_all_copper_is_one_piece(name, level):
    mesh = build_mesh(LAYOUTS[name], level)
    basis = build_basis(mesh.vertices, mesh.triangles, mesh.sheet)
    t = basis.triangles
    links = coo_matrix((np.ones(basis.count), (basis.plus % t, basis.minus % t)), (t, t))
    assert connected_components(links, directed=False)[0] == 1


@pytest.mark.parametrize(("name", "level"), CASES)
def test_sheets_have_the_area_of_the_copper(name, level):
    layout = LAYOUTS[name]
    mesh = build_mesh(layout, level)
    top = shapely.union_all(
        [polygon(p.region) for p in layout.pieces if p.role is Role.TOP_COPPER], grid_size=1e-9
    )
    (ground,) = (p.region.exterior for p in layout.pieces if p.role is Role.GROUND_COPPER)
    plate = polygon(type(layout.pieces[0].region)(ground))
    # The probe's cross-section is cut out of both.
    pin = layout.ports[0].diameter ** 2
    assert areas(mesh)[mesh.sheet == Sheet.TOP].sum() == pytest.approx(top.area, abs=3 * pin)
    assert areas(mesh)[mesh.sheet == Sheet.GROUND].sum() == pytest.approx(plate.area, abs=pin)


def unknowns(mesh):
    return build_basis(mesh.vertices, mesh.triangles, mesh.sheet).count


def test_the_levels_are_those_that_the_program_offers():
    assert ("quick", *LEVELS) == tuple(level.value for level in Level)


def test_levels_have_the_sizes_they_promise():
    counts = {
        level: np.mean(
            [unknowns(build_mesh(LAYOUTS[name], level)) for name in ("thin", "thick", "small")]
        )
        for level in Level
    }
    assert 250 <= counts[Level.COARSE] <= 420
    assert 550 <= counts[Level.NORMAL] <= 750
    assert 950 <= counts[Level.FINE] <= 1250


def test_same_layout_gives_the_same_mesh():
    one, two = (build_mesh(LAYOUTS["thick"], Level.COARSE) for _ in range(2))
    np.testing.assert_array_equal(one.vertices, two.vertices)
    np.testing.assert_array_equal(one.triangles, two.triangles)


def test_probe_reaches_from_plate_to_strip():
    layout = LAYOUTS["thick"]
    mesh = build_mesh(layout, Level.NORMAL)
    heights = mesh.vertices[np.unique(mesh.triangles[mesh.sheet == Sheet.PROBE])][:, 2]
    assert (heights.min(), heights.max()) == (0.0, pytest.approx(layout.height))
    for sheet in (Sheet.GROUND, Sheet.TOP):
        shared = np.intersect1d(
            mesh.triangles[mesh.sheet == sheet], mesh.triangles[mesh.sheet == Sheet.PROBE]
        )
        assert len(shared) == 6


def test_probe_is_as_thick_as_the_pin():
    # A hexagon's logarithmic capacity is 0.920 of its circumradius (Pólya and Szegő 1951; the
    # figure from memory).
    layout = LAYOUTS["thick"]
    mesh = build_mesh(layout, Level.NORMAL)
    probe = mesh.vertices[np.unique(mesh.triangles[mesh.sheet == Sheet.PROBE])][:, :2]
    port = layout.ports[0]
    radius = np.linalg.norm(probe - (port.x, port.y), axis=1)
    assert 0.920 * radius == pytest.approx(np.full(len(radius), port.diameter / 2), rel=1e-3)


def test_port_is_the_clearance_in_the_ground():
    mesh = build_mesh(LAYOUTS["default"], Level.COARSE)
    assert mesh.port.outer == pytest.approx(2.05e-3)
    assert mesh.port.inner == pytest.approx(0.635e-3)


def report(mesh, frequency=2.45e9):
    layers = LAYOUTS["default"].stack
    corners = mesh.vertices[mesh.triangles]
    return mesh_report(corners, mesh.sheet, 1, Level.COARSE, (frequency, layers))


def test_the_report_counts_what_is_there_sheet_by_sheet():
    mesh = build_mesh(LAYOUTS["default"], Level.COARSE)
    sheets = {sheet.name: sheet for sheet in report(mesh).sheets}
    assert sheets.keys() == {"top copper", "probe", "ground plate"}
    assert sum(sheet.triangles for sheet in sheets.values()) == len(mesh.triangles)
    assert sheets["probe"].triangles == np.sum(mesh.sheet == Sheet.PROBE)
    assert all(0.0 < sheet.smallest_angle < np.pi / 3 for sheet in sheets.values())


def test_the_report_measures_a_triangle_that_is_known():
    """Sides 3, 4 and 5 cm; the smallest angle is atan(3/4)."""
    corners = np.array([[[0.0, 0, 0], [0.04, 0, 0], [0.04, 0.03, 0]]])
    layers = (Layer(5e-3, 1.44, 0.0),)
    found = mesh_report(corners, np.array([int(Sheet.TOP)]), 1, Level.COARSE, (1e9, layers))
    (sheet,) = found.sheets
    assert sheet.smallest_angle == pytest.approx(np.arctan(0.75))
    assert sheet.longest_edge == pytest.approx(0.05)
    assert sheet.longest_in_wavelengths == pytest.approx(0.05 / (0.299792458 / 1.2))


@pytest.mark.parametrize(
    ("band_top", "bands", "match"),
    [
        (2.7e9, None, None),
        (4.0e9, TrustLevel.ROUGH, None),
        (8.0e9, TrustLevel.UNKNOWN, None),
    ],
)
def test_a_mesh_too_coarse_for_the_band_is_said(band_top, bands, match):
    mesh = build_mesh(LAYOUTS["thin"], Level.COARSE)
    doubts = coarse_doubts(report(mesh, band_top), band_top, 2.45e9)
    levels = {reading: doubt.level for reading, doubt in doubts.items()}
    assert levels.get(Reading.BANDS) == bands
    assert levels.get(Reading.MATCH) == match


def test_a_mesh_too_coarse_for_the_frequency_spoils_every_reading():
    mesh = build_mesh(LAYOUTS["thin"], Level.COARSE)
    doubts = coarse_doubts(report(mesh, 8e9), 8e9, 7e9)
    assert {doubts[reading].level for reading in Reading} == {TrustLevel.UNKNOWN}
    assert "coarse mesh has edges of" in doubts[Reading.MATCH].reason


def test_edge_row_is_a_tenth_of_the_spacer():
    layout = probe_patch("air:10mm", 58e-3, 7e-3, 0.1)
    mesh = build_mesh(layout, Level.COARSE)
    top = mesh.vertices[np.unique(mesh.triangles[mesh.sheet == Sheet.TOP])][:, :2]
    from_edge = 29e-3 - np.abs(top).max(axis=1)
    row = from_edge[(from_edge > 1e-9) & (from_edge < 3e-3)]
    assert row == pytest.approx(np.full(len(row), 1e-3), rel=1e-6)
    assert len(row) >= 16


def moved_probe(layout, x):
    port = layout.ports[0]
    holes = tuple(replace(hole, x=x) if hole.x == port.x else hole for hole in layout.holes)
    return replace(layout, ports=(replace(port, x=x),), holes=holes)


def test_probe_beside_the_copper_is_refused():
    with pytest.raises(ModelError, match="does not meet the top copper"):
        build_mesh(moved_probe(LAYOUTS["probe"], 35e-3), Level.COARSE)


def test_probe_beyond_the_ground_is_refused():
    with pytest.raises(ModelError, match=r"does not meet the .* copper"):
        build_mesh(moved_probe(LAYOUTS["probe"], 60e-3), Level.COARSE)
