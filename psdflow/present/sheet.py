"""The design-input sheet: rows as csv, everything as JSON."""

import json
import os
import re
import tempfile
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import IO, TYPE_CHECKING, Any

from psdflow.assessment import Assessment, Row
from psdflow.errors import InputError
from psdflow.present.text import Subject

if TYPE_CHECKING:
    import pandas as pd


def frame(assessment: Assessment, lot: int = 0) -> "pd.DataFrame":
    """The sheet of one lot as a table: key, value, low, high, unit, method, source, in_range, note; SI units."""
    import pandas as pd

    return pd.DataFrame(assessment.rows(lot), columns=list(Row._fields), dtype=object)


def as_dict(subjects: Sequence[Subject]) -> dict[str, Any]:
    """The JSON document: SI units, fractions 0..1."""
    from psdflow import __version__

    first = subjects[0].assessment
    return {
        "psdflow": __version__,
        "draws": first.draws,
        "seed": first.seed,
        "material": first.material.name,
        "duty": first.duty.name,
        "lots": [_lot(subject) for subject in subjects],
    }


def _lot(subject: Subject) -> dict[str, Any]:
    assessment, lot = subject.assessment, subject.lot
    rows = assessment.rows(lot)
    fields = ("value", "low", "high", "unit", "method", "source", "in_range", "note")
    return {
        "lot": subject.name,
        "report": subject.source,
        "quantities": {row.key: {name: getattr(row, name) for name in fields} for row in rows if row.value is not None},
        "absent": {row.key: row.note for row in rows if row.value is None},
        "alternatives": assessment.alternatives(lot),
        "classes": assessment.classes(lot),
        "indicators": assessment.indicators(lot),
        "assumptions": list(assessment.assumptions),
        "cautions": assessment.cautions,
        "warnings": [*subject.report_warnings, *assessment.warnings(lot)],
    }


def json_text(subjects: Sequence[Subject]) -> str:
    """The JSON document as text."""
    return json.dumps(as_dict(subjects), indent=1, ensure_ascii=False, allow_nan=False) + "\n"


@contextmanager
def replacing(path: Path, mode: str = "w") -> Iterator[IO[Any]]:
    """Open a file to write aside of ``path``, renamed onto it only when all went well.

    Raises
    ------
    InputError
        If the place can't be written.
    """
    temporary: str | None = None
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        descriptor, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.")
        text = {} if "b" in mode else {"encoding": "utf-8", "newline": ""}
        with os.fdopen(descriptor, mode, **text) as file:  # type: ignore[call-overload]
            yield file
        umask = os.umask(0)
        os.umask(umask)
        os.chmod(temporary, 0o666 & ~umask)
        os.replace(temporary, path)
        temporary = None
    except OSError as error:
        raise InputError(f"{path}: can't be written ({error.strerror or error})") from None
    finally:
        if temporary is not None and os.path.exists(temporary):
            os.unlink(temporary)


def file_stems(lots: Sequence[str]) -> list[str]:
    """A file name for each lot, none twice: letters, digits, dot, dash and underscore of any script, at most 80."""
    stems: list[str] = []
    for lot in lots:
        plain = re.sub(r"[^\w.-]+", "_", lot).strip("._")[:80] or "lot"
        stem, number = plain, 1
        while stem.casefold() in {other.casefold() for other in stems}:
            number += 1
            stem = f"{plain}-{number}"
        stems.append(stem)
    return stems


def write_csv(subject: Subject, path: Path) -> None:
    """The sheet of one lot as csv."""
    with replacing(path) as file:
        frame(subject.assessment, subject.lot).to_csv(file, index=False, lineterminator="\n")


def write_json(subjects: Sequence[Subject], path: Path) -> None:
    """Everything as JSON."""
    text = json_text(subjects)
    with replacing(path) as file:
        file.write(text)
