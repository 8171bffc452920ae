"""Every wrong pack is refused whole, naming file, line or cell, and field."""

import pytest

from structures.errors import Refused
from structures.intake.survey_pack import read_pack
from tests.structures.intake.wrong_packs import WRONG_PACKS


@pytest.mark.parametrize("wrong", WRONG_PACKS, ids=lambda wrong: wrong.name)
def test_a_wrong_pack_is_refused_at_its_place(wrong, tmp_path):
    """Oracle: the place and field written beside each pack of the table."""
    source = wrong.write(tmp_path)
    with pytest.raises(Refused) as refused:
        read_pack(source)
    blocking = [f for f in refused.value.findings if f.level == "block"]
    where = wrong.where.format(folder=tmp_path.name)
    assert (where, wrong.field) in {(f.where, f.field) for f in blocking}
    assert all(f.what.endswith((".", "?")) and f.remedy for f in blocking)


def test_the_table_names_each_pack_once():
    names = [wrong.name for wrong in WRONG_PACKS]
    assert len(names) == len(set(names)) >= 60
