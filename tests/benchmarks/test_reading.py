"""Reading a csv of 100 rows against pandas.read_csv on the same file, which only splits and converts.

pytest tests/benchmarks/test_reading.py -s
"""

import time
from collections.abc import Callable
from pathlib import Path

import pandas as pd

from psdflow.reports import read


def best_of(*calls: Callable[[], object], times: int = 200) -> list[float]:
    """Shortest time of each call in seconds; the calls take turns, so that a busy machine slows all of them."""
    best = [float("inf")] * len(calls)
    for _ in range(times):
        for k, call in enumerate(calls):
            start = time.perf_counter()
            call()
            best[k] = min(best[k], time.perf_counter() - start)
    return best


def test_a_hundred_rows_within_four_times_pandas(tmp_path: Path) -> None:
    rows = "".join(f"{1.07**i:.4f},1.000\n" for i in range(100))
    file = tmp_path / "laser.csv"
    file.write_text("Upper edge (µm),Volume (%)\n" + rows, encoding="utf-8")
    ours, pandas = best_of(lambda: read(file), lambda: pd.read_csv(file))
    print(f"\n100 rows: psdflow {ours * 1e3:.2f} ms, pandas.read_csv {pandas * 1e3:.2f} ms, ratio {ours / pandas:.2f}")
    assert ours <= 4 * pandas
