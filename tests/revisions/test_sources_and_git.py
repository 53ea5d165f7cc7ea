"""Where a record comes from: files, issued PDFs, and revisions in real repositories."""
from __future__ import annotations

import shutil
from pathlib import Path

import pikepdf
import pytest

from calcpack.errors import CommandError, MissingPartError, SpecError
from calcpack.revisions import load
from calcpack.revisions.git import SECONDS, repository


def fault_of(error: pytest.ExceptionInfo) -> tuple[str, str | None]:
    """What is told, and the hint."""
    [fault] = error.value.faults
    return fault.what, fault.hint


def issued_pdf(path: Path, files: dict[str, bytes]) -> Path:
    """A PDF of one empty page that carries ``files``."""
    document = pikepdf.new()
    document.add_blank_page()
    for name, content in files.items():
        document.attachments[name] = pikepdf.AttachedFileSpec(document, content, filename=name)
    document.save(path)
    return path


def test_a_spec_a_record_and_an_issued_pdf_give_one_record(tmp_path, cooler, cooler_text):
    record = cooler()
    (tmp_path / "sheet.yaml").write_text(cooler_text, "utf-8")
    (tmp_path / "kept.json").write_text(record.to_json(), "utf-8")
    issued_pdf(tmp_path / "BC-7-A.pdf", {"sheet.yaml": cooler_text.encode(), "BC-7.json": record.to_json().encode()})
    solved, kept, carried = (load(name, tmp_path) for name in ("sheet.yaml", "kept.json", "BC-7-A.pdf"))
    assert kept.data == carried.data == record.data
    assert solved.data["steps"] == record.data["steps"]
    assert solved.data["spec_sha256"] == record.data["spec_sha256"]
    assert load(str(tmp_path / "kept.json")).data == record.data


def test_a_path_with_a_colon_that_exists_is_a_path(tmp_path, cooler):
    (tmp_path / "v1:kept.json").write_text(cooler().to_json(), "utf-8")
    assert load("v1:kept.json", tmp_path).number == "BC-7"


@pytest.mark.parametrize(("files", "told"), [
    ({}, "carries no record"), ({"notes.txt": b"x"}, "carries no record"),
    ({"a.json": b"{}", "b.json": b"{}"}, "carries several files that may be its record"),
    ({"a.json": b"{}"}, "is not a record of format 1"), ({"a.json": b"\xff"}, "is not a record")])
def test_pdfs_without_one_record(tmp_path, files, told):
    issued_pdf(tmp_path / "a.pdf", files)
    with pytest.raises(CommandError) as error:
        load("a.pdf", tmp_path)
    assert told in fault_of(error)[0]


def test_files_that_are_not_what_they_are_called(tmp_path):
    for name, content, told in (("a.pdf", b"no pdf", "cannot be read as a PDF"), ("a.json", b"{", "is not a record"),
                                ("a.txt", b"x", "is no spec, record or issued PDF by its name")):
        (tmp_path / name).write_bytes(content)
        with pytest.raises(CommandError) as error:
            load(name, tmp_path)
        assert told in fault_of(error)[0]


def test_a_wrong_spec_tells_its_own_faults(tmp_path):
    (tmp_path / "a.yaml").write_bytes(b"calcpack: \xff")
    with pytest.raises(SpecError, match="not UTF-8"):
        load("a.yaml", tmp_path)


def test_what_is_not_there_is_told_with_what_is(tmp_path):
    (tmp_path / "cooler.yaml").write_text("x", "utf-8")
    (tmp_path / "folder").mkdir()
    with pytest.raises(CommandError) as error:
        load("coolr.yaml", tmp_path)
    assert fault_of(error) == ("there is no file 'coolr.yaml'", "did you mean 'cooler.yaml'?")
    with pytest.raises(CommandError) as error:
        load("folder", tmp_path)
    assert fault_of(error)[0] == "'folder' is not a file"
    with pytest.raises(CommandError) as error:
        load("nowhere/a.yaml", tmp_path)
    assert fault_of(error)[1] == f"there is no folder {tmp_path / 'nowhere'}"
    with pytest.raises(CommandError, match="cannot be seen"):
        load("a\0b", tmp_path)


@pytest.fixture
def works(tmp_path, git, cooler, cooler_text) -> Path:
    """A repository: v1 holds specs/cooler.yaml and its record, then the duty grows, then the spec is renamed."""
    folder = tmp_path / "works"
    (folder / "specs").mkdir()
    (folder / "specs/cooler.yaml").write_text(cooler_text, "utf-8")
    (folder / "specs/kept.json").write_text(cooler().to_json(), "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "First issue")
    git("tag", "v1")
    (folder / "specs/cooler.yaml").write_text(cooler_text.replace("120 kW", "150 kW"), "utf-8")
    git("commit", "-q", "-a", "-m", "Larger duty")
    git("mv", "specs/cooler.yaml", "specs/wash-water.yaml")
    git("commit", "-q", "-m", "Call it by what it cools")
    return folder


def test_a_spec_and_a_record_at_a_revision(works):
    for folder, name in ((works, "specs/cooler.yaml"), (works, "./specs/cooler.yaml"), (works / "specs", "cooler.yaml"),
                         (works / "specs", "specs/cooler.yaml"), (works / "specs", "../specs/cooler.yaml")):
        assert load(f"v1:{name}", folder).data["inputs"][0]["shown"] == "120"
    assert load("v1:specs/kept.json", works).number == "BC-7"
    assert load("HEAD:specs/wash-water.yaml", works).data["inputs"][0]["shown"] == "150"
    assert load("v1:specs/cooler.yaml", works).data["spec_file"] == "cooler.yaml"


def test_a_renamed_spec_is_followed_to_its_earlier_names(works, git):
    assert load("v1:specs/wash-water.yaml", works).data["inputs"][0]["shown"] == "120"
    git("mv", "specs/wash-water.yaml", "bc-7.yaml")
    # Renamed in the index alone, then by a commit: two names back.
    assert load("HEAD:bc-7.yaml", works).data["inputs"][0]["shown"] == "150"
    git("commit", "-q", "-m", "By number")
    assert load("v1:bc-7.yaml", works).data["inputs"][0]["shown"] == "120"


def test_a_rename_is_found_from_a_branch_of_its_own(works, git):
    git("checkout", "-q", "-b", "trial", "v1")
    git("commit", "-q", "--allow-empty", "-m", "Aside")
    git("checkout", "-q", "main")
    assert load("trial:specs/wash-water.yaml", works).data["inputs"][0]["shown"] == "120"


def test_names_with_blanks_and_other_letters(works, git):
    git("mv", "specs/wash-water.yaml", "Kühler für BC 7.yaml")
    git("commit", "-q", "-m", "By name")
    assert load("HEAD:Kühler für BC 7.yaml", works).number == "BC-7"
    assert load("v1:Kühler für BC 7.yaml", works).data["inputs"][0]["shown"] == "120"


def test_unknown_revisions_and_paths(works):
    told = {}
    for text in ("v2:specs/cooler.yaml", "mian:specs/cooler.yaml", "v1:specs/coler.yaml", "v1:unlike-any.yaml",
                 "--help:specs/cooler.yaml", "v1:../../etc/passwd", "v1:specs", "v1:", ":specs/cooler.yaml"):
        with pytest.raises(CommandError) as error:
            load(text, works)
        told[text] = fault_of(error)
    assert told["v2:specs/cooler.yaml"] == (
        "git knows no revision 'v2'", "'git tag' and 'git log' list what there is")
    assert told["mian:specs/cooler.yaml"][1] == "did you mean 'main'?"
    assert told["v1:specs/coler.yaml"] == ("there is no file 'specs/coler.yaml' at revision v1",
                                           "did you mean v1:specs/cooler.yaml?")
    assert told["v1:unlike-any.yaml"][1] == "'git ls-tree -r --name-only v1' lists what stood there"
    assert told["--help:specs/cooler.yaml"][0] == "git knows no revision '--help'"
    assert told["v1:../../etc/passwd"][0] == "there is no file '../../etc/passwd' at revision v1"
    assert told["v1:specs"][0] == "there is no file 'specs' at revision v1"
    assert told["v1:"][0] == "'v1:' names a revision and no file"
    assert told[":specs/cooler.yaml"][0] == "git knows no revision ''"


def test_a_folder_that_is_in_no_work_tree(tmp_path, monkeypatch):
    monkeypatch.setenv("GIT_CEILING_DIRECTORIES", str(tmp_path.parent))
    with pytest.raises(CommandError) as error:
        load("v1:a.yaml", tmp_path)
    assert fault_of(error)[0] == f"{tmp_path} is not in a work tree of git"


def test_a_shallow_clone_says_what_it_lacks(works, tmp_path, git):
    git("clone", "-q", "--depth", "1", works.as_uri(), str(tmp_path / "clone"))
    assert load("HEAD:specs/wash-water.yaml", tmp_path / "clone").data["inputs"][0]["shown"] == "150"
    with pytest.raises(CommandError) as error:
        load("v1:specs/cooler.yaml", tmp_path / "clone")
    assert "git fetch --unshallow" in (fault_of(error)[1] or "")


def test_a_second_work_tree(works, tmp_path, git):
    git("worktree", "add", "-q", str(tmp_path / "aside"), "v1")
    assert load("main:specs/wash-water.yaml", tmp_path / "aside").data["inputs"][0]["shown"] == "150"
    assert repository(tmp_path / "aside" / "specs").top == (tmp_path / "aside").resolve()


def test_the_folder_decides_and_not_what_a_hook_exports(works, tmp_path, git, monkeypatch):
    git("init", "-q", str(tmp_path / "other"))
    monkeypatch.setenv("GIT_DIR", str(tmp_path / "other/.git"))
    assert load("v1:specs/cooler.yaml", works).number == "BC-7"


def test_settings_of_the_repository_run_no_program(works, tmp_path, git):
    trap = tmp_path / "trap.sh"
    trap.write_text(f"#!/bin/sh\ntouch '{tmp_path}/sprung'\ncat \"$1\"\n", "utf-8")
    trap.chmod(0o755)
    (works / ".gitattributes").write_text("*.yaml diff=trap filter=trap\n", "utf-8")
    for key in ("core.fsmonitor", "diff.external", "diff.trap.textconv", "filter.trap.smudge"):
        git("config", key, str(trap))
    git("mv", "-f", "specs/wash-water.yaml", "specs/by-hand.yaml", settings=("core.fsmonitor=false",))
    (works / "specs/by-hand.yaml").touch()
    load("HEAD:specs/by-hand.yaml", works)
    assert not (tmp_path / "sprung").exists()
    git("status", "--short")
    assert (tmp_path / "sprung").exists()              # the trap is one: a plain command of git springs it


def test_without_git_the_missing_part_is_named(works, tmp_path, monkeypatch):
    monkeypatch.setenv("PATH", str(tmp_path))
    with pytest.raises(MissingPartError) as error:
        load("v1:specs/cooler.yaml", works)
    assert fault_of(error)[1].startswith("install git")
    assert load("specs/kept.json", works).number == "BC-7"


def test_a_git_that_does_not_answer(works, tmp_path, monkeypatch):
    slow = tmp_path / "bin"
    slow.mkdir()
    (slow / "git").write_text(f"#!{shutil.which('sh')}\nexec {shutil.which('sleep')} 20\n", "utf-8")
    (slow / "git").chmod(0o755)
    monkeypatch.setenv("PATH", str(slow))
    monkeypatch.setattr("calcpack.revisions.git.SECONDS", 0.2)
    assert SECONDS == 30
    with pytest.raises(CommandError, match=r"git gave no answer within 0\.2 s"):
        load("v1:specs/cooler.yaml", works)


def test_a_repository_of_somebody_else(works, tmp_path, monkeypatch):
    monkeypatch.setenv("GIT_TEST_ASSUME_DIFFERENT_OWNER", "1")
    with pytest.raises(CommandError) as error:
        load("v1:specs/cooler.yaml", works)
    assert fault_of(error)[0].startswith("git does not trust")
