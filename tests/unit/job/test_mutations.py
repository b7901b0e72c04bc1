"""Whatever is done to a job file, the reader answers with an instrument or with faults."""

import string

from hypothesis import given, settings
from hypothesis import strategies as st

from layout.errors import JobError
from layout.instrument import Instrument
from layout.job.read import read_job_text

PIECES = st.sampled_from(
    ["{", "}", "[", "]", ": ", ", ", "- ", "\n", "\n  ", "#", "'", '"', "&a ", "*a", "!!str ",
     "0", "-1", "1e99", ".nan", "no", "null", "3:2", "0,5", "E4", "nut", "each", "fret", "12",
     "21", "{}", "[]", "\t", "\x00", "\u2028", "---\n", "? ", "| ", "saddle", "frets"]
)  # fmt: skip


@st.composite
def mutations(draw: st.DrawFn) -> list[tuple[float, int, str]]:
    """Places in the text (as a share), how much is cut there, and what is put in."""
    return draw(
        st.lists(
            st.tuples(
                st.floats(0, 1),
                st.integers(0, 12),
                PIECES | st.text(string.printable, max_size=4),
            ),
            min_size=1,
            max_size=4,
        )
    )


@given(changes=mutations())
@settings(max_examples=400, deadline=None)
def test_mutations_of_the_full_job(full: str, changes: list[tuple[float, int, str]]) -> None:
    text = full
    for share, cut, piece in changes:
        at = int(share * len(text))
        text = text[:at] + piece + text[at + cut :]
    answered(text)


@st.composite
def swapped_values(draw: st.DrawFn) -> tuple[int, str]:
    return draw(st.integers(0, 10_000)), draw(
        PIECES | st.sampled_from(["[1, 2]", "{1: 2}", "{nut: 1}", "{treble: 1, bass: 2}", "''"])
    )


@given(swap=st.lists(swapped_values(), min_size=1, max_size=3))
@settings(max_examples=400, deadline=None)
def test_swapped_values_of_the_full_job(full: str, swap: list[tuple[int, str]]) -> None:
    for place, value in swap:
        starts = [at + 2 for at in range(len(full)) if full.startswith(": ", at)]
        start = starts[place % len(starts)]
        end = min(at for at in (full.find(mark, start) for mark in (",", "}", "\n")) if at > 0)
        full = full[:start] + value + full[end:]
    answered(full)


def answered(text: str) -> None:
    faults = ()
    try:
        made = read_job_text(text.encode(), "job.yaml")
    except JobError as error:
        faults = error.faults
    lines = text.count("\n") + text.count("\r") + 1
    assert faults or isinstance(made, Instrument)
    assert all(fault.line is None or 1 <= fault.line <= lines for fault in faults)
