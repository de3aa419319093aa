"""Results appear whole or not at all."""

import errno
import os

import pytest

from forensics.errors import InputError
from pipelines.output import check_target, whole_folder


def write_results(target, text):
    with whole_folder(target) as folder:
        (folder / "summary.json").write_text(text)
        (folder / "report.html").write_text(text)


def write_and_fail(target, fault):
    with whole_folder(target) as folder:
        (folder / "summary.json").write_text("two")
        raise fault


def test_results_appear_under_new_folders(tmp_path):
    write_results(tmp_path / "a" / "b", "one")
    assert (tmp_path / "a" / "b" / "report.html").read_text() == "one"
    assert [p.name for p in (tmp_path / "a").iterdir()] == ["b"]


def test_results_are_replaced_whole_and_foreign_files_kept(tmp_path):
    target = tmp_path / "run"
    write_results(target, "one")
    (target / "report.pdf").write_text("one")
    (target / "remarks.txt").write_text("mine")
    (target / "photos").mkdir()
    (target / "photos" / "bit.jpg").write_text("worn")
    write_results(target, "two")
    assert (target / "summary.json").read_text() == "two"
    assert not (target / "report.pdf").exists()
    assert (target / "remarks.txt").read_text() == "mine"
    assert (target / "photos" / "bit.jpg").read_text() == "worn"
    assert [p.name for p in tmp_path.iterdir()] == ["run"]


@pytest.mark.parametrize("fault", [RuntimeError("no"), KeyboardInterrupt()])
def test_fault_leaves_earlier_results_and_no_litter(tmp_path, fault):
    target = tmp_path / "run"
    write_results(target, "one")
    with pytest.raises(type(fault)):
        write_and_fail(target, fault)
    assert (target / "summary.json").read_text() == "one"
    assert [p.name for p in tmp_path.iterdir()] == ["run"]


def test_fault_takes_new_parents_away_again(tmp_path):
    with pytest.raises(RuntimeError), whole_folder(tmp_path / "a" / "b" / "c"):
        raise RuntimeError
    assert list(tmp_path.iterdir()) == []


def test_full_disk_is_a_refusal(tmp_path):
    with pytest.raises(InputError, match="can't be written: No space left"), whole_folder(tmp_path / "run"):
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))


def test_failed_swap_puts_earlier_results_back(tmp_path, monkeypatch):
    target = tmp_path / "run"
    write_results(target, "one")
    rename = type(target).rename

    def stubborn(self, to):
        if self.name.endswith(".part"):
            raise OSError(errno.EACCES, os.strerror(errno.EACCES))
        return rename(self, to)

    monkeypatch.setattr(type(target), "rename", stubborn)
    with pytest.raises(InputError, match="can't be written"):
        write_results(target, "two")
    assert (target / "summary.json").read_text() == "one"
    assert [p.name for p in tmp_path.iterdir()] == ["run"]


def test_refuses_a_file(tmp_path):
    (tmp_path / "run").write_text("")
    with pytest.raises(InputError, match="is a file"):
        check_target(tmp_path / "run")


def test_refuses_a_file_as_parent(tmp_path):
    (tmp_path / "run").write_text("")
    with pytest.raises(InputError, match="can't be made"):
        check_target(tmp_path / "run" / "deeper")


def test_refuses_somebody_elses_folder(tmp_path):
    (tmp_path / "thesis.txt").write_text("years of work")
    with pytest.raises(InputError, match="not earlier results"):
        check_target(tmp_path)
    assert (tmp_path / "thesis.txt").exists()


def test_refuses_the_present_folder(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    with pytest.raises(InputError, match="where the program runs"):
        check_target(tmp_path)


def test_takes_an_empty_folder(tmp_path):
    (tmp_path / "run").mkdir()
    write_results(tmp_path / "run", "one")
    assert (tmp_path / "run" / "summary.json").exists()
