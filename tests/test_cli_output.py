"""Output is tried before a long run and never put on top of what strata did not write."""

import os
import sys

import pytest
from click.testing import CliRunner
from matplotlib import image

from strata.caution import CAUTION, MARK
from strata.cli import output
from strata.cli.group import group
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


def test_inspect_draws_todays_column_and_may_draw_it_again(folder):
    out = folder.path / "pictures" / "today.png"
    for _ in range(2):
        result = CliRunner().invoke(group, ["inspect", str(folder.lake), "--figure", str(out)])
        assert result.exit_code == 0, result.stderr
    assert f"figure: {out}" in result.stdout
    assert CAUTION.encode() in out.read_bytes()
    height, width, _ = image.imread(out).shape
    assert (width, height) == (1440, 1140)  # 9.6 by 7.6 inches
    assert [path.name for path in out.parent.iterdir()] == ["today.png"]


def test_a_figure_that_cannot_be_kept_is_refused_before_the_lake_is_read(folder):
    (folder.path / "mine.png").write_text("mine")
    for name, words in (
        ("today.pdf", "today.pdf: figures are written as PNG; a name in .png is required"),
        ("mine.png", "mine.png: exists and was not written by strata; choose another name"),
    ):
        result = CliRunner().invoke(group, ["inspect", "nowhere.toml", "--figure", name])
        assert (result.exit_code, result.stdout) == (2, "")
        assert words in result.stderr
    assert (folder.path / "mine.png").read_text() == "mine"
