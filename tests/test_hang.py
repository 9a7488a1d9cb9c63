"""The watch against hangs barks, whatever the block does with the bark."""

import pytest

from tests import hang


@pytest.mark.parametrize("answer", ["lets it through", "swallows it", "tells another error"])
def test_a_block_without_end_is_told(answer: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(hang, "LIMIT", 0.05)
    with pytest.raises(hang.HangError), hang.answers_in_time():
        try:
            while True:
                pass
        except hang.HangError:
            if answer == "tells another error":
                raise ValueError from None
            if answer == "lets it through":
                raise


def test_an_honest_block_and_its_error_are_left_alone() -> None:
    with hang.answers_in_time():
        pass
    with pytest.raises(ValueError), hang.answers_in_time():
        raise ValueError
