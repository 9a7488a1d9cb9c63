"""Help pages: a text file a screen, kept in ``triage/app/help``."""

from importlib.resources import files


def help_page(place: str) -> str:
    """The page on a screen; a place without one gets the page on the bench."""
    folder = files("triage.app") / "help"
    page = folder / f"{place}.txt"
    return (page if page.is_file() else folder / "bench.txt").read_text(encoding="utf-8")
