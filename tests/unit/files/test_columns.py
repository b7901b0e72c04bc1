from layout.files.columns import align


def test_columns_are_as_wide_as_their_widest_cell() -> None:
    text = align(["name", "mm"], [["a", "1.5"], ["longer", "123.25"]], left=1)
    assert text.splitlines() == [
        "  name        mm",
        "  a          1.5",
        "  longer  123.25",
    ]


def test_nothing_stands_behind_the_last_cell() -> None:
    text = align(["a", "b"], [["1", ""], ["2", "long"]], left=2)
    assert text.splitlines() == ["  a  b", "  1", "  2  long"]


def test_a_head_alone_is_a_table() -> None:
    assert align(["fret", "mm"], []) == "  fret  mm"
