"""Marks on the drawing: beside the words, without changing its shape."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.app.fake_bench import DRAWING
from triage.app.drawing import Marks, marked, pin_list, rows_of, squeezed
from triage.app.lines import plain

MARKS = Marks(suspects=("Q1", "RF1"), over=frozenset({"Q1", "R2"}), red="bulk", black="pgnd")


def text_of(drawing: str, marks: Marks) -> str:
    return "\n".join(plain(row) for row in marked(drawing, marks))


def test_suspects_and_leads_carry_their_signs():
    text = text_of(DRAWING, MARKS)
    for sign in ("*Q1!", "?RF1]", "{+bulk}", "{-pgnd}", "[R2!"):
        assert sign in text


def test_a_part_read_alone_is_marked_instead_of_two_nodes():
    """Common practice: with one leg lifted both leads are at the part itself."""
    text = text_of(DRAWING, Marks(suspects=("R1",), red="R1.a", black="R1.b", alone="R1"))
    assert "{R1}" in text and "*R1" not in text and "{+" not in text


def test_no_colour_is_needed_to_tell_marks_apart():
    assert len({sign for word in ("Q1", "RF1", "bulk", "pgnd", "R2") for sign in [MARKS.around(word)[:3]]}) == 5


def test_the_shape_of_the_drawing_stays():
    before = [plain(row) for row in marked(DRAWING, Marks())]
    after = [plain(row) for row in marked(DRAWING, MARKS)]
    assert [len(row) for row in before] == [len(row) for row in after]


def test_a_lead_between_wires_is_told_from_them():
    assert "{-drive}" in text_of("--R3]--drive-C3--", Marks(red="base", black="drive"))
    assert "{drive}" in text_of("]-drive-C3", Marks(black="drive")) or "{-drive}" in text_of("]-drive-C3", Marks(black="drive"))


def test_words_inside_other_words_are_not_marked():
    assert "*" not in text_of("Q10 -- XQ1", Marks(suspects=("Q1",)))


def test_neighbouring_words_keep_their_letters():
    assert text_of("R1 R2", Marks(suspects=("R2",), over=frozenset({"R1"}))).split() in (["R1*R2"], ["R1!R2"])


@given(st.text(alphabet="Q1 bulk|-+[]\n", max_size=200))
def test_any_text_can_be_a_drawing(drawing):
    rows = marked(drawing, MARKS)
    assert len(rows) == len(drawing.expandtabs(4).strip("\n").splitlines())


def test_the_rows_of_a_word_are_found():
    rows = marked(DRAWING, MARKS)
    assert all("bulk" in plain(rows[number]) for number in rows_of(rows, "bulk"))
    assert rows_of(rows, "no such") == ()


def test_a_board_without_a_drawing_gets_its_pins_listed():
    text = pin_list({"bulk": ("D1 cathode", "C1 plus", "R1 a"), "pgnd": ("C1 minus",)}, 40)
    assert all(len(row) <= 40 for row in text.splitlines())
    assert all(place in text for place in ("D1 cathode", "C1 plus", "R1 a", "C1 minus"))


WIDE = """\
 mains_l       rect          bulk                |  sec           out
   o---[RF1]----+----D1->|----+------+           |   +---D5->|---+--o +5 V
                              |      |           |   |           |
                             C1     [R1]         |   T1          C5
                              |      |           |   |           |
 pgnd ------------------------+------+           |   +-----------+--o sgnd"""


@pytest.mark.parametrize("columns", [54, 58, 60, 66, 200])
@pytest.mark.parametrize("rows", [4, 5, 6, 20])
def test_a_squeezed_drawing_keeps_every_word_and_every_row_of_parts(columns, rows):
    words = [row.split() for row in WIDE.replace("-", " ").replace("|", " ").splitlines() if row.strip("| ")]
    got = squeezed(WIDE, columns, rows)
    kept = [row.split() for row in got.replace("-", " ").replace("|", " ").splitlines() if row.strip("| ")]
    assert kept == words
    assert max(map(len, got.splitlines())) <= columns
    assert len(got.splitlines()) == min(6, max(rows, 4))


def test_a_squeezed_drawing_keeps_its_joints_in_line():
    got = squeezed(WIDE, 55, 4).splitlines()
    at = got[1].index("+---+")
    assert got[2][at - 1 : at + 1] == "C1" and got[3][at] == "+" and "bulk"[1] == got[0][at]


def test_a_drawing_that_fits_is_left_alone():
    assert squeezed(WIDE, 200, 50) == WIDE
