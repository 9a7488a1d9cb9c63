"""Runs the app on the stand-in bench: ``python -m tests.app.run_fake FOLDER [SECONDS]``; used by the pty
tests and by hand."""

import os
import sys
from pathlib import Path

from tests.app.fake_shelf import FakeShelf
from triage.app import terminal
from triage.app.app import TriageApp


def main() -> int:
    """Start on the start page."""
    shelf = FakeShelf(Path(sys.argv[1]), float(sys.argv[2]) if len(sys.argv) > 2 else 0.0)
    terminal.harden_stream(sys.__stderr__)
    app = TriageApp(shelf, terminal.look(os.environ))  # type: ignore[arg-type]
    app.run()
    for fault in app.faults:
        print("fault", repr(fault), file=sys.stderr)
    return app.return_code or 0


if __name__ == "__main__":
    raise SystemExit(main())
