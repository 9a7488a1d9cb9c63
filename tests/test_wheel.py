"""The wheel carries everything the program needs: data folders, tables, help pages. Reasoned: compared with the checkout."""

import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

TOP = Path(__file__).resolve().parents[1]


@pytest.mark.long
def test_the_wheel_holds_every_file_of_the_package_and_its_data(tmp_path):
    """Built as a user's installer would build it."""
    done = subprocess.run([sys.executable, "-m", "build", "--wheel", "--outdir", str(tmp_path), str(TOP)],
                          capture_output=True, text=True, timeout=300, check=False)
    assert done.returncode == 0, done.stderr[-800:]
    names = set(zipfile.ZipFile(next(tmp_path.glob("*.whl"))).namelist())
    tracked = subprocess.run(["git", "ls-files", "triage", "part_catalog", "profiles"], cwd=TOP, capture_output=True, text=True,
                             check=True).stdout.splitlines()
    wanted = {name if name.startswith("triage/") else f"triage/{name}" for name in tracked}
    assert wanted <= names, sorted(wanted - names)[:10]
