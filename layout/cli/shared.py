"""Options and manners that several commands share."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from pathlib import Path

import click

from layout.files.page import write_finding
from layout.findings import Finding

JOB = click.argument("job", metavar="JOB", type=click.Path(path_type=Path))
STRICT = click.option("--strict", is_flag=True, help="Fail when there are warnings or errors.")


def tell(finding: Finding) -> None:
    """Say a finding on standard error."""
    click.echo(write_finding(finding), err=True)


def end_strictly(findings: Sequence[Finding], *, strict: bool) -> None:
    """End with status 1 under ``--strict`` when a finding is more than a note."""
    doubts = [finding for finding in findings if finding.severity != "note"]
    if strict and doubts:
        for finding in doubts:
            tell(finding)
        click.echo(f"--strict: {len(doubts)} findings are warnings or errors", err=True)
        sys.exit(1)
