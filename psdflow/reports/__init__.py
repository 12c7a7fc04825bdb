"""A size report file -> reports: cells, tables, recognised columns, checked classes."""

from psdflow.reports.canonical import canonical_text
from psdflow.reports.merged import merged_report
from psdflow.reports.reader import read, read_folder
from psdflow.reports.report import Report

__all__ = ["Report", "canonical_text", "merged_report", "read", "read_folder"]
