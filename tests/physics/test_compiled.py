"""The compiled kernel against the same source run as plain Python: compiling changes no figure."""

import json
import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from tests.physics.short_runs import figures

ROOT = Path(__file__).resolve().parents[2]
ROUNDING = 1e-9
"""Both do the same operations in double precision; a processor that fuses two of them rounds otherwise [-]."""


def test_plain_python_gives_the_figures_of_the_compiled_kernel() -> None:
    command, plain_python = [sys.executable, "-m", "tests.physics.short_runs"], {**os.environ, "NUMBA_DISABLE_JIT": "1"}
    run = subprocess.run(command, cwd=ROOT, env=plain_python, check=False, capture_output=True, text=True)
    assert run.returncode == 0, run.stderr
    plain, compiled = json.loads(run.stdout), figures()
    assert plain.keys() == compiled.keys()
    for name, values in compiled.items():
        assert np.asarray(plain[name]) == pytest.approx(np.asarray(values), rel=ROUNDING, abs=1e-12, nan_ok=True), name
