"""The strict decoding of the two tables, and the room's light doorway."""

import subprocess
import sys

import msgspec
import pytest

import clinicalc.units
from clinicalc.errors import ShippedFileMissing
from clinicalc.resources import read_shipped
from clinicalc.units.table import QuantityTable, UnitTable, _decode, quantity_table, unit_table


def test_tables_are_decoded_once() -> None:
    assert unit_table() is unit_table()
    assert quantity_table() is quantity_table()


@pytest.mark.parametrize(
    ("name", "table"), [("resources/units.json", UnitTable), ("resources/quantities.json", QuantityTable)]
)
def test_a_misspelt_or_missing_field_is_noticed(name: str, table: type[UnitTable] | type[QuantityTable]) -> None:
    good = read_shipped(name)
    assert msgspec.json.decode(good, type=table)
    with pytest.raises(msgspec.ValidationError):
        msgspec.json.decode(good.replace(b'"notice"', b'"notices"'), type=table)
    with pytest.raises(msgspec.ValidationError):
        msgspec.json.decode(good.replace(b"{", b'{"surplus": 1, ', 1), type=table)


def test_a_damaged_installation_is_told_in_words() -> None:
    with pytest.raises(ShippedFileMissing, match="damaged"):
        _decode("resources/fonts/SourceSans3-OFL.md", UnitTable)
    with pytest.raises(ShippedFileMissing, match="missing"):
        _decode("resources/no-such-table.json", UnitTable)


def test_the_room_opens_without_heavy_libraries() -> None:
    heavy = "{'numpy', 'pandas', 'scipy', 'statsmodels', 'reportlab', 'PySide6', 'pint', 'ucumvert'}"
    use = "import sys, clinicalc.units as u; u.all_quantities(); u.find_unit('kg')"
    code = f"{use}; sys.exit(bool({heavy} & {{*sys.modules}}))"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0


def test_the_room_offers_what_it_names() -> None:
    assert len(set(clinicalc.units.__all__)) == len(clinicalc.units.__all__)
    assert all(hasattr(clinicalc.units, name) for name in clinicalc.units.__all__)
