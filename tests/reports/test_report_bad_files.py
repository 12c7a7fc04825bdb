"""Every file of bad/ is refused in one line that says where, what was found, what was expected, what to do."""

from pathlib import Path

import pytest

from psdflow.errors import InputError
from psdflow.reports import read

BAD = Path(__file__).parent / "bad"

# Parts of the message about each file.
REFUSED: dict[str, tuple[str, ...]] = {
    "negative_share.csv": ("row 7, column B", 'share is "-3.1"', "can't be negative", "Check the sign"),
    "word_in_shares.csv": ("row 3, column B", 'mass is "ten"'),
    "word_in_first_row.csv": ("row 2, column B", 'mass is "two"'),
    "word_in_last_row.csv": ("row 6, column B", 'mass is "x"'),
    "two_words_row.csv": ("table at row 5", "--columns"),
    "word_for_size.csv": ("row 3, column A", 'size is "abc"'),
    "size_repeated.csv": ("row 4, column A", '"180" stands twice'),
    "size_out_of_order.csv": ("row 4, column A", '"180" is out of order', "must fall"),
    "size_negative.csv": ("row 3, column A", 'size is "-180"', "can't be negative"),
    "size_huge.csv": ("row 2, column A", "25000 mm is no particle size"),
    "total_88.csv": ('column B "% retained" adds up to 88.00 %', "100 % is expected"),
    "total_stated_wrong.csv": ("row 9, column B", "given as 120", "add up to 100"),
    "cumulative_falls.csv": ("row 4, column B", "60 after 68"),
    "cumulative_other_way.csv": ("headed as cumulative finer", "--columns"),
    "cumulative_over_100.csv": ("goes up to 108.00 %",),
    "cumulative_mass_without_total.csv": ("neither a pan row nor the charge",),
    "percent_is_fraction.csv": ("is in % but adds up to 1",),
    "fraction_is_percent.csv": ("headed as a fraction but adds up to 100",),
    "loss_too_high.csv": ("105 weighed in, 100 found", "4.76% lost", "at most 2.0%"),
    "mixed_decimals.csv": ('"2,5"', '"10.25"', "--decimal"),
    "comma_both.csv": ("row 2", "more numbers than the 2 columns", "semicolons"),
    "thousand_or_decimal.csv": ('"1,250"', "--decimal"),
    "mass_thousand.csv": ("row 2, column B", '"1,250"', "thousands separator"),
    "no_header.csv": ("Columns seen: A (no header): 41.8", "--columns size=A,share=B"),
    "no_unit_small.csv": ('column A "Size" has no unit', "--size-unit"),
    "mesh_numbers.csv": ("mesh numbers", "--size-unit astm"),
    "sieve_numbers_unnamed.csv": ('"Sieve No." has no unit', "--size-unit"),
    "kind_unknown.csv": ("--kind sieve or --kind laser",),
    "classes_with_gap.csv": ("row 3, column A", "begins at 125 µm", "ends at 90 µm"),
    "classes_overlap.csv": ("row 5, column A", "begins at 8 µm", "ends at 6 µm"),
    "pan_far_below.csv": ("row 6, column A", "does not join", "90 µm"),
    "empty_cell.csv": ("row 3, column B", "the cell is empty"),
    "columns_contradict.csv": ("contradict each other at 90 µm", "28.00% against 38.00%"),
    "laser_columns_shifted.csv": ("contradict each other",),
    "percentiles_of_numbers.csv": ("row 2", "numbers of grains", "ask for the table of classes"),
    "percentiles_no_unit.csv": ("row 2, column B", '"12.3" has no unit', "--size-unit"),
    "percentiles_fall.csv": ("row 2", "d10 is 12.3 µm but d50 is 11.1 µm", "must rise"),
    "percentiles_without_fine_end.csv": ("row 2", "only d50, d90", "at least three"),
    "prose.txt": ("no table of sizes and shares",),
    "one_size.csv": ("at least two",),
    "all_zero.csv": ("adds up to 0",),
    "unknown_astm.csv": ("row 3, column A", '"No. 83"'),
    "pan_twice.csv": ("row 5, column A", "second pan row"),
    "pan_unknown_word.csv": ("row 8, column A", '"Kübel"'),
    "pan_unknown_word_after_gap.csv": ("row 9", '"Kübel 3"', "pan"),
    "subtotal_inside.csv": ("row 4, column A", '"Subtotal"'),
    "table_broken_by_heading.csv": ("row 6", "go on from the table above"),
    "line_inside_the_table.csv": ("row 8", "go on from the table above"),
    "two_lines_in_one.csv": ("row 2", "more numbers than the 2 columns"),
    "word_in_pan_row.csv": ("row 5, column B", 'mass is "1.2.3"'),
    "pan_inside.csv": ("row 4, column A", "the pan row stands among the sizes"),
    "pan_empty.csv": ("row 6, column B", "the pan row is empty", "Write 0"),
    "grams_in_percent.csv": ("row 5, column B", '"32 g"', "in a column in %"),
    "sizes_and_classes_mixed.csv": ("row 3, column A", "are mixed"),
    "one_sample_adds_to_80.csv": ('column C "Lot B (%)" adds up to 80.00 %',),
    "gross_below_tare.csv": ("row 3, column C", "388.2 is under the empty mass 398.2"),
    "empty.csv": ("the file is empty",),
    "blank.csv": ("the file is empty",),
    "picture.csv": ("a picture (PNG)",),
    "old_workbook.xls": (".xls", "save it as .xlsx or csv"),
    "binary.dat": ("no text table",),
    "archive.xlsx": ("holds no workbook",),
    "damaged.xlsx": ("damaged",),
    "workbook_date.xlsx": ("sheet Sheet, row 4, column B", '"2024-05-12"', "it is a date"),
    "workbook_formula_never_computed.xlsx": ("row 4, column B", '"=20+8"', "never computed"),
}


@pytest.mark.parametrize("path", sorted(BAD.iterdir()), ids=lambda p: p.name)
def test_bad_file_is_refused_in_one_line_that_says_why(path: Path) -> None:
    with pytest.raises(InputError) as caught:
        read(path)
    message = str(caught.value)
    assert message.startswith(path.name)
    assert "\n" not in message
    for part in REFUSED[path.name]:
        assert part in message
