"""Blank books are made field by field, in the order in which they stand."""

from burntally_service.kernels.tally_rows import BLANK, Books


def test_blank_entries_stand_in_the_order_of_the_fields() -> None:
    assert tuple(BLANK) == Books.__struct_fields__
