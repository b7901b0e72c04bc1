"""Every drawing that ``cut`` writes for every example, read back and compared with its sheet."""

from __future__ import annotations

from pathlib import Path

import pytest

from layout.api import draw_sheets, make_plan, read_job
from layout.files.dxf import render_dxf
from layout.files.svg import render_svg

EXAMPLES = sorted((Path(__file__).parents[2] / "examples").glob("*.yaml"))
DXF_MM, SVG_MM = 1e-6, 1e-4


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_every_sheet_is_read_back(
    path, read_dxf_gdal, read_svg, compare_with_sheet, tmp_path
) -> None:
    sheets = draw_sheets(make_plan(read_job(path)))
    assert {"board", "nut-saddle"} <= {sheet.name for sheet in sheets}
    for sheet in sheets:
        dxf, svg = tmp_path / f"{sheet.name}.dxf", tmp_path / f"{sheet.name}.svg"
        dxf.write_bytes(render_dxf(sheet))
        assert compare_with_sheet(sheet, read_dxf_gdal(dxf), DXF_MM) == [], sheet.name
        if sheet.name != "floors":
            svg.write_bytes(render_svg(sheet))
            assert compare_with_sheet(sheet, read_svg(svg), SVG_MM) == [], sheet.name


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_every_sheet_is_read_by_the_other_dxf_reader_in_both_versions(
    path, read_dxf_gdal, read_dxf_node, compare_with_sheet, tmp_path
) -> None:
    for sheet in draw_sheets(make_plan(read_job(path))):
        new, old = tmp_path / f"{sheet.name}.dxf", tmp_path / f"{sheet.name}-mm.dxf"
        new.write_bytes(render_dxf(sheet))
        old.write_bytes(render_dxf(sheet, version="r12"))
        assert compare_with_sheet(sheet, read_dxf_node(new), DXF_MM) == [], sheet.name
        assert compare_with_sheet(sheet, read_dxf_gdal(old), DXF_MM) == [], sheet.name
