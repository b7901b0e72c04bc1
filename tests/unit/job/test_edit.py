"""Starters: they run as they are, and take settings without losing a comment."""

import pytest

from layout.errors import JobError, TextError
from layout.job.edit import make_starter, set_key, starter_kinds
from layout.job.read import read_job_text


def comments(text: str) -> list[str]:
    return [line.strip() for line in text.splitlines() if line.lstrip().startswith("#")]


def test_the_kinds() -> None:
    assert starter_kinds() == ("bass-four", "multiscale-seven", "nylon-six", "steel-six")


@pytest.mark.parametrize("kind", starter_kinds())
def test_a_starter_runs_as_it_is_and_claims_pitch(kind: str) -> None:
    job = read_job_text(make_starter(kind).encode(), kind)
    assert job.findings == ()
    assert job.heights is not None
    assert job.compensation.saddle in ("straight", "each")
    assert len(comments(make_starter(kind))) >= 6


def test_settings_change_the_text_in_place() -> None:
    plain = make_starter("steel-six")
    made = make_starter(
        "steel-six",
        [
            "title=Walnut no. 3: for Ada",
            "scale=25 1/2 in",
            "frets.count = 21",
            "strings.1.gauge=0.011 in",
            "strings[6].note=D2",
            "frets.key=C",
            "board.radius=flat",
            "marks.face=[3, 5, 7]",
            "board.binding=1.5",
            "supports.saddle={tail: 12}",
        ],
    )
    job = read_job_text(made.encode(), "made")
    assert job.title == "Walnut no. 3: for Ada"
    assert job.scale.length_mm == 647.7  # type: ignore[union-attr]
    assert job.frets.count == 21
    assert job.frets.counted_from == "key"
    assert job.strings[0].gauge_mm == pytest.approx(0.2794)
    assert str(job.strings[5].note) == "D2"
    assert job.board.top is None
    assert job.board.binding_mm == 1.5
    assert job.marks.face == (3, 5, 7)
    assert comments(made) == comments(plain)
    kept = set(plain.splitlines()) & set(made.splitlines())
    assert len(kept) == len(set(plain.splitlines())) - 6


def test_a_string_more() -> None:
    made = make_starter(
        "multiscale-seven",
        ["strings.8={note: F#1, wound: nickel-plated steel, gauge: 0.080 in, core: 0.02 in}"],
    )
    assert str(read_job_text(made.encode(), "made").strings[7].note) == "F#1"


@pytest.mark.parametrize(
    ("text", "path", "value", "wanted"),
    [
        ("a: 1 # c\nb: 2\n", "a", "3", "a: 3 # c\nb: 2\n"),
        ("a: 1\nb: 2", "c", "3", "a: 1\nb: 2\nc: 3\n"),
        ("a: {x: 1} # c\n", "a.y", "2", "a: {x: 1, y: 2} # c\n"),
        ("a: {}\n", "a.y", "2", "a: {y: 2}\n"),
        ("a: [1, 2]\n", "a.3", "9", "a: [1, 2, 9]\n"),
        ("a: [1, 2]\n", "a.1", "9", "a: [9, 2]\n"),
        ("a:\n  x: 1\n# c\nb: 2\n", "a.y", "2", "a:\n  x: 1\n  y: 2\n# c\nb: 2\n"),
        ("a:\n  - 1\n  - 2 # c\nb: 3\n", "a.3", "4", "a:\n  - 1\n  - 2 # c\n  - 4\nb: 3\n"),
        ("a:\n  x: 1\n# c\nb: 2\n", "a", "7", "a:\n  7\n# c\nb: 2\n"),
        ("a: 1\n", "b.c.d", "2", "a: 1\nb: {c: {d: 2}}\n"),
        ("a: 1\n", "a", "it's: 2", "a: 'it''s: 2'\n"),
        ("a: 1\n", "a", "x # y", "a: 'x # y'\n"),
        ("a: 1\n", "a", '1 3/8"', 'a: 1 3/8"\n'),
        ("a: 1\n", "a", "*x", "a: '*x'\n"),
    ],
)
def test_set_key(text: str, path: str, value: str, wanted: str) -> None:
    assert set_key(text, path.split("."), value=value) == wanted


@pytest.mark.parametrize(
    ("setting", "message"),
    [
        ("scale", "'scale' is no setting; write key=value, such as scale=640"),
        ("scale=", "'scale=' is no setting; write key=value, such as scale=640"),
        ("=640", "'=640' is no setting; write key=value, such as scale=640"),
        ("strings..gauge=1", "strings..gauge is no key; write it like strings.1.gauge"),
        ("scale.treble=640", "scale is 645, with nothing under it; set scale itself"),
        (
            "strings.9.gauge=1",
            "strings is a list; 9 is none of its places; places are 1 to 6, and 7 adds one",
        ),
        ("marks.face=[3, 5", "the brackets of [3, 5 do not close; check them"),
    ],
)
def test_a_wrong_setting(setting: str, message: str) -> None:
    with pytest.raises(TextError) as caught:
        make_starter("steel-six", [setting])
    assert str(caught.value) == message


def test_a_setting_the_reader_refuses() -> None:
    with pytest.raises(JobError) as caught:
        make_starter("bass-four", ["scale=34", "colour=red"])
    assert [fault.path for fault in caught.value.faults] == ["scale", "colour"]
    assert "34 is not allowed; a scale needs 100 to 2000 mm; write 34 in" in str(caught.value)


def test_an_unknown_kind() -> None:
    with pytest.raises(TextError) as caught:
        make_starter("steel-sicks")
    assert str(caught.value) == "there is no starter steel-sicks; the nearest is steel-six"
