"""Many processes that write to one embedded database at once, two of them killed."""

from __future__ import annotations

import pytest

from tests.faults.program import PATIENCE_S, wait_until

pytestmark = pytest.mark.fault

WRITERS = 8
WRITES = 40


@pytest.fixture
def program(embedded):
    embedded.sql("INSERT INTO trial_counter VALUES (0)")
    yield embedded
    embedded.empty()


def test_eight_writers_wait_for_each_other_and_lose_nothing(program):
    """Oracle: a counter that everyone reads and raises ends at the number of rows written."""
    count = ("--count", str(WRITES))
    writers = [program.begin("write_trials", f"w{n}", *count) for n in range(WRITERS)]
    killed, whole = writers[:2], writers[2:]
    for writer in killed:
        wait_until(lambda writer=writer: len(program.said(writer).split()) >= WRITES // 8)
        writer.kill()
        writer.wait()
    for writer in whole:
        assert writer.wait(PATIENCE_S) == 0, program.said(writer, "err")
        assert program.said(writer, "err") == ""

    written = [row for (row,) in program.sql("SELECT run FROM trial_effect")]
    said = {name for writer in writers for name in program.said(writer).split()}
    assert len(written) == len(set(written))
    assert said <= set(written)
    assert len(set(written) - said) <= len(killed)  # committed, and killed before it was said
    assert len([name for name in written if name[:2] not in ("w0", "w1")]) == WRITES * len(whole)
    assert program.sql("SELECT value FROM trial_counter") == [(len(written),)]
