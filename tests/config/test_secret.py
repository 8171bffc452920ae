"""The secret made on first use."""

from __future__ import annotations

import stat
from concurrent.futures import ThreadPoolExecutor

from config.secret import own_secret


def test_it_is_made_once_and_readable_by_its_owner_alone(tmp_path):
    file = tmp_path / "state" / "secret"
    made = own_secret(file)
    assert len(made) >= 50  # the length that Django's check security.W009 asks for
    assert own_secret(file) == made
    assert stat.S_IMODE(file.stat().st_mode) == 0o600
    assert [one.name for one in file.parent.iterdir()] == ["secret"]


def test_makers_at_the_same_moment_agree(tmp_path):
    file = tmp_path / "secret"
    with ThreadPoolExecutor(8) as pool:
        secrets = set(pool.map(lambda _: own_secret(file), range(64)))
    assert secrets == {file.read_text()}


def test_where_nothing_can_be_written_the_process_has_one_of_its_own(tmp_path):
    not_a_folder = tmp_path / "file"
    not_a_folder.touch()
    one, other = own_secret(not_a_folder / "secret"), own_secret(not_a_folder / "secret")
    assert len(one) >= 50
    assert one != other
