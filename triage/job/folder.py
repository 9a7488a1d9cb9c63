"""Where the jobs lie: one folder, private or shared, one file a job."""

import os
import re
from pathlib import Path

from triage.errors import JobError

VARIABLE = "TRIAGE_JOBS"
"""Environment variable that names a jobs folder, for instance one that several benches share."""

PROFILES = "profiles"
"""Folder of the shop's own profiles within the data directory."""


def jobs_folder(chosen: str | Path | None = None) -> Path:
    """The jobs folder: as chosen, else as the environment says, else in the user's data directory (XDG base
    directory specification: ``$XDG_DATA_HOME``, default ``~/.local/share``). It need not exist.
    """
    if chosen:
        return Path(chosen).expanduser()
    named = os.environ.get(VARIABLE)
    if named:
        return Path(named).expanduser()
    return data_directory() / "jobs"


def data_directory() -> Path:
    """The user's data directory of this program, where the settings of the shop lie; it need not exist."""
    data = os.environ.get("XDG_DATA_HOME", "")
    base = Path(data) if os.path.isabs(data) else Path.home() / ".local" / "share"
    return base / "triage"


def make_folder(folder: Path) -> Path:
    """Create the folder, private to the user, if it is not there. Raises JobError when that cannot be
    done."""
    try:
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or type(error).__name__
        raise JobError(
            str(folder),
            f"the jobs folder cannot be made: {reason}",
            advice=f"choose another with --jobs or {VARIABLE}",
        ) from None
    return folder


def free_name(folder: Path, wish: str) -> Path:
    """A file name in the folder that no job has yet, made from the wish; no wish can lead out of the
    folder."""
    stem = re.sub(r"[^A-Za-z0-9_-]+", "-", wish).strip("-")[:60] or "job"
    for number in range(1, 100_000):
        path = folder / (f"{stem}.toml" if number == 1 else f"{stem}-{number}.toml")
        if not path.exists():
            return path
    raise JobError(str(folder), f"holds 100,000 jobs named {stem}", advice="give the job another name")
