"""What percentile reports write over and beside their sizes: "d10", "D[4,3]", "Sauter mean", averages, spreads."""

import re

from psdflow.reports.numerals import Cell, plain
from psdflow.reports.words import AVERAGE, UNUSED

# "d10", "x 50", "D(0.9)", "d[v,0.5]", "dv90", "D50 (µm)", "x10,3"; and the means "d32", "D[4,3]".
_LABEL = re.compile(
    r"[dx] ?[_ ]?(?P<basis>[vn])? ?[\[(_]? ?(?:(?P<inner>[vn]) ?[,_ ] ?)?"
    r"(?:(?P<mean>[34] ?[.,]? ?[23])|0?[.,](?P<part>\d{1,2})|(?P<percent>\d{1,2})(?:,(?P<r>[0-3]))?)(?!\d) ?[\])]?(?: .*|[\[(,].*)?"
)
_MEANS = {"32": "d32", "43": "d43"}
_OPENED, _CLOSED = re.compile(r".*[dx] ?[\[(] ?[vn\d]", re.IGNORECASE), re.compile(r"\d[.,]?\d* ?[\])].*")
_COUNTED = re.compile(
    r"(?<![a-z])(?:number[ -](?:based|basis|weighted|distribution|percent|%)|(?:by|on) number|q0|anzahlverteilung|anzahlbezogen|en nombre|en numero)"
)
_SAUTER, _MEDIAN = re.compile(r"sauter.*"), re.compile(r"(?:median\w*|mediane|mediana)(?: .*)?")


def percentile_label(cell: Cell) -> float | str | None:
    """The share of a percentile's label, "d32" or "d43", or None; "number" if it says it counts grains."""
    if not isinstance(cell, str) or not cell or len(cell) > 60:
        return None
    text = plain(cell)
    if _SAUTER.fullmatch(text):
        return "d32"
    if _MEDIAN.fullmatch(text):
        return 0.5
    match = _LABEL.fullmatch(text)
    if match is None:
        return None
    if match["mean"]:
        return _MEANS.get(re.sub(r"\D", "", match["mean"]))
    if "n" in (match["basis"], match["inner"]) or match["r"] in ("0", "1", "2"):
        return "number"
    part = match["part"]
    share = float(f"0.{part}") if part else float(match["percent"]) / 100
    return share if 0 < share < 1 else None


def counts_grains(row: list[Cell]) -> bool:
    """Whether a row says that grains were counted."""
    return any(isinstance(c, str) and bool(_COUNTED.search(plain(c))) for c in row)


def rejoined(row: list[Cell]) -> list[Cell]:
    """A row in which "D[3,2]" was split at its comma, put together again."""
    joined: list[Cell] = []
    for cell in row:
        before = joined[-1] if joined else ""
        if isinstance(cell, str) and isinstance(before, str) and _OPENED.fullmatch(before) and _CLOSED.fullmatch(cell):
            joined[-1] = f"{before},{cell}"
        else:
            joined.append(cell)
    return joined


def field_split(row: list[Cell]) -> list[Cell]:
    """ "D10: 12.3 µm" in one cell becomes two."""
    first = next((cell for cell in row if cell != ""), "")
    if isinstance(first, str) and ":" in first and percentile_label(first.split(":")[0]) is not None:
        head, _, value = first.partition(":")
        return [head.strip(), *([value.strip()] if value.strip() else []), *[c for c in row[1:] if c != ""]]
    return row


def no_sample(name: str) -> bool:
    """Whether a row or column is an average, a spread or a limit by its name."""
    text = plain(name)
    return bool(UNUSED.search(text) or AVERAGE.fullmatch(text))
