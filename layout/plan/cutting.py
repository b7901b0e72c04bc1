"""Which slots are cut for each fret, and from where to where?"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from layout.errors import Fault, JobError
from layout.geometry.board import BoardShape, Edge
from layout.geometry.slots import run_slot
from layout.geometry.strings import StringLines
from layout.geometry.surface import Surface
from layout.instrument import Instrument
from layout.plan.laying import Laid
from layout.plan.model import Piece

Array = NDArray[np.float64]


def cut_pieces(
    instrument: Instrument, laid: Laid, board: BoardShape, surface: Surface
) -> tuple[Piece, ...]:
    """Cut every fret from edge to edge, or half-way past the strings a partial fret serves.

    Raises
    ------
    JobError
        When a fret runs off the board's end before it reaches an edge.

    """
    pieces: list[Piece] = []
    for fret in range(1, instrument.frets.count + 1):
        for first, last in _served_runs(instrument, laid, fret):
            treble = _end(instrument, laid, board, fret, string=first, toward=-1)
            bass = _end(instrument, laid, board, fret, string=last, toward=1)
            at_edge = (_meets_edge(board.treble, treble), _meets_edge(board.bass, bass))
            cut_treble, cut_bass = _run(instrument, fret, treble, bass, at_edge=at_edge)
            wire = float(surface.curve_length_mm(bass, treble))
            pieces.append(Piece(fret, treble, bass, cut_treble, cut_bass, wire))
    return tuple(pieces)


def cut_zero_fret(
    instrument: Instrument, laid: Laid, board: BoardShape, surface: Surface
) -> Piece | None:
    """Cut the zero fret on the nut line, where the job asks for one."""
    if instrument.nut.zero != "fret":
        return None
    treble, bass = (edge.crossing(laid.strings.nut_line) for edge in (board.treble, board.bass))
    assert treble is not None
    assert bass is not None
    cut_treble, cut_bass = _run(instrument, 0, treble, bass, at_edge=(True, True))
    wire = float(surface.curve_length_mm(bass, treble))
    return Piece(0, treble, bass, cut_treble, cut_bass, wire)


def _run(
    instrument: Instrument, fret: int, treble: Array, bass: Array, *, at_edge: tuple[bool, bool]
) -> tuple[Array, Array]:
    try:
        return run_slot(instrument.slots, treble, bass, at_edge=at_edge)
    except ValueError as error:
        short = f"{instrument.slots.short_of_edge_mm:g} mm"
        rule = f"the blind slot of fret {fret} has no length left"
        fault = Fault("job", None, "slots.short_of_edge", short, rule, "end it nearer the edges")
        raise JobError([fault]) from error


def _meets_edge(edge: Edge, end: Array) -> bool:
    """Whether a piece's end lies on a finished edge rather than between two strings."""
    return abs(edge.y_at(float(end[0])) - float(end[1])) < 1e-6


def _served_runs(instrument: Instrument, laid: Laid, fret: int) -> list[tuple[int, int]]:
    """First and last string of every run of neighbours one piece lies under.

    A full fret is one run over the whole board, strings that start further on included.
    """
    fretted = [i for i, string in enumerate(instrument.strings) if string.fretted]
    if fret not in instrument.frets.only:
        return [(fretted[0], fretted[-1])]
    runs: list[tuple[int, int]] = []
    for index in fretted:
        if not laid.served[index, fret - 1]:
            continue
        if runs and runs[-1][1] == index - 1:
            runs[-1] = (runs[-1][0], index)
        else:
            runs.append((index, index))
    return runs


def _end(
    instrument: Instrument, laid: Laid, board: BoardShape, fret: int, *, string: int, toward: int
) -> Array:
    """Where one end of a piece lies: on the finished edge, or half-way to the next string."""
    line = laid.frets.line(fret)
    neighbour = string + toward
    if _runs_at(instrument, neighbour, fret):
        points = _met_points(laid.strings, [string, neighbour], laid, fret)
        y = float(points[:, 1].mean())
        return np.array([float(line.x_at(y)), y])
    edge = board.treble if toward < 0 else board.bass
    point = edge.crossing(line)
    if point is None:
        side = "treble" if toward < 0 else "bass"
        raise JobError(
            [
                Fault(
                    "job",
                    None,
                    "board.past_last_fret",
                    None,
                    f"fret {fret} runs off the end of the board before it meets the {side} edge",
                    "make the board longer, or end it along the last fret",
                )
            ]
        )
    return point


def _runs_at(instrument: Instrument, index: int, fret: int) -> bool:
    """Whether there is such a string, and it has begun where this fret lies."""
    if not 0 <= index < len(instrument.strings):
        return False
    string = instrument.strings[index]
    return string.fretted and (string.starts_at is None or string.starts_at.fret <= fret)


def _met_points(strings: StringLines, chosen: list[int], laid: Laid, fret: int) -> Array:
    line = laid.frets.line(fret)
    start, way = strings.nut_mm[chosen], strings.direction[chosen]
    return np.asarray(start + line.distance_along(start, way)[:, None] * way)
