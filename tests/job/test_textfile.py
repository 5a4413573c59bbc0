from __future__ import annotations

import codecs
import os
import stat

import pytest

from calcsheet.job import textfile
from calcsheet.job.errors import ConflictError, InputError, NotSavedError
from calcsheet.job.textfile import Encoding, Stamp, decode, read, write

OLD, NEW = b"old", b"new and longer"


@pytest.fixture
def path(tmp_path):
    path = tmp_path / "storeys.csv"
    path.write_bytes(OLD)
    return path


@pytest.mark.parametrize(
    ("content", "encoding"),
    [
        ("Gebäude ψ".encode(), Encoding("utf-8")),
        (codecs.BOM_UTF8 + "ψ".encode(), Encoding("utf-8", codecs.BOM_UTF8)),
        (codecs.BOM_UTF16_LE + "ψ".encode("utf-16-le"), Encoding("utf-16-le", codecs.BOM_UTF16_LE)),
        (codecs.BOM_UTF16_BE + "ψ".encode("utf-16-be"), Encoding("utf-16-be", codecs.BOM_UTF16_BE)),
        ("Gebäude m²".encode("cp1252"), Encoding("cp1252")),
    ],
)
def test_encodings_are_found_and_kept(content, encoding):
    text, found = decode(content, "storeys.csv")
    assert found == encoding
    assert "ä" in text or text == "ψ"
    assert found.encode(text, "storeys.csv") == content


@pytest.mark.parametrize("content", [b"\x81\xff", codecs.BOM_UTF16_LE + b"a", codecs.BOM_UTF8 + b"\xff"])
def test_what_is_no_text_is_refused(content):
    with pytest.raises(InputError) as caught:
        decode(content, "storeys.csv")
    message = "storeys.csv: not a text in UTF-8, UTF-16 or Windows-1252; save the file as UTF-8"
    assert str(caught.value) == message


def test_a_character_that_the_encoding_lacks_is_refused():
    with pytest.raises(InputError) as caught:
        Encoding("cp1252").encode("Dach ψ", "storeys.csv")
    assert str(caught.value) == (
        'storeys.csv: "ψ" can\'t be written in cp1252, the encoding of the file; save the file as UTF-8 first'
    )


def test_reading_gives_text_and_stamp(path):
    file = read(path)
    assert (file.text, file.encoding, file.stamp) == ("old", Encoding(), Stamp.of(OLD))
    assert textfile.stamp(path) == file.stamp
    assert textfile.stamp(path.with_name("other")) is None


def test_what_cannot_be_opened_is_refused(tmp_path):
    with pytest.raises(InputError) as caught:
        read(tmp_path / "none.csv")
    message = "none.csv: can't be read (No such file or directory); must be a file that can be opened"
    assert str(caught.value) == message


def test_writing_replaces_the_file_and_keeps_its_mode(path):
    path.chmod(0o640)
    assert write(path, NEW, Stamp.of(OLD)) == Stamp.of(NEW)
    assert path.read_bytes() == NEW
    assert stat.S_IMODE(path.stat().st_mode) == 0o640
    assert os.listdir(path.parent) == ["storeys.csv"]


def test_writing_follows_a_link(path, tmp_path):
    link = tmp_path / "link.csv"
    link.symlink_to(path)
    write(link, NEW, Stamp.of(OLD))
    assert link.is_symlink()
    assert path.read_bytes() == NEW


def test_a_new_file_must_not_be_there_yet(tmp_path, path):
    write(tmp_path / "new.csv", NEW, None)
    assert (tmp_path / "new.csv").read_bytes() == NEW
    with pytest.raises(ConflictError):
        write(path, NEW, None)


def test_a_file_changed_on_disk_is_a_conflict(path):
    stamp = read(path).stamp
    path.write_bytes(b"by somebody else")
    with pytest.raises(ConflictError) as caught:
        write(path, NEW, stamp)
    assert str(caught.value) == (
        "storeys.csv: not saved, changed on disk since it was read; load it again, or keep what was typed here"
    )
    assert path.read_bytes() == b"by somebody else"


def test_a_file_removed_from_disk_is_a_conflict(path):
    stamp = read(path).stamp
    path.unlink()
    with pytest.raises(ConflictError, match="not saved, removed from disk since it was read"):
        write(path, NEW, stamp)
    assert not path.exists()


@pytest.mark.parametrize("failing", ["fsync", "replace"])
def test_an_interrupted_write_leaves_the_old_file(path, monkeypatch, failing):
    def interrupt(*_):
        raise KeyboardInterrupt

    monkeypatch.setattr(textfile.os, failing, interrupt)
    with pytest.raises(KeyboardInterrupt):
        write(path, NEW, Stamp.of(OLD))
    assert path.read_bytes() == OLD
    assert os.listdir(path.parent) == ["storeys.csv"]


@pytest.mark.parametrize(
    ("error", "message"),
    [
        (
            PermissionError(13, "Permission denied"),
            "storeys.csv: not saved, the file is read-only or held open by another program; "
            "close it there and save again",
        ),
        (
            OSError(28, "No space left on device"),
            "storeys.csv: not saved (No space left on device); mend this and save again",
        ),
    ],
)
def test_a_refused_write_says_not_saved(path, monkeypatch, error, message):
    def refuse(*_):
        raise error

    monkeypatch.setattr(textfile.os, "replace", refuse)
    with pytest.raises(NotSavedError) as caught:
        write(path, NEW, Stamp.of(OLD))
    assert str(caught.value) == message
    assert path.read_bytes() == OLD
    assert os.listdir(path.parent) == ["storeys.csv"]


def test_a_read_only_file_is_not_replaced(path, monkeypatch):
    # asked of os.access, since a superuser may write to anything
    monkeypatch.setattr(textfile.os, "access", lambda *_: False)
    with pytest.raises(NotSavedError, match="not saved, the file is read-only"):
        write(path, NEW, Stamp.of(OLD))
    assert path.read_bytes() == OLD
