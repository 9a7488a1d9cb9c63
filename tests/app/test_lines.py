"""Lines of marked text: cut, joined and wrapped to the column (reasoned cases)."""

from triage.app.lines import Span, apart, clip, columns, fit, line, plain, width_of, wrapped


def test_a_line_that_fits_is_left_alone():
    row = line("bulk ", Span("C1", "suspect"))
    assert clip(row, 7) == row


def test_a_cut_line_has_exactly_the_width_and_says_so():
    row = line("abcdef", Span("ghij", "over"))
    for width in range(1, 10):
        cut = clip(row, width)
        assert width_of(cut) == width
        assert plain(cut).endswith("~")


def test_wide_characters_count_two_columns():
    assert width_of(line("抵抗")) == 4
    assert width_of(clip(line("抵抗器"), 4)) == 4


def test_the_right_line_wins_where_there_is_no_room():
    row = apart(line("a long title of a job"), line("step 3"), 12)
    assert width_of(row) == 12
    assert plain(row).endswith("step 3")


def test_columns_set_numbers_to_the_right():
    assert plain(columns([("x", 3), ("7", -3)])) == "x     7"


def test_fit_pads_and_cuts():
    assert fit("ab", 4) == "ab  "
    assert fit("abcdef", 4) == "abc~"


def test_wrapped_text_keeps_every_word_and_the_width():
    text = "one two three four five six seven eight nine ten"
    rows = wrapped(text, 12, first="> ", rest="  ")
    assert all(width_of(row) <= 12 for row in rows)
    assert " ".join(plain(row) for row in rows).replace(">", "").split() == text.split()


def test_empty_text_still_gives_its_lead_in():
    assert plain(wrapped("", 20, first="why: ")[0]) == "why: "
