"""Output is tried before a long run and never put on top of what strata did not write."""

import os
import sys

import pytest

from strata.caution import CAUTION, MARK
from strata.cli import output
from strata.cli.terminal import announce_compilation, progress
from strata.errors import StrataError


def test_the_caution_holds_the_words_by_which_strata_knows_its_files():
    assert MARK in CAUTION


def test_a_file_of_another_program_is_not_overwritten(tmp_path):
    other = tmp_path / "result.nc"
    other.write_text("years of work")
    with pytest.raises(StrataError) as caught:
        output.writable_file(other)
    assert str(caught.value) == (
        f"{other}: exists and was not written by strata; choose another name"
    )
    assert other.read_text() == "years of work"


def test_a_file_of_strata_may_be_written_again(tmp_path):
    own = tmp_path / "result.nc"
    own.write_bytes(b"\x89HDF" + CAUTION.encode())
    assert output.writable_file(own) == own


def test_folders_are_made_with_their_parents(tmp_path):
    output.writable_file(tmp_path / "a" / "b" / "result.nc")
    assert (tmp_path / "a" / "b").is_dir()
    assert list((tmp_path / "a" / "b").iterdir()) == []


def test_a_folder_that_cannot_be_made_is_refused(tmp_path):
    (tmp_path / "file").write_text("")
    with pytest.raises(StrataError, match=r"file/out: cannot be written \(Not a directory\)$"):
        output.writable_folder(tmp_path / "file" / "out")


@pytest.mark.skipif(
    sys.platform == "win32" or os.geteuid() == 0, reason="root may write anywhere"
)
def test_a_folder_that_must_not_be_written_is_refused(tmp_path):
    tmp_path.chmod(0o500)
    with pytest.raises(StrataError, match=r"cannot be written \(Permission denied\)$"):
        output.writable_folder(tmp_path)


def test_a_folder_in_place_of_a_file_is_refused(tmp_path):
    with pytest.raises(StrataError, match=r"is a folder; the name of a file is required$"):
        output.writable_file(tmp_path)


def test_a_copy_leaves_what_a_user_changed(tmp_path):
    source, target = tmp_path / "source", tmp_path / "target"
    source.write_text("as delivered")
    assert output.copy_unless_there(source, target) is None
    assert target.read_text() == "as delivered"
    assert output.copy_unless_there(source, target) is None  # safe to run again
    target.write_text("my own lake")
    assert output.copy_unless_there(source, target) == target
    assert target.read_text() == "my own lake"
    assert sorted(path.name for path in tmp_path.iterdir()) == ["source", "target"]


def test_progress_never_touches_standard_output(capsys):
    with progress("waiting") as show:
        for share in (0.1, 0.4, 0.3, 1.0):  # reports of workers may come out of order
            show(share)
    shown = capsys.readouterr()
    assert shown.out == ""
    assert "waiting" in shown.err


def test_the_first_run_says_that_it_compiles(monkeypatch, capsys, tmp_path):
    from strata import compiled

    monkeypatch.setattr(compiled, "_cache_folder", lambda: str(tmp_path))
    announce_compilation()
    assert "first run: compiling" in capsys.readouterr().err
    (tmp_path / "formula.nbi").write_bytes(b"")
    announce_compilation()
    assert capsys.readouterr().err == ""
