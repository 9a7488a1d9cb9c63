"""Kept answers: there or not there, never in the way."""

import os
from pathlib import Path

import numpy as np
import pytest

from triage.job import cache
from triage.job.cache import Cache, Shipped, cache_folder


def test_what_was_kept_comes_back_to_the_last_digit(tmp_path: Path) -> None:
    kept = Cache(tmp_path / "new" / "answers")
    kept.put("a", {"x": [0.1 + 0.2, 1e-300]})
    array = np.array([[1.5, np.inf, np.nan]], dtype=np.float32)
    kept.put_array("b", array)
    assert kept.get("a") == {"x": [0.1 + 0.2, 1e-300]}
    again = kept.get_array("b")
    assert again is not None and again.dtype == np.float32
    np.testing.assert_array_equal(again, array)
    assert kept.has("a") and not kept.has("b") and kept.get("c") is None and kept.get_array("c") is None


@pytest.mark.parametrize("content", [b"", b"{", b"[" * 100_000, b"\xff", b"PK\x03\x04 broken"])
def test_a_damaged_answer_is_as_good_as_none(tmp_path: Path, content: bytes) -> None:
    (tmp_path / "a.json").write_bytes(content)
    (tmp_path / "a.npz").write_bytes(content)
    assert Cache(tmp_path).get("a") is None and Cache(tmp_path).get_array("a") is None


def test_an_array_with_code_in_it_is_not_run(tmp_path: Path) -> None:
    np.savez(tmp_path / "a.npz", answer=np.array([print], dtype=object), allow_pickle=True)
    assert Cache(tmp_path).get_array("a") is None


def test_a_cache_that_cannot_be_written_only_keeps_nothing(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    kept = Cache(tmp_path / "file" / "answers")
    kept.put("a", 1)
    assert kept.get("a") is None


def test_the_oldest_answers_go_first(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(cache, "MOST", 3)
    kept = Cache(tmp_path)
    for number in range(5):
        kept.put(f"k{number}", number)
        os.utime(tmp_path / f"k{number}.json", (number, number))
    kept.put("last", 9)
    assert {path.stem for path in tmp_path.iterdir()} == {"k3", "k4", "last"}


def test_what_ships_goes_before_the_cache_and_is_never_written(tmp_path: Path) -> None:
    shipped = Cache(tmp_path / "shipped")
    shipped.put("a", "shipped")
    both = Shipped(tmp_path / "shipped", Cache(tmp_path / "own"))
    both.put("a", "own")
    both.put("b", "own")
    both.put_array("c", np.zeros(2))
    assert (both.get("a"), both.get("b")) == ("shipped", "own")
    assert both.get_array("c") is not None and both.has("b")
    assert [path.name for path in (tmp_path / "shipped").iterdir()] == ["a.json"]


def test_the_folder_follows_the_base_directory_specification(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HOME", "/home/ann")
    monkeypatch.delenv("XDG_CACHE_HOME", raising=False)
    assert cache_folder() == Path("/home/ann/.cache/triage")
    monkeypatch.setenv("XDG_CACHE_HOME", "/big/cache")
    assert cache_folder() == Path("/big/cache/triage")
