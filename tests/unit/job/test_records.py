from fractions import Fraction

import pytest

from layout.errors import FileError, JobError, PitchError
from layout.job.cursor import Reading, root_cursor
from layout.job.records import (
    library_names,
    load_library_record,
    load_record_file,
    read_record,
    take_record,
    take_temperament,
)
from layout.job.tree import parse_tree
from layout.pitch.notes import read_note

HEAD = "name: own\ntitle: Own\nsource: the test\n"
CHAIN = (
    "notes: [C, C#, D, Eb, E, F, F#, G, G#, A, Bb, B]\n"
    "fifths:\n  chain: [Eb, Bb, F, C, G, D, A, E, B, F#, C#, G#]\n  narrow: "
)
NAME_RULE = "a record has a name of small letters, digits and hyphens"
RATIO_RULE = "a ratio is two whole numbers such as 3/2 or 3:2, or one such as 2"
KEYS = "name, title, source, period, notes, equal, ratios, cents, fifths, string, rule, step_cents"
THE_FIRST_EIGHT = {
    "equal-12",
    "equal-19",
    "equal-24",
    "just-12",
    "meantone-quarter-comma",
    "rule-of-18",
    "vallotti",
    "werckmeister-3",
}


def read(body, head=HEAD):
    return read_record((head + body).encode(), "own.yaml")


def faults(body, head=HEAD):
    with pytest.raises(JobError) as caught:
        read(body, head)
    return [str(fault) for fault in caught.value.faults]


# The library


def test_the_first_records_are_there():
    assert set(library_names()) >= THE_FIRST_EIGHT


@pytest.mark.parametrize("name", library_names())
def test_every_record_of_the_library_reads_and_bears_its_file_name(name):
    record = load_library_record(name)
    assert record.name == name
    assert record.title
    assert record.source
    assert record.interval(0).fraction == 1


def test_an_unknown_name_tells_the_nearest():
    with pytest.raises(PitchError, match=r"no temperament equal-13; the nearest .* equal-"):
        load_library_record("equal-13")
    with pytest.raises(PitchError, match=r"the library has alpha, "):
        load_library_record("../../zzz")


def test_the_keyed_ones_are_keyed_on_c():
    for name in ("meantone-quarter-comma", "werckmeister-3", "vallotti", "just-12"):
        assert load_library_record(name).degree_of(read_note("C4")) == 0
    for name in ("equal-12", "equal-19", "equal-24", "rule-of-18"):
        assert not load_library_record(name).keyed


def test_the_circulating_ones_have_no_wolf():
    assert load_library_record("werckmeister-3").wolf is None
    assert load_library_record("vallotti").wolf is None
    assert str(load_library_record("meantone-quarter-comma").wolf) == "G#-Eb"


# Every form


@pytest.mark.parametrize(
    ("body", "degree", "ratio"),
    [
        ("period: 2\nequal: 4\n", 6, None),
        ("period: 3:1\nequal: 13\n", 26, Fraction(9)),
        ("period: 2\nratios: [1, 16/15, 9/8]\n", 4, Fraction(32, 15)),
        ("period: none\nratios: [1, 9:8]\n", 1, Fraction(9, 8)),
        ("period: 2\ncents: [0, 600.00]\n", 4, Fraction(4)),
        ("period: 2\nstring: [0, 2/33, 1/9]\n", 4, Fraction(66, 31)),
        ("rule: {part: 1/18}\n", 2, Fraction(324, 289)),
        ("period: none\nrule: {part: 1/18}\n", -1, Fraction(17, 18)),
        ("step_cents: 1200\n", 3, Fraction(8)),
        (f"period: 2\n{CHAIN}0\n", 4, Fraction(81, 64)),
        (f"period: 2\n{CHAIN}1/4 syntonic\n", 4, Fraction(5, 4)),
        (f"period: 2\n{CHAIN}{{C-G: 1 syntonic, G#-Eb: rest}}\n", 7, Fraction(40, 27)),
    ],
)
def test_every_form_is_read_exactly(body, degree, ratio):
    assert read(body).interval(degree).fraction == ratio


def test_decimal_cents_keep_their_digits():
    assert read("step_cents: 77.9649896\n").cents(1) == 77.9649896


# Faults, letter by letter


def test_every_fault_is_found_in_one_run_and_placed():
    assert faults("period: 0.5\nequal: 0\nnotes: [C, H, C]\ncolour: red\n", "name: Own One\n") == [
        f"own.yaml:1 name: Own One is not allowed; {NAME_RULE}",
        "own.yaml:1 title: a record has a title",
        "own.yaml:1 source: a record has a source",
        f"own.yaml:2 period: 0.5 is not allowed; {RATIO_RULE}",
        "own.yaml:3 equal: 0 is not allowed; a period is divided into 1 to 1200 equal steps",
        "own.yaml:4 notes[2]: H is not allowed; a note name is written like C, Bb or F#",
        "own.yaml:4 notes[3]: C is not allowed; the name stands twice",
        f"own.yaml:5 colour: there is no such key; the keys here are {KEYS}",
    ]


@pytest.mark.parametrize(
    ("body", "said"),
    [
        ("equal: 12\n", "own.yaml:1 period: period is the ratio after which the degrees repeat"),
        ("period: 2\n", "own.yaml:1: a record has exactly one of the keys equal, ratios"),
        (
            "period: 2\nequal: 12\nratios: [1]\n",
            "own.yaml:6 ratios: a record has one form, and equal stands above",
        ),
        ("period: 2\nequal: 12\nequal: 12\n", "own.yaml:6 equal: the key stands twice, first on"),
        ("period: 1\nequal: 12\n", "own.yaml:4 period: 1 is not allowed; a period is above 1"),
        (
            "period: none\nequal: 12\n",
            "own.yaml:4 period: none is not allowed; a record with equal",
        ),
        ("period: 2\nequal: twelve\n", "own.yaml:5 equal: twelve is not allowed; a number is"),
        ("period: 2\nequal: 12.5\n", "own.yaml:5 equal: 12.5 is not allowed; a period is divided"),
        (
            "period: 2\nequal: 012\n",
            "own.yaml:5 equal: 012 is not allowed; a number has no leading",
        ),
        (
            "period: none\nnotes: [C]\nratios: [1]\n",
            "own.yaml:4 period: none is not allowed; a record with notes repeats",
        ),
        (
            "period: 2\nnotes: [C, D]\nratios: [1]\n",
            "own.yaml:5 notes: 2 names do not fit 1 degrees",
        ),
        ("period: 2\nratios: [9/8, 5/4]\n", "own.yaml:5 ratios[1]: 9/8 is not allowed; the list"),
        (
            "period: 2\nratios: [1, 9/8, 2]\n",
            "own.yaml:5 ratios[3]: 2 is not allowed; degrees lie below the period, and the",
        ),
        (
            "period: 2\nratios:\n  - 1\n  - 5/4\n  - 9/8\n",
            "own.yaml:8 ratios[3]: 9/8 is not allowed; degrees rise; this one does not lie above",
        ),
        (
            "period: 2\nratios: [1, 8/9]\n",
            "own.yaml:5 ratios[2]: 8/9 is not allowed; a ratio rises",
        ),
        ("period: 2\nratios: [1, 5/4, 5/4]\n", "own.yaml:5 ratios[3]: 5/4 is not allowed; degrees"),
        ("period: 2\nratios: [1, 1.5]\n", "own.yaml:5 ratios[2]: 1.5 is not allowed; a ratio is"),
        ("period: 2\nratios: [1, [2]]\n", "own.yaml:5 ratios[2]: a list is not allowed; ratios is"),
        ("period: 2\nratios: 1\n", "own.yaml:5 ratios: 1 is not allowed; ratios is a list"),
        (
            "period: 2\nratios: []\n",
            "own.yaml:5 ratios: ratios is a list that begins 1; here are 0",
        ),
        ("period: 2\ncents: [0, nan]\n", "own.yaml:5 cents[2]: nan is not allowed; a number is"),
        ("period: 2\ncents: [0, 9e9]\n", "own.yaml:5 cents[2]: 9e9 is not allowed; a degree lies"),
        ("period: 2\nstring: [0, 1]\n", "own.yaml:5 string[2]: 1 is not allowed; a stop lies"),
        ("rule: {part: 18}\n", "own.yaml:4 rule.part: 18 is not allowed; each fret takes a part"),
        ("rule: {}\n", "own.yaml:4 rule.part: a rule has the part each fret takes, such as 1/18"),
        ("rule: 1/18\n", "own.yaml:4 rule: 1/18 is not allowed; here stands a mapping"),
        ("period: 2\nrule: {part: 1/18}\n", "own.yaml:4 period: a record with rule never ends"),
        ("step_cents: 0\n", "own.yaml:4 step_cents: 0 is not allowed; a step has 1 to 1200 cents"),
        (
            "period: 2\nfifths: {chain: [C, G], narrow: 0}\n",
            "own.yaml:1 notes: a chain of fifths needs notes, whose first is degree 0",
        ),
        (
            "period: 2\nnotes: [C, G]\nfifths: {chain: [C, D], narrow: 0}\n",
            "own.yaml:6 fifths.chain: a chain rises by fifths; after C comes G, not D",
        ),
        (
            "period: 2\nnotes: [C, D]\nfifths: {chain: [C, G], narrow: 0}\n",
            "own.yaml:6 fifths.chain: the chain has no D, which the notes name",
        ),
        (
            "period: 2\nnotes: [C, G]\nfifths: {chain: [C, G]}\n",
            "own.yaml:6 fifths.narrow: narrow says by how much",
        ),
        (
            f"period: 2\n{CHAIN}1/4 comma\n",
            "own.yaml:8 fifths.narrow: 1/4 comma is not allowed; a fifth is narrowed by a part",
        ),
        (
            f"period: 2\n{CHAIN}{{G-C: 1 schisma}}\n",
            "own.yaml:8 fifths.narrow.G-C: a fifth is named from below: C-G, not G-C",
        ),
        (
            f"period: 2\n{CHAIN}{{CG: 1 schisma}}\n",
            "own.yaml:8 fifths.narrow.CG: a fifth is named by its two notes, such as C-G",
        ),
        (
            f"period: 2\n{CHAIN}{{C-G: 1 syntonic, G#-Eb: 0}}\n",
            "own.yaml:8 fifths.narrow: the twelve fifths do not close: +1.954 cents are left",
        ),
        (
            "period: 2\nnotes: [C, G, D]\nfifths: {chain: [C, G, D], narrow: 0}\n",
            "own.yaml:6 fifths: degrees rise; degree 2 (203.910 cents) does not lie above degree 1",
        ),
    ],
)
def test_each_fault_stands_alone_and_is_placed(body, said):
    (only,) = faults(body)
    assert only.startswith(said)


def test_a_list_is_no_record():
    with pytest.raises(JobError, match="a temperament record is a mapping"):
        read_record(b"- 1\n", "own.yaml")


# In a job file


def taken(text, folder=None):
    reading = Reading("job.yaml", folder=folder)
    cursor = root_cursor(parse_tree(text.encode(), "job.yaml"), reading)
    return take_temperament(cursor.table(("temperament",)).at("temperament")), reading.faults


def test_a_name_of_the_library():
    record, none = taken("temperament: vallotti\n")
    assert record is load_library_record("vallotti")
    assert none == []


def test_a_misspelled_name():
    record, (fault,) = taken("temperament: valotti\n")
    assert record is None
    assert str(fault) == (
        "job.yaml:1 temperament: valotti is not allowed; there is no such temperament; "
        "the nearest in the library: vallotti"
    )


def test_a_record_in_the_job_file_needs_no_name():
    record, none = taken("temperament: {period: 3, equal: 13}\n")
    assert none == []
    assert record.name == record.title == "inline"
    assert record.source == "given in job.yaml"
    assert record.interval(13).fraction == 3


def test_a_record_in_the_job_file_is_read_as_strictly():
    record, found = taken("temperament:\n  period: 3\n  equals: 13\n  equal: 0\n")
    assert record is None
    assert [(fault.line, fault.path) for fault in found] == [
        (3, "temperament.equals"),
        (4, "temperament.equal"),
    ]


def test_a_path_counts_from_the_folder_of_the_job(tmp_path):
    (tmp_path / "own.yaml").write_text(HEAD + "period: 2\nequal: 17\n", encoding="utf-8")
    record, none = taken("temperament: own.yaml\n", tmp_path)
    assert none == []
    assert len(record.degrees) == 17
    assert load_record_file(tmp_path / "own.yaml") == record


def test_faults_of_a_record_file_bear_its_name(tmp_path):
    (tmp_path / "own.yaml").write_text(HEAD + "period: 2\nequal: x\n", encoding="utf-8")
    record, (fault,) = taken("temperament: own.yaml\n", tmp_path)
    assert record is None
    assert (fault.file, fault.line, fault.path) == ("own.yaml", 5, "equal")


def test_a_record_file_that_is_not_there(tmp_path):
    record, (fault,) = taken("temperament: none/own.yaml\n", tmp_path)
    assert record is None
    assert fault.rule.startswith("the record cannot be read: ")
    with pytest.raises(FileError):
        load_record_file(tmp_path / "own.yaml")


def test_no_text_at_all():
    record, (fault,) = taken("temperament:\n")
    assert record is None
    assert fault.path == "temperament"


def test_take_record_refuses_other_kinds():
    reading = Reading("job.yaml")
    assert take_record(root_cursor(parse_tree(b"[1]", "job.yaml"), reading)) is None
    assert len(reading.faults) == 1
