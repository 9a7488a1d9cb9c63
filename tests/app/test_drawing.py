"""Marks on the drawing: beside the words, without changing its shape."""

from hypothesis import given
from hypothesis import strategies as st

from tests.app.fake_bench import DRAWING
from triage.app.drawing import Marks, marked, pin_list, rows_of
from triage.app.lines import plain

MARKS = Marks(suspects=("Q1", "RF1"), over=frozenset({"Q1", "R2"}), red="bulk", black="pgnd")


def text_of(drawing: str, marks: Marks) -> str:
    return "\n".join(plain(row) for row in marked(drawing, marks))


def test_suspects_and_leads_carry_their_signs():
    text = text_of(DRAWING, MARKS)
    for sign in ("*Q1!", "?RF1]", "+bulk+", "-pgnd-", "[R2!"):
        assert sign in text


def test_no_colour_is_needed_to_tell_marks_apart():
    assert len({sign for word in ("Q1", "RF1", "bulk", "pgnd", "R2") for sign in [MARKS.around(word)[:2]]}) == 5


def test_the_shape_of_the_drawing_stays():
    before = [plain(row) for row in marked(DRAWING, Marks())]
    after = [plain(row) for row in marked(DRAWING, MARKS)]
    assert [len(row) for row in before] == [len(row) for row in after]


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
