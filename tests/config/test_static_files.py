"""Files to serve are made again only where a source changed."""

from __future__ import annotations

import os

import brotli
import pytest

from config.static_files import collect


@pytest.fixture
def source(settings, tmp_path):
    settings.STATICFILES_FINDERS = ["django.contrib.staticfiles.finders.FileSystemFinder"]
    settings.STATICFILES_DIRS = [tmp_path / "from"]
    settings.STATIC_ROOT = tmp_path / "to"
    file = tmp_path / "from" / "page.css"
    file.parent.mkdir()
    file.write_text("p {}")
    return file


def made(source):
    return (source.parents[1] / "to" / "page.css").read_text()


def test_the_first_time_makes_them_and_the_second_does_nothing(source):
    assert collect()
    assert made(source) == "p {}"
    assert not collect()


def test_a_source_that_changed_is_made_again_even_at_the_same_size(source):
    collect()
    source.write_text("q {}")
    later = source.stat().st_mtime + 5
    os.utime(source, (later, later))
    assert collect()
    assert made(source) == "q {}"


def test_what_was_broken_off_is_made_again(source):
    collect()
    (source.parents[1] / "to" / "made-of.sha256").unlink()
    assert collect()


def test_what_no_page_asks_for_is_left_out(source):
    unused = source.parent / "redoc" / "big.js"
    unused.parent.mkdir()
    unused.write_text("1")
    collect()
    assert not (source.parents[1] / "to" / "redoc").exists()


def test_a_file_is_served_small_and_comes_back_whole(source, settings):
    """Oracle: brotli's own reader."""
    settings.STORAGES = {
        **settings.STORAGES,
        "staticfiles": {"BACKEND": "config.static_storage.StaticStorage"},
    }
    source.write_text("p { color: red }\n" * 200)
    assert collect()
    (small,) = settings.STATIC_ROOT.glob("page.*.css.br")
    assert brotli.decompress(small.read_bytes()) == source.read_bytes()
    assert not (settings.STATIC_ROOT / "page.css").exists()
