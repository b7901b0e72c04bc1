"""How do the errors at the balanced stops answer when nut and saddle move?

An error of a string depends on that string's own nut shift n and setback s alone, so two
derivatives a stop, by central differences, give the answer to any rule that shares figures.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from layout.errors import NoSolutionError
from layout.strings.bowl import Linearised
from layout.strings.lie import StringLie
from layout.strings.moves import Freedom, Mask
from layout.strings.stopping import StringBody, predict_stops
from layout.strings.strip_limit import Placed

Array = NDArray[np.float64]

SLOPE_STEP_MM = 5e-3
"""Central differences: wrong by some 1e-9 cent/mm from rounding and as much from curvature."""


@dataclass(frozen=True, slots=True)
class Balance:
    """What is to sound right; every array of shape (S, F).

    Attributes
    ----------
    stops_mm
        The divided places from each string's nut line; nan: no such stop.
    target_cents
        Above the open string; nan where there is no target.
    weights
        How much the squared error of a stop counts, 0 or more; 0: not balanced.

    """

    stops_mm: Array
    target_cents: Array
    weights: Array

    def __post_init__(self) -> None:
        if np.ndim(self.stops_mm) != 2 or not (
            np.shape(self.stops_mm) == np.shape(self.target_cents) == np.shape(self.weights)
        ):
            raise ValueError("stops, targets and weights must have one shape (strings, frets)")
        if not (np.isfinite(self.weights).all() and np.min(self.weights, initial=0.0) >= 0):
            raise ValueError("a weight must be finite and not negative")

    @property
    def fretted(self) -> Mask:
        """Which strings have a stop, shape (S,)."""
        return np.asarray(np.isfinite(self.stops_mm).any(axis=1))

    @property
    def counted(self) -> Array:
        """Weights, 0 wherever there is no stop or no target."""
        there = np.isfinite(self.stops_mm) & np.isfinite(self.target_cents)
        return np.where(there, self.weights, 0.0)


@dataclass(frozen=True, slots=True)
class EndLines:
    """Where the strings meet the theoretical lines, in plan.

    Attributes
    ----------
    nut_mm, bridge_mm
        Shape (S, 2).
    course
        Shape (S,): strings of one course share a number.
    own_nut
        Shape (S,): short strings, whose nut is not on the shared nut line. A ``straight`` nut
        leaves each of them a figure of its own.

    """

    nut_mm: Array
    bridge_mm: Array
    course: NDArray[np.int_]
    own_nut: Mask

    @property
    def direction(self) -> Array:
        """Unit vectors from nut to bridge, shape (S, 2)."""
        run_mm = self.bridge_mm - self.nut_mm
        return np.asarray(run_mm / np.linalg.norm(run_mm, axis=1, keepdims=True))


@dataclass(frozen=True, slots=True)
class Misfit:
    """What is left over the balanced stops, in cents, sharp positive.

    ``string_index`` and ``fret_index`` say where the worst is; None where nothing is balanced.
    """

    rms_cents: float
    worst_cents: float
    string_index: int | None
    fret_index: int | None


def measure_misfit(error_cents: Array, weights: Array) -> Misfit:
    """Measure weighted rms and worst of errors in cents, over stops of weight above 0.

    Parameters
    ----------
    error_cents, weights
        Shape (S, F); stops whose error is nan do not count.

    Examples
    --------
    >>> measure_misfit(np.array([[3.0, -4.0, 9.0]]), np.array([[1.0, 1.0, 0.0]])).worst_cents
    -4.0

    """
    counted = np.where(np.isfinite(error_cents), weights, 0.0)
    total = float(counted.sum())
    if total == 0:
        return Misfit(0.0, 0.0, None, None)
    errors = np.where(counted > 0, error_cents, 0.0)
    string, fret = np.unravel_index(int(np.argmax(np.abs(errors))), errors.shape)
    rms = float(np.sqrt((counted * errors**2).sum() / total))
    return Misfit(rms, float(errors[string, fret]), int(string), int(fret))


@dataclass(frozen=True, slots=True)
class Response:
    """Errors of a set of strings under two rules, as functions of the rules' unknowns.

    The unknowns, shape (K,), are those of the nut followed by those of the saddle. ``told``,
    shape (S, R), are patterns over the strings of a single fret, as `one_fret` explains; then
    only what the errors have of each pattern is squared.
    """

    body: StringBody
    lie: StringLie
    balance: Balance
    ends: EndLines
    nut: Freedom
    saddle: Freedom
    told: Array | None = None

    @property
    def count(self) -> int:
        """Number of unknowns K."""
        return self.nut.count + self.saddle.count

    def figures_mm(self, unknowns: Array) -> tuple[Array, Array]:
        """Give nut shifts and setbacks, shape (S,) each, in mm."""
        at_nut, at_saddle = np.split(unknowns, [self.nut.count])
        return self.nut.figures_mm(at_nut), self.saddle.figures_mm(at_saddle)

    def error_cents(self, unknowns: Array) -> Array:
        """Predict the error of every stop, shape (S, F), in cents; nan where there is none."""
        shift_mm, setback_mm = self.figures_mm(unknowns)
        stopped = predict_stops(
            self.body,
            self.lie,
            self.balance.stops_mm,
            nut_shift_mm=shift_mm,
            setback_mm=setback_mm,
        )
        return np.asarray(stopped.cents - self.balance.target_cents)

    def linearise(self, unknowns: Array) -> Linearised:
        """Give weighted squares and moves, and how they answer to the unknowns.

        Where strings cannot be stopped or tuned the sum is infinite.
        """
        by_nut, by_saddle = self.figure_slopes(unknowns)
        moves, move_slopes = self._moves(unknowns, by_nut, by_saddle)
        try:
            error, on_nut, on_saddle = self.weighted_errors(*self.figures_mm(unknowns))
        except (NoSolutionError, ValueError):
            return Linearised(np.inf, np.zeros(0), np.zeros((0, self.count)), moves, move_slopes)
        total = float((error**2).sum())
        residuals, slopes = _turned(error, on_nut, on_saddle, by_nut=by_nut, by_saddle=by_saddle)
        if self.told is not None:
            residuals = self.told.T @ error.sum(axis=1)
            on_all = (
                on_nut.sum(axis=1)[:, None] * by_nut + on_saddle.sum(axis=1)[:, None] * by_saddle
            )
            slopes = self.told.T @ on_all
            total = float(residuals @ residuals)
        return Linearised(total, residuals, slopes, moves, move_slopes)

    def continue_linearly(self, found: Linearised, there: Array, unknowns: Array) -> Linearised:
        """Give squares and moves at any unknowns as if errors were linear from ``there``."""
        residuals = found.residuals + found.slopes @ (unknowns - there)
        moves, move_slopes = self._moves(unknowns, *self.figure_slopes(unknowns))
        total = found.sum_of_squares + float(
            residuals @ residuals - found.residuals @ found.residuals
        )
        return Linearised(total, residuals, found.slopes, moves, move_slopes)

    def place(self, unknowns: Array) -> Placed:
        """Give the saddle points of the fretted strings in plan, and how they answer, in mm."""
        fretted = self.balance.fretted
        direction = self.ends.direction[fretted]
        setback_mm = self.figures_mm(unknowns)[1][fretted]
        points_mm = self.ends.bridge_mm[fretted] + setback_mm[:, None] * direction
        by_saddle = self.figure_slopes(unknowns)[1][fretted]
        return Placed(points_mm, direction[:, :, None] * by_saddle[:, None, :])

    def figure_slopes(self, unknowns: Array) -> tuple[Array, Array]:
        """Give the derivatives of nut shifts and of setbacks by all unknowns, shape (S, K) each."""
        at_nut, at_saddle = np.split(unknowns, [self.nut.count])
        return (
            np.pad(self.nut.slopes(at_nut), ((0, 0), (0, self.saddle.count))),
            np.pad(self.saddle.slopes(at_saddle), ((0, 0), (self.nut.count, 0))),
        )

    def _moves(self, unknowns: Array, by_nut: Array, by_saddle: Array) -> tuple[Array, Array]:
        return np.concatenate(self.figures_mm(unknowns)), np.vstack([by_nut, by_saddle])

    def weighted_errors(self, shift_mm: Array, setback_mm: Array) -> tuple[Array, Array, Array]:
        """Give errors (cents) and their derivatives by n and by s (cents/mm), (S, F) each.

        All times the square root of the weight; 0 where a stop is not balanced.
        """
        step = SLOPE_STEP_MM
        asked = np.array([[0.0, 0.0], [step, 0.0], [-step, 0.0], [0.0, step], [0.0, -step]])
        cents = predict_stops(
            self.body,
            self.lie,
            self.balance.stops_mm,
            nut_shift_mm=shift_mm + asked[:, :1],
            setback_mm=setback_mm + asked[:, 1:],
        ).cents
        counted = self.balance.counted
        root = np.sqrt(counted)
        balanced = counted > 0
        error, on_nut, on_saddle = (
            np.where(balanced, values * root, 0.0)
            for values in (
                cents[0] - self.balance.target_cents,
                (cents[1] - cents[2]) / (2 * step),
                (cents[3] - cents[4]) / (2 * step),
            )
        )
        return error, on_nut, on_saddle


def _turned(
    error: Array, on_nut: Array, on_saddle: Array, *, by_nut: Array, by_saddle: Array
) -> tuple[Array, Array]:
    """Give residuals (2S,) and slopes (2S, K) that stand for all stops.

    Each string's errors are turned (QR) so that two figures carry all that its n and s can
    change; the rest of the sum is the same for small steps.
    """
    orthogonal, triangle = np.linalg.qr(np.stack([on_nut, on_saddle], axis=-1))
    turned = np.einsum("sfr,sf->sr", orthogonal, error)
    slopes = triangle[:, :, :1] * by_nut[:, None, :] + triangle[:, :, 1:] * by_saddle[:, None, :]
    return turned.ravel(), slopes.reshape(turned.size, by_nut.shape[1])
