"""What the carryover stage puts on the sheet."""

from psdflow.case import Case
from psdflow.results import Findings


def carryover_stage(case: Case, found: Findings) -> None:
    """In work."""
