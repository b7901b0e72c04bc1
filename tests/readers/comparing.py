"""Is what a reader found in a file the sheet that was meant?

Geometry here is written out afresh: it uses nothing of ``layout`` but the shapes themselves.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field, replace

import numpy as np

from layout.drawing.shapes import Arc, Circle, Lettering, Line, Outline, Polyline3D
from layout.drawing.sheet import Sheet

ARC_STEP_DEG = 0.1
"""GDAL turns arcs into chords of this angle; their middles lie r (1 - cos(step/2)) inside."""
JOINT_MM = 1e-9
"""Ends nearer than this are one point to a reader that chains loose ends."""
CHORD_SHARE = 1 - math.cos(math.radians(ARC_STEP_DEG) / 2)


@dataclass(frozen=True)
class Entity:
    """One thing drawn: vertices (x, y, z), the bulge of the edge that leaves each, closed or not.

    `kind` is line, arc, circle, outline or floor, or `path` where the reader does not tell.
    `chords`: the reader has turned arcs into chords.
    """

    kind: str
    layer: str
    vertices: tuple[tuple[float, float, float], ...]
    bulges: tuple[float, ...]
    closed: bool = False
    chords: bool = False

    @property
    def edges(self) -> list[tuple[np.ndarray, np.ndarray, float]]:
        points = [np.array(vertex[:2]) for vertex in self.vertices]
        ends = points[1:] + (points[:1] if self.closed else [])
        return list(zip(points, ends, self.bulges, strict=False))

    @property
    def where(self) -> str:
        x, y = self.vertices[0][:2]
        return f"{self.layer} {self.kind} at ({x:.4f}, {y:.4f})"


@dataclass(frozen=True)
class Reading:
    """What a reader found: entities; layers listed, unit and other kinds where it tells them."""

    entities: list[Entity]
    layers: set[str] | None = None
    unit: str | None = None
    foreign: list[str] = field(default_factory=list)


# --- what a sheet should read like -------------------------------------------------------------


def expected_entities(sheet: Sheet, names: dict[str, str] | None = None) -> list[Entity]:
    """Write down a sheet's shapes as entities."""
    named = names or {}
    return [
        entity
        for shape in sheet.shapes
        for entity in _expected(shape, named.get(shape.layer, shape.layer))
    ]


def _expected(shape: object, layer: str) -> Iterator[Entity]:
    match shape:
        case Line():
            yield Entity("line", layer, flat([shape.start, shape.end]), (0.0, 0.0))
        case Circle():
            yield circle(layer, shape.centre, shape.radius_mm)
        case Arc():
            yield arc(layer, shape.centre, shape.radius_mm, shape.start_angle, shape.end_angle)
        case Outline():
            bulges = shape.bulges or (0.0,) * len(shape.vertices)
            yield Entity("outline", layer, flat(shape.vertices), bulges, shape.closed)
        case Polyline3D():
            yield Entity("floor", layer, shape.vertices, (0.0,) * len(shape.vertices))
        case Lettering():
            for stroke in shape.strokes:
                yield from _expected(stroke, layer)


def flat(points: Iterable[tuple[float, float]]) -> tuple[tuple[float, float, float], ...]:
    return tuple((float(x), float(y), 0.0) for x, y in points)


def circle(layer: str, centre: tuple[float, float], radius: float) -> Entity:
    x, y = centre
    return Entity("circle", layer, flat([(x + radius, y), (x - radius, y)]), (1.0, 1.0), True)


def arc(layer: str, centre: tuple[float, float], radius: float, start: float, end: float) -> Entity:
    ends = [
        (centre[0] + radius * math.cos(angle), centre[1] + radius * math.sin(angle))
        for angle in (start, end)
    ]
    return Entity("arc", layer, flat(ends), (math.tan((end - start) % math.tau / 4), 0.0))


# --- distances -----------------------------------------------------------------------------------


def _distances(points: np.ndarray, entity: Entity) -> np.ndarray:
    """Distance of every point, shape (n, 2), from the nearest edge of an entity."""
    nearest = np.full(len(points), np.inf)
    straight = [(start, end) for start, end, bulge in entity.edges if bulge == 0]
    if straight:
        starts, ends = (np.array(side) for side in zip(*straight, strict=True))
        way = ends - starts
        square = np.maximum((way**2).sum(axis=1), 1e-300)
        for place in range(0, len(points), 64):  # as many as fit in memory at a time
            gaps = points[place : place + 64, None] - starts
            share = np.clip((gaps * way).sum(axis=2) / square, 0, 1)
            off = gaps - share[:, :, None] * way
            nearest[place : place + 64] = np.sqrt((off**2).sum(axis=2)).min(axis=1)
    for start, end, bulge in entity.edges:
        if bulge:
            nearest = np.minimum(nearest, _from_arc(points, start, end, bulge))
    return nearest


def _arc_frame(start: np.ndarray, end: np.ndarray, bulge: float) -> tuple[np.ndarray, float]:
    """Centre and radius from the sagitta, bulge times half the chord."""
    half = math.dist(start, end) / 2
    sagitta = abs(bulge) * half
    radius = (half**2 + sagitta**2) / (2 * sagitta)
    along = (end - start) / (2 * half)
    right = np.array([along[1], -along[0]]) * math.copysign(1, bulge)
    top = (start + end) / 2 + right * sagitta
    return top - right * radius, radius


def _from_arc(points: np.ndarray, start: np.ndarray, end: np.ndarray, bulge: float) -> np.ndarray:
    centre, radius = _arc_frame(start, end, bulge)
    first = math.atan2(*(start - centre)[::-1])
    sweep = 4 * math.atan(bulge)
    angle = np.arctan2(points[:, 1] - centre[1], points[:, 0] - centre[0])
    turned = ((angle - first) * math.copysign(1, sweep)) % math.tau
    on_circle = np.abs(np.hypot(*(points - centre).T) - radius)
    to_ends = np.minimum(np.hypot(*(points - start).T), np.hypot(*(points - end).T))
    return np.where(turned <= abs(sweep), on_circle, to_ends)


def _middles(entity: Entity) -> tuple[np.ndarray, float]:
    """Middle of every edge, and the largest radius among them."""
    points, largest = [], 0.0
    for start, end, bulge in entity.edges:
        middle = (start + end) / 2
        if bulge:
            way = end - start
            middle = middle + np.array([way[1], -way[0]]) / 2 * bulge
            largest = max(largest, _arc_frame(start, end, bulge)[1])
        points.append(middle)
    return np.array(points), largest


def deviation_mm(expected: Entity, found: Entity, chord_mm: float = 0.0) -> float:
    """The largest distance between what should be there and what is, both ways.

    `chord_mm`: how far the file's own chords may lie from an arc; their ends may not.
    """
    mine, theirs = np.array(expected.vertices), np.array(found.vertices)
    if expected.kind == "floor" and found.kind == "floor":
        return float(np.abs(mine - theirs).max()) if mine.shape == theirs.shape else math.inf
    off = float(_distances(theirs[:, :2], expected).max())
    off = max(off, float(np.abs(theirs[:, 2]).max()) if found.kind != "floor" else 0.0)
    if expected.kind != "circle":
        gaps = np.hypot(*(mine[:, None, :2] - theirs[None, :, :2]).transpose(2, 0, 1))
        off = max(off, float(gaps.min(axis=1).max()))
    middles, radius = _middles(expected)
    allowed = _sagitta_mm(theirs, radius) if found.chords and radius else 0.0
    if radius and chord_mm:
        allowed = max(allowed, chord_mm)
        between, _ = _middles(found)
        off = max(off, float(_distances(between, expected).max()) - chord_mm)
    return max(off, float(_distances(middles, found).max()) - allowed)


def _sagitta_mm(chords: np.ndarray, radius: float) -> float:
    """How far a reader's own chords of at most a degree may lie from the arc they stand for."""
    lengths = np.hypot(*np.diff(chords[:, :2], axis=0).T)
    short = lengths[lengths < radius * np.pi / 180]
    return float(short.max(initial=0.0) ** 2 / (8 * radius) * 1.01)


# --- the comparison ------------------------------------------------------------------------------


def compare(
    sheet: Sheet,
    reading: Reading,
    tolerance_mm: float,
    names: dict[str, str] | None = None,
    arcs: str = "bulge",
) -> list[str]:
    """Say everything in which a reading differs from the sheet; empty when nothing does.

    `arcs`: with `pieces`, loose lines and arcs are chained first, on layers with round outlines;
    with `chords`, everything round but holes may be straight pieces within 0.002 mm.
    """
    expected = expected_entities(sheet, names)
    if arcs == "pieces":
        bent = {entity.layer for entity in expected if entity.kind == "outline" if _bends(entity)}
        reading = replace(reading, entities=chain_loose_ends(reading.entities, bent))
    chord_mm = 0.002 if arcs == "chords" else 0.0
    if chord_mm:
        expected = [replace(e, kind="outline") if e.kind == "arc" else e for e in expected]
    problems = [f"foreign entity {kind}" for kind in reading.foreign]
    if reading.unit not in {None, "mm"}:
        problems.append(f"unit is {reading.unit}, not mm")
    layers = {entity.layer for entity in expected}
    if reading.layers is not None and reading.layers - {"0"} != layers:
        problems.append(f"layers {sorted(reading.layers)}, not {sorted(layers)}")
    pairs, missing, extra = _pair_up(expected, reading.entities, tolerance_mm)
    problems += [f"missing: {entity.where}" for entity in missing]
    problems += [f"extra: {entity.where}" for entity in extra]
    for mine, found in pairs:
        off = deviation_mm(mine, found, chord_mm if mine.kind != "circle" else 0.0)
        if not off <= tolerance_mm:
            problems.append(f"{mine.where}: off by {off:.6g} mm")
        if found.kind not in {mine.kind, "path"}:
            problems.append(f"{mine.where}: is a {found.kind}")
        if mine.closed != found.closed:
            problems.append(f"{mine.where}: {'open' if mine.closed else 'closed'}")
    return problems + doubled(reading.entities) + degenerate(reading.entities)


def _bends(entity: Entity) -> bool:
    return any(entity.bulges)


def chain_loose_ends(entities: list[Entity], layers: set[str]) -> list[Entity]:
    """Join open pieces of one layer whose ends lie within 1e-9 mm, as a cutter's program does."""
    whole = [e for e in entities if e.closed or e.layer not in layers or e.kind == "floor"]
    loose = [e for e in entities if not (e.closed or e.layer not in layers or e.kind == "floor")]
    while loose:
        chain = loose.pop(0)
        for _ in range(2):  # onward from its end, then onward from its start
            while (found := _take_next(chain, loose)) is not None:
                chain = Entity(
                    "path",
                    chain.layer,
                    chain.vertices[:-1] + found.vertices,
                    chain.bulges[: len(chain.vertices) - 1] + found.bulges,
                    chords=chain.chords or found.chords,
                )
            chain = _back(chain)
        if len(chain.vertices) > 2 and _joined(chain.vertices[-1], chain.vertices[0]):
            ends = {"vertices": chain.vertices[:-1], "bulges": chain.bulges[:-1]}
            chain = replace(chain, closed=True, **ends)
        whole.append(chain)
    return whole


def _take_next(chain: Entity, loose: list[Entity]) -> Entity | None:
    """Take the piece that goes on where a chain ends, unless it is closed there."""
    if len(chain.vertices) > 2 and _joined(chain.vertices[-1], chain.vertices[0]):
        return None
    for place, other in enumerate(loose):
        for turned in (other, _back(other)):
            if other.layer == chain.layer and _joined(chain.vertices[-1], turned.vertices[0]):
                del loose[place]
                return turned
    return None


def _joined(one: tuple[float, ...], other: tuple[float, ...]) -> bool:
    return math.dist(one, other) <= JOINT_MM


def _back(entity: Entity) -> Entity:
    edges = len(entity.vertices) - 1
    bulges = tuple(-bulge for bulge in entity.bulges[:edges][::-1])
    return replace(entity, vertices=entity.vertices[::-1], bulges=(*bulges, 0.0))


def _pair_up(
    expected: list[Entity], found: list[Entity], tolerance_mm: float
) -> tuple[list[tuple[Entity, Entity]], list[Entity], list[Entity]]:
    """Pair entities of one layer by their boxes: those that agree first, then the nearest."""
    pairs, waiting, free = [], expected, list(range(len(found)))
    boxes = np.array([_box(entity) for entity in found]).reshape(-1, 4)
    for limit in (10 * tolerance_mm, math.inf):
        todo, waiting = waiting, []
        for mine in todo:
            rivals = [i for i in free if found[i].layer == mine.layer]
            gaps = np.abs(boxes[rivals] - _box(mine)).max(axis=1) if rivals else np.array([])
            if rivals and gaps.min() <= limit + _middles(mine)[1] * CHORD_SHARE:
                best = rivals[int(gaps.argmin())]
                free.remove(best)
                pairs.append((mine, found[best]))
            else:
                waiting.append(mine)
    return pairs, waiting, [found[i] for i in free]


def _box(entity: Entity) -> np.ndarray:
    points = np.array([vertex[:2] for vertex in entity.vertices])
    if not entity.chords:
        points = np.concatenate([points, *(_samples(*edge) for edge in entity.edges)])
    return np.concatenate([points.min(axis=0), points.max(axis=0)])


def _samples(start: np.ndarray, end: np.ndarray, bulge: float) -> np.ndarray:
    """Points along an arc where it crosses its own quarters."""
    if not bulge:
        return np.array([start])
    centre, radius = _arc_frame(start, end, bulge)
    corners = centre + radius * np.array([(1, 0), (0, 1), (-1, 0), (0, -1)])
    return np.concatenate([[start], corners[_from_arc(corners, start, end, bulge) < 1e-9]])


def doubled(entities: list[Entity], tolerance_mm: float = 1e-5) -> list[str]:
    """Name straight edges that share a stretch, and arcs that are there twice."""
    straight, curved, problems = [], [], []
    for entity in entities:
        if entity.chords or entity.kind == "floor":
            continue
        for start, end, bulge in entity.edges:
            (curved if bulge else straight).append((start, end, bulge, entity))
    if straight:
        start = np.array([edge[0] for edge in straight])
        way = np.array([edge[1] for edge in straight]) - start
        length = np.maximum(np.hypot(*way.T), 1e-300)
        unit = way / length[:, None]
        low = np.minimum(start, start + way) - tolerance_mm
        high = np.maximum(start, start + way) + tolerance_mm
        for i, (from_i, to_i, _, entity) in enumerate(straight):
            # Distance of edge i's ends from the line of every longer edge, and its shadow on it.
            longer = (length > length[i]) | ((length == length[i]) & (np.arange(len(way)) > i))
            near = (low[:, 0] <= high[i, 0]) & (high[:, 0] >= low[i, 0])
            near &= (low[:, 1] <= high[i, 1]) & (high[:, 1] >= low[i, 1])
            rivals = np.flatnonzero(longer & near)
            off, along = [], []
            for point in (from_i, to_i):
                gap = point - start[rivals]
                off.append(np.abs(gap[:, 0] * unit[rivals, 1] - gap[:, 1] * unit[rivals, 0]))
                along.append((gap * unit[rivals]).sum(axis=1))
            ahead, behind = np.maximum(*along), np.minimum(*along)
            shared = np.minimum(ahead, length[rivals]) - np.maximum(behind, 0)
            hits = (np.maximum(*off) < tolerance_mm) & (shared > tolerance_mm)
            problems += [
                f"drawn twice: {entity.where} and {straight[j][3].where}" for j in rivals[hits]
            ]
    marks: dict[tuple[float, ...], Entity] = {}
    for start, end, bulge, entity in curved:
        way = end - start
        middle = (start + end) / 2 + np.array([way[1], -way[0]]) / 2 * bulge
        ends = sorted((tuple(np.round(start, 4)), tuple(np.round(end, 4))))
        mark = (*ends[0], *ends[1], *np.round(middle, 4))
        if mark in marks:
            problems.append(f"drawn twice: {entity.where} and {marks[mark].where}")
        marks[mark] = entity
    return problems


def degenerate(entities: list[Entity]) -> list[str]:
    """Name edges without length, and closed chains that repeat their first vertex."""
    return [
        f"an edge without length: {entity.where}"
        for entity in entities
        if entity.kind != "floor"
        and not entity.chords
        and any(math.dist(start, end) < 1e-9 for start, end, _ in entity.edges)
    ]
