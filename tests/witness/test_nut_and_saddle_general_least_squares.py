"""Nut and saddle again, by a general least-squares routine that knows other unknowns."""

import numpy as np
import pytest
from scipy.optimize import least_squares, root

from layout.strings.compensation import solve_compensation
from layout.strings.stopping import predict_stops

SOLVER_MM = 1e-6


def along_string_to_line(line_mm, direction, first, last):
    """Meet each string with the line through two points, by solving 2 by 2 equations."""
    figures = []
    for point, way in zip(line_mm, direction, strict=True):
        matrix = np.column_stack([way, first - last])
        figures.append(np.linalg.solve(matrix, first - point)[0])
    return np.array(figures)


def figures(rule, unknowns, line_mm, ends):
    direction = (ends.bridge_mm - ends.nut_mm) / np.hypot(*(ends.bridge_mm - ends.nut_mm).T)[
        :, None
    ]
    if rule == "none":
        return np.zeros(len(line_mm))
    if rule == "one":
        return np.full(len(line_mm), unknowns[0])
    if rule == "course":
        return np.asarray(unknowns)[ends.course]
    if rule == "each":
        return np.asarray(unknowns)
    return along_string_to_line(
        line_mm,
        direction,
        line_mm[0] + unknowns[0] * direction[0],
        line_mm[-1] + unknowns[1] * direction[-1],
    )


def count(rule, ends):
    strings = len(ends.course)
    return {
        "none": 0,
        "one": 1,
        "straight": 2,
        "course": len(set(ends.course)),
        "each": strings,
    }[rule]


def general(case, nut, saddle):
    at_nut = count(nut, case.ends)
    weight_root = np.sqrt(case.balance.weights)

    def ends_at(unknowns):
        return (
            figures(nut, unknowns[:at_nut], case.ends.nut_mm, case.ends),
            figures(saddle, unknowns[at_nut:], case.ends.bridge_mm, case.ends),
        )

    def residuals(unknowns):
        shift, setback = ends_at(unknowns)
        stopped = predict_stops(
            case.body, case.lie, case.balance.stops_mm, nut_shift_mm=shift, setback_mm=setback
        )
        return (weight_root * (stopped.cents - case.balance.target_cents)).ravel()

    def slopes(unknowns):
        """Derivatives by five points; the routine's own steps are too short for 1e-6 mm."""
        steps = np.eye(len(unknowns)) * 0.05
        return np.array(
            [
                8 * (residuals(unknowns + h) - residuals(unknowns - h))
                - (residuals(unknowns + 2 * h) - residuals(unknowns - 2 * h))
                for h in steps
            ]
        ).T / (12 * 0.05)

    start = np.zeros(at_nut + count(saddle, case.ends))
    found = least_squares(residuals, start, jac=slopes, method="lm", xtol=1e-15, ftol=1e-15)
    # The routine ends where rounding hides the sum's fall, some 1e-6 mm away: its gradient's
    # root lies closer.
    polished = root(
        lambda x: slopes(x).T @ residuals(x),
        found.x,
        jac=lambda x: slopes(x).T @ slopes(x),
        tol=1e-14,
    )
    np.testing.assert_allclose(polished.x, found.x, rtol=0, atol=1e-5)
    return (*ends_at(polished.x), 2 * found.cost)


RULES = ["none", "one", "straight", "course", "each"]
PAIRS = [(nut, saddle) for nut in RULES for saddle in RULES if (nut, saddle) != ("none", "none")]


@pytest.mark.parametrize(("nut", "saddle"), PAIRS)
def test_every_pair_of_rules(strung, nut, saddle):
    case = strung(sum(map(ord, nut + saddle)))
    found = solve_compensation(
        case.body, case.lie, balance=case.balance, ends=case.ends, nut=nut, saddle=saddle
    )
    shift, setback, least = general(case, nut, saddle)
    np.testing.assert_allclose(found.nut_shift_mm, shift, rtol=0, atol=SOLVER_MM)
    np.testing.assert_allclose(found.setback_mm, setback, rtol=0, atol=SOLVER_MM)
    total = (case.balance.weights * found.error_cents**2).sum()
    assert total <= least * (1 + 1e-10)


@pytest.mark.parametrize("seed", range(6))
def test_random_instruments_each_end_free(strung, seed):
    case = strung(seed, strings=2 + seed, frets=6 + 2 * seed, first=1 + seed % 3)
    found = solve_compensation(
        case.body, case.lie, balance=case.balance, ends=case.ends, nut="each", saddle="each"
    )
    shift, setback, _ = general(case, "each", "each")
    np.testing.assert_allclose(found.nut_shift_mm, shift, rtol=0, atol=SOLVER_MM)
    np.testing.assert_allclose(found.setback_mm, setback, rtol=0, atol=SOLVER_MM)
