"""Where jobs lie, and that no name leads out of there."""

from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from triage.errors import JobError
from triage.job.folder import free_name, jobs_folder, make_folder


def test_the_choice_goes_before_the_environment_before_the_data_directory(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("HOME", "/home/ann")
    monkeypatch.delenv("XDG_DATA_HOME", raising=False)
    monkeypatch.delenv("TRIAGE_JOBS", raising=False)
    assert jobs_folder() == Path("/home/ann/.local/share/triage/jobs")
    monkeypatch.setenv("XDG_DATA_HOME", "relative/is/ignored/by/the/specification")
    assert jobs_folder() == Path("/home/ann/.local/share/triage/jobs")
    monkeypatch.setenv("XDG_DATA_HOME", "/data")
    assert jobs_folder() == Path("/data/triage/jobs")
    monkeypatch.setenv("TRIAGE_JOBS", "~/shared")
    assert jobs_folder() == Path("/home/ann/shared")
    assert jobs_folder(tmp_path) == tmp_path


def test_a_folder_that_cannot_be_made_gives_one_line(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    with pytest.raises(JobError, match="cannot be made"):
        make_folder(tmp_path / "file" / "jobs")
    with pytest.raises(JobError):
        make_folder(Path("a\0b"))


@given(st.text(max_size=100))
def test_no_wish_leads_out_of_the_folder(wish: str) -> None:
    folder = Path("/nonexistent/jobs")
    path = free_name(folder, wish)
    assert path.parent == folder and path.suffix == ".toml" and not path.name.startswith(".")
    assert "/" not in path.name and ".." not in path.name


def test_a_taken_name_gets_a_number(tmp_path: Path) -> None:
    (tmp_path / "cube.toml").write_text("")
    assert free_name(tmp_path, "cube").name == "cube-2.toml"
