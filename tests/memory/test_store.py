"""Texts by key in one file: what is damaged or moved is not read, and many processes may write."""

import subprocess
import sys

import pytest

from verify.memory.store import FILE, DamagedError, Store


def test_a_damaged_text_is_not_read(memory, tmp_path):
    store = memory.store
    store.put("a", "text")
    with store._open() as connection, connection:
        connection.execute("UPDATE results SET text = 'other'")
    assert (store.get("a"), store.refused()) == (None, 1)


def test_a_text_under_another_key_is_not_taken(memory):
    store = memory.store
    store.put("a", "text")
    with store._open() as connection, connection:
        connection.execute("UPDATE results SET key = 'b'")
    assert store.get("b") is None


def test_a_file_that_is_no_database_is_named(tmp_path):
    (tmp_path / FILE).write_bytes(b"not a database, but long enough to be looked at as one" * 100)
    with pytest.raises(DamagedError, match=f"--cache: the memory is damaged: file is not a database; delete {FILE}"):
        Store(tmp_path).get("a")


def test_many_processes_write_at_once(tmp_path):
    code = (
        "import sys\nfrom verify.memory.store import Store\nstore = Store(sys.argv[1])\n"
        "for i in range(60): store.put(f'{sys.argv[2]}-{i}', 'x' * 1000)"
    )
    running = [subprocess.Popen([sys.executable, "-c", code, str(tmp_path), name]) for name in "abc"]
    assert [process.wait() for process in running] == [0, 0, 0]
    store = Store(tmp_path)
    assert all(store.get(f"{name}-{i}") for name in "abc" for i in range(60))
