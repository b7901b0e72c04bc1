"""How much fretwire does the board take, and how are the sticks best cut up?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from layout.plan.model import Plan


@dataclass(frozen=True, slots=True)
class WirePiece:
    """One piece of wire: its fret, the crown's length and the tang's, both over the curve."""

    fret: int
    crown_mm: float
    tang_mm: float
    cut_mm: float


@dataclass(frozen=True, slots=True)
class Stick:
    """One stick of wire and the pieces cut from it, longest first."""

    pieces: tuple[WirePiece, ...]
    left_mm: float


@dataclass(frozen=True, slots=True)
class WireList:
    """Every piece in order, their sum, and the sticks where a stick's length is given."""

    pieces: tuple[WirePiece, ...]
    total_mm: float
    sticks: tuple[Stick, ...] = ()
    too_long: tuple[int, ...] = ()


def list_wire(plan: Plan) -> WireList:
    """List the wire of every fret, with ``wire.over`` at either end of each piece.

    With binding the tang is cut back to the wood and the crown runs on over the binding.
    """
    wire = plan.instrument.wire
    over = wire.over_mm or 0.0
    binding = plan.instrument.board.binding_mm
    cut = plan.pieces if plan.zero_fret is None else (plan.zero_fret, *plan.pieces)
    pieces = []
    for piece in cut:
        line = plan.strings.nut_line if piece.fret == 0 else plan.frets.line(piece.fret)
        short = 2 * binding * (1 + line.slope**2) ** 0.5
        pieces.append(
            WirePiece(piece.fret, piece.wire_mm, piece.wire_mm - short, piece.wire_mm + 2 * over)
        )
    total = sum(piece.cut_mm for piece in pieces)
    if wire.stick_mm is None:
        return WireList(tuple(pieces), total)
    too_long = tuple(piece.fret for piece in pieces if piece.cut_mm > wire.stick_mm)
    fitting = [piece for piece in pieces if piece.cut_mm <= wire.stick_mm]
    return WireList(tuple(pieces), total, cut_sticks(fitting, wire.stick_mm), too_long)


def cut_sticks(pieces: Sequence[WirePiece], stick_mm: float) -> tuple[Stick, ...]:
    """Cut pieces from sticks, each from the first stick with room, longest pieces first.

    First fit decreasing never takes more than 11/9 of the fewest sticks, and one (Johnson 1973).
    """
    sticks: list[list[WirePiece]] = []
    room: list[float] = []
    for piece in sorted(pieces, key=lambda each: (-each.cut_mm, each.fret)):
        for index, left in enumerate(room):
            if piece.cut_mm <= left + 1e-9:
                sticks[index].append(piece)
                room[index] = left - piece.cut_mm
                break
        else:
            sticks.append([piece])
            room.append(stick_mm - piece.cut_mm)
    return tuple(Stick(tuple(chosen), left) for chosen, left in zip(sticks, room, strict=True))
