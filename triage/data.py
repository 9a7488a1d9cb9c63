"""Finds the data folders that ship with the program, in a checkout and in an installed wheel."""

from pathlib import Path


def data_folder(name: str) -> Path:
    """Folder ``part_catalog`` or ``profiles``: inside the package when installed, beside it in a checkout.

    Raises FileNotFoundError when neither place has it.
    """
    here = Path(__file__).resolve().parent
    for base in (here, here.parent):
        if (base / name).is_dir():
            return base / name
    raise FileNotFoundError(f"data folder {name!r} is neither inside the package nor beside it; install triage again")
