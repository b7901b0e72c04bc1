"""The saddle within its thickness again: a general program from many slants, and multipliers."""

import numpy as np
import pytest
from scipy.optimize import minimize, nnls

from layout.strings.compensation import solve_compensation
from layout.strings.stopping import predict_stops

STRIP_MM = 0.8
STEP_MM = 5e-3


def directions(ends):
    run = ends.bridge_mm - ends.nut_mm
    return run / np.hypot(*run.T)[:, None]


def error_cents(case, figures):
    shift, setback = np.split(figures, 2)
    stopped = predict_stops(
        case.body, case.lie, case.balance.stops_mm, nut_shift_mm=shift, setback_mm=setback
    )
    return stopped.cents - case.balance.target_cents


def total(case, figures):
    return float((case.balance.weights * error_cents(case, figures) ** 2).sum())


def slopes(case, figures):
    steps = np.eye(len(figures)) * STEP_MM
    return np.array(
        [
            (error_cents(case, figures + h) - error_cents(case, figures - h)) / (2 * STEP_MM)
            for h in steps
        ]
    )


def gradient(case, figures):
    pull = case.balance.weights * error_cents(case, figures)
    return 2 * (slopes(case, figures) * pull).sum(axis=(1, 2))


def room(case, figures, line, width_mm):
    """Room left on either side of the strip x = c + b y, for the saddle points."""
    points = case.ends.bridge_mm + figures[len(figures) // 2 :, None] * directions(case.ends)
    off = (points[:, 0] - line[0] - line[1] * points[:, 1]) / np.hypot(1, line[1])
    return np.concatenate([width_mm / 2 - off, width_mm / 2 + off])


def held(case):
    return solve_compensation(
        case.body,
        case.lie,
        balance=case.balance,
        ends=case.ends,
        nut="each",
        saddle="each",
        strip_mm=STRIP_MM,
    )


def line_of(found):
    return np.array([found.strip.at_centre_mm, np.tan(found.strip.slant)])


@pytest.mark.parametrize("seed", [3, 5])
def test_no_general_program_finds_a_lower_sum(strung, seed):
    case = strung(seed, strings=4, frets=10)
    found = held(case)
    assert found.limit_cost_cents > 0.01
    least = total(case, np.concatenate([found.nut_shift_mm, found.setback_mm]))
    across = case.ends.bridge_mm[:, 1]
    own_slope = np.polyfit(across, case.ends.bridge_mm[:, 0], 1)[0]
    lowest = np.inf
    for slope in own_slope + np.linspace(-0.15, 0.15, 4):
        start = np.concatenate(
            [np.zeros(8), [case.ends.bridge_mm[:, 0].mean() - slope * across.mean(), slope]]
        )
        tried = minimize(
            lambda x: total(case, x[:8]),
            start,
            jac=lambda x: np.append(gradient(case, x[:8]), [0.0, 0.0]),
            method="SLSQP",
            bounds=[(-6, 9)] * 8 + [(start[8] - 20, start[8] + 20), (slope - 0.2, slope + 0.2)],
            constraints={"type": "ineq", "fun": lambda x: room(case, x[:8], x[8:], STRIP_MM)},
            options={"maxiter": 300, "ftol": 1e-13},
        )
        if room(case, tried.x[:8], tried.x[8:], STRIP_MM).min() > -1e-7:
            lowest = min(lowest, tried.fun)
    assert least <= lowest * (1 + 1e-6)
    assert lowest <= least * (1 + 1e-4)


@pytest.mark.parametrize("seed", range(8))
def test_multipliers_balance_the_sum(strung, seed):
    """Where the sum is least its gradient is a non-negative mix of the touched sides' gradients."""
    case = strung(seed)
    found = held(case)
    figures = np.concatenate([found.nut_shift_mm, found.setback_mm])
    line = line_of(found)
    size = len(figures)
    touched = np.flatnonzero(room(case, figures, line, STRIP_MM) < 1e-8)
    assert touched.size >= 3
    at = np.concatenate([figures, line])
    scale = np.concatenate([np.ones(size + 1), [1 / 27]])  # slope as mm at the outer strings
    sides = np.array(
        [
            (
                room(case, (at + h)[:size], (at + h)[size:], STRIP_MM)
                - room(case, (at - h)[:size], (at - h)[size:], STRIP_MM)
            )[touched]
            / 2e-4
            for h in np.diag(scale * 1e-4)
        ]
    )
    pull = np.append(gradient(case, figures), [0.0, 0.0])
    multipliers, left = nnls(sides, pull)
    root = np.sqrt(case.balance.weights) * slopes(case, figures)
    curvature = 2 * np.linalg.svd(root.reshape(size, -1))[1].min() ** 2
    assert multipliers.max() > 0
    assert left / curvature < 1e-6  # mm
