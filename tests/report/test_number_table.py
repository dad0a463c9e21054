"""Tables of numbers as CSV."""

import numpy as np

from toeline.report.number_table import NumberTable, number_column, quantity_column, text_column
from toeline.units import Display, UnitSystem


def test_a_table_has_units_in_its_header_and_nothing_where_there_is_no_value():
    values = np.array([0.3048, np.nan, -1e-9])
    table = NumberTable((
        text_column("gate, bay", ["A", "B", 'C "old"']),
        quantity_column("toe", values, "length", Display(UnitSystem.us_customary)),
        number_column("use", "%", np.array([1.0, 2.0, 3.0])),
    ))  # fmt: skip
    assert table.csv_text() == ('"gate, bay",toe [ft],use [%]\nA,1.0000,1.0000\nB,,2.0000\n"C ""old""",0.0000,3.0000\n')
