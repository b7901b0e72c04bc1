"""What do programs that share no code with the writers find in a file, and is it the sheet?

`read_dxf_gdal`, `read_dxf_node` and `read_svg` turn a file into a `Reading`; `compare_with_sheet`
lists everything in which a reading differs from a `Sheet`.
"""

from __future__ import annotations

import json
import math
import os
import re
import shutil
import subprocess
from collections.abc import Callable, Iterator
from pathlib import Path

import numpy as np
import pytest

from tests.readers.comparing import (
    ARC_STEP_DEG,
    Entity,
    Reading,
    arc,
    circle,
    compare,
    flat,
)

HERE = Path(__file__).parent


# --- the readers ---------------------------------------------------------------------------------


def skip_or_fail(reason: str) -> None:
    """Skip, or fail where nothing may be skipped."""
    if os.environ.get("STOPWRIGHT_NO_SKIPS") == "1":
        pytest.fail(reason)
    pytest.skip(reason)


def _read_dxf_gdal(path: Path) -> Reading:
    pyogrio = pytest.importorskip("pyogrio")
    shapely = pytest.importorskip("shapely")
    pyogrio.set_gdal_config_options({"OGR_ARC_STEPSIZE": ARC_STEP_DEG})
    meta, _, geometries, columns = pyogrio.raw.read(path)
    column = dict(zip(meta["fields"], columns, strict=True))
    entities, foreign = [], []
    for wkb, layer, classes in zip(geometries, column["Layer"], column["SubClasses"], strict=True):
        shape = shapely.from_wkb(bytes(wkb))
        old = classes is None  # release 12 has no classes, so this reader does not tell kinds
        kind = "path" if old else _GDAL_KINDS.get(classes.removeprefix("AcDbEntity:"))
        if kind is None or shape.geom_type != "LineString":
            foreign.append(f"{classes} {shape.geom_type}")
            continue
        points = np.zeros((shapely.get_num_coordinates(shape), 3))
        points[:, : 3 if shape.has_z else 2] = shapely.get_coordinates(
            shape, include_z=bool(shape.has_z)
        )
        if kind == "outline":
            # Where an arc ends, this reader may give its own last point and the vertex as well.
            kept = np.hypot(*np.diff(points[:, :2], axis=0).T) > 1e-10
            points = points[np.concatenate([kept, [True]])]
        if old and points[:, 2].any():
            kind = "floor"
        may_close = kind in {"outline", "circle"} or (kind == "path" and len(points) > 2)
        closed = may_close and bool((points[0] == points[-1]).all())
        vertices = tuple(map(tuple, points[:-1] if closed else points))
        chords = kind in {"arc", "circle"} or len(vertices) > (2 if kind == "path" else 60)
        entities.append(Entity(kind, layer, vertices, (0.0,) * len(vertices), closed, chords))
    return Reading(entities, foreign=foreign)


_GDAL_KINDS = {
    "AcDbLine": "line",
    "AcDbCircle": "circle",
    "AcDbCircle:AcDbArc": "arc",
    "AcDbPolyline": "outline",
    "AcDb3dPolyline": "floor",
}


def _read_dxf_node(path: Path) -> Reading:
    node = shutil.which("node")
    if node is None:
        skip_or_fail("node is not installed")
    if not (HERE / "node_modules" / "dxf-parser").is_dir():
        skip_or_fail("dxf-parser is not installed: npm ci --prefix tests/readers")
    said = subprocess.run(
        [str(node), str(HERE / "dxf_parser.cjs"), str(path)],
        capture_output=True, check=True, timeout=60,
    ).stdout  # fmt: skip
    drawing = json.loads(said)
    entities, foreign = [], []
    for raw in drawing["entities"]:
        entity = _from_node(raw)
        if entity is None or raw.get("extrusionDirection", {"z": 1})["z"] != 1:
            foreign.append(raw["type"])
        else:
            entities.append(entity)
    unit = {1: "in", 4: "mm", 6: "m"}.get(drawing["header"].get("$INSUNITS"), "unknown")
    if drawing["header"]["$ACADVER"] == "AC1009":
        unit = None  # release 12 has no unit
    return Reading(entities, layers=set(drawing["layers"]), unit=unit, foreign=foreign)


def _from_node(raw: dict) -> Entity | None:
    layer = raw["layer"]
    vertices = tuple((v["x"], v["y"], v.get("z", 0.0)) for v in raw.get("vertices", ()))
    bulges = tuple(v.get("bulge", 0.0) for v in raw.get("vertices", ()))
    match raw["type"]:
        case "LINE":
            return Entity("line", layer, vertices, bulges)
        case "LWPOLYLINE" | "POLYLINE" if not raw.get("is3dPolyline"):
            return Entity("outline", layer, vertices, bulges, bool(raw.get("shape")))
        case "POLYLINE" if raw.get("is3dPolyline"):
            return Entity("floor", layer, vertices, bulges, bool(raw.get("shape")))
        case "CIRCLE":
            return circle(layer, (raw["center"]["x"], raw["center"]["y"]), raw["radius"])
        case "ARC":
            centre = (raw["center"]["x"], raw["center"]["y"])
            return arc(layer, centre, raw["radius"], raw["startAngle"], raw["endAngle"])
    return None


def _read_svg(path: Path) -> Reading:
    svgelements = pytest.importorskip("svgelements")
    # At 25.4 pixels an inch svgelements gives millimetres, from the width and the viewBox.
    drawing = svgelements.SVG.parse(str(path), ppi=25.4)
    # Its millimetre is 5e-7 too long, by the digits of its inch: within that, the unit is mm.
    millimetre = drawing.width / drawing.viewbox.width
    unit = "mm" if math.isclose(millimetre, 1, rel_tol=1e-6) else f"{millimetre} mm"
    said = next(str(part) for part in drawing if type(part).__name__ == "Desc")
    left, top = map(
        float, re.search(r"(-?[\d.]+) mm from the left and (-?[\d.]+) mm", said).groups()
    )
    entities, foreign, layers = [], [], set()
    for group in drawing:
        if not isinstance(group, svgelements.Group):
            continue
        layers.add(group.id)
        for part in group:
            if isinstance(part, svgelements.Circle):
                x, y, radius = (float(n) / millimetre for n in (part.cx, part.cy, part.rx))
                entities.append(circle(group.id, (x - left, top - y), radius))
            elif isinstance(part, svgelements.Path):
                entities += _from_path(group.id, part, left, top, millimetre)
            else:
                foreign.append(type(part).__name__)
    return Reading(entities, layers=layers, unit=unit, foreign=foreign)


def _from_path(
    layer: str, path: object, left: float, top: float, millimetre: float
) -> Iterator[Entity]:
    for subpath in path.as_subpaths():
        points, bulges, closed = [], [], False
        for part in subpath:
            name = type(part).__name__
            if name == "Close":
                closed = True
                if math.dist(_xy(part.start), _xy(part.end)) < 1e-9:
                    points.pop()
                    bulges.pop()
                continue
            points.append((part.end.x / millimetre - left, top - part.end.y / millimetre))
            bulges.append(0.0)
            if name == "Arc":
                # y points up here, so the way round is the other one.
                bulges[-2] = math.tan(-part.sweep / 4)
            elif name not in {"Move", "Line"}:
                raise AssertionError(f"a {name} in a path")
        yield Entity("path", layer, flat(points), tuple(bulges), closed)


def _xy(point: object) -> tuple[float, float]:
    return point.x, point.y


# --- the fixtures --------------------------------------------------------------------------------


@pytest.fixture(scope="session")
def read_dxf_gdal() -> Callable[[Path], Reading]:
    return _read_dxf_gdal


@pytest.fixture(scope="session")
def read_dxf_node() -> Callable[[Path], Reading]:
    return _read_dxf_node


@pytest.fixture(scope="session")
def read_svg() -> Callable[[Path], Reading]:
    return _read_svg


@pytest.fixture(scope="session")
def compare_with_sheet() -> Callable[..., list[str]]:
    return compare
