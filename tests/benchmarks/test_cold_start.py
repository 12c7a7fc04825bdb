"""Cold start of one assessment against the imports it can't do without, in the same environment.

pytest tests/benchmarks/test_cold_start.py -s
"""

import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).parents[2]
ASSESS = [
    "-m", "psdflow", "assess", "sample_psd/carrier-BW-0412.csv",
    "--material", "configs/material-alumina-carrier.yaml", "--duty", "configs/duty-dryer-warm-air.yaml",
]  # fmt: skip
IMPORTS = ["-c", "import numpy, pandas, scipy.optimize"]


def best_of(arguments: list[str], times: int = 7) -> float:
    """Shortest wall time in seconds of a fresh interpreter."""
    taken = []
    for _ in range(times):
        start = time.perf_counter()
        subprocess.run([sys.executable, *arguments], cwd=ROOT, check=True, capture_output=True)
        taken.append(time.perf_counter() - start)
    return min(taken)


def test_one_report_within_twice_the_imports():
    imports, assess = best_of(IMPORTS), best_of(ASSESS)
    print(f"\nimport numpy, pandas, scipy.optimize: {imports:.3f} s; psdflow assess: {assess:.3f} s; "
          f"ratio {assess / imports:.2f}")  # fmt: skip
    assert assess <= 2 * imports
