"""What is doubtful about a plan? Every check, in the order a maker would ask.

To add one: write a function ``Plan -> Iterator[Finding]`` in the file of its subject and list it in
that file's tuple.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

from layout.findings import Finding
from layout.plan.checks import STRING_CHECKS
from layout.plan.depth_checks import DEPTH_CHECKS
from layout.plan.model import Plan
from layout.plan.part_checks import PART_CHECKS
from layout.plan.setup_checks import SETUP_CHECKS

CHECKS: tuple[Callable[[Plan], Iterator[Finding]], ...] = (
    *STRING_CHECKS,
    *SETUP_CHECKS,
    *DEPTH_CHECKS,
    *PART_CHECKS,
)


def find_doubts(plan: Plan) -> tuple[Finding, ...]:
    """Run every check."""
    return tuple(finding for check in CHECKS for finding in check(plan))
