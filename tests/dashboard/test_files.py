"""The folder: nothing outside it, nothing written over unseen changes, whole or not at all."""

from __future__ import annotations

import os

import pytest

from outcouple.errors import UserMistake
from outcouple_dashboard.documents import LONGEST_TEXT
from outcouple_dashboard.files import Changed, Folder

from .conftest import TANK


def test_names_are_those_of_the_folder(folder):
    (folder / "deep").mkdir()
    (folder / "deep" / "two.toml").write_text("")
    (folder / ".hidden.toml").write_text("")
    assert Folder(folder).names() == ["deep/two.toml", "force_cell.toml", TANK]


@pytest.mark.parametrize(
    "name",
    [
        "../x.toml",
        "/etc/passwd",
        "a/../../x.toml",
        "",
        ".hidden.toml",
        "deep/.x.toml",
        "x.toml\0",
        "..\\x.toml.exe",
    ],
)
def test_what_lies_outside_is_refused(folder, name):
    (folder.parent / "x.toml").write_text("secret")
    for act in (
        Folder(folder).read,
        lambda one: Folder(folder).save(one, "", ""),
        lambda one: Folder(folder).save_as(one, ""),
    ):
        with pytest.raises(UserMistake):
            act(name)
    assert (folder.parent / "x.toml").read_text() == "secret"


def test_links_that_lead_outside_are_refused(folder, tmp_path_factory):
    outside = tmp_path_factory.mktemp("outside")
    (outside / "secret.toml").write_text("secret")
    (folder / "link.toml").symlink_to(outside / "secret.toml")
    (folder / "door").symlink_to(outside, target_is_directory=True)
    there = Folder(folder)
    assert "link.toml" not in there.names()
    for name in ("link.toml", "door/secret.toml"):
        with pytest.raises(UserMistake, match="lies outside the folder"):
            there.read(name)
        with pytest.raises(UserMistake, match="lies outside the folder"):
            there.save(name, "mine", "")
    with pytest.raises(UserMistake, match="lies outside the folder"):
        there.save_as("door/new.toml", "mine")
    assert (outside / "secret.toml").read_text() == "secret"
    assert os.listdir(outside) == ["secret.toml"]


def test_a_save_writes_the_file_and_nothing_else(folder):
    there = Folder(folder)
    os.chmod(folder / TANK, 0o600)
    before = sorted(os.listdir(folder))
    read = there.read(TANK)
    again = there.save(TANK, read.text + "# more\n", read.digest)
    assert (folder / TANK).read_text() == read.text + "# more\n"
    assert there.read(TANK).digest == again.digest
    assert sorted(os.listdir(folder)) == before
    assert (folder / TANK).stat().st_mode & 0o777 == 0o600


def test_somebody_elses_change_is_never_overwritten(folder):
    there = Folder(folder)
    read = there.read(TANK)
    (folder / TANK).write_text("theirs")
    with pytest.raises(Changed, match="was changed by somebody else"):
        there.save(TANK, "mine", read.digest)
    assert (folder / TANK).read_text() == "theirs"
    (folder / TANK).unlink()
    with pytest.raises(Changed, match="is gone"):
        there.save(TANK, "mine", read.digest)


def test_a_new_name_never_overwrites(folder):
    there = Folder(folder)
    with pytest.raises(UserMistake, match="is there already and stays as it is"):
        there.save_as(TANK, "mine")
    assert there.free_name(TANK) == "oil_tank_overfill-2.toml"
    assert there.save_as("fresh", "mine").name == "fresh.toml"
    assert (folder / "fresh.toml").read_text() == "mine"


@pytest.mark.parametrize("name", ["a:b", "x" * 120, "*.toml", "a//b"])
def test_odd_names_are_refused(folder, name):
    with pytest.raises(UserMistake):
        Folder(folder).save_as(name, "mine")


def test_what_is_no_text_or_too_long_is_refused(folder):
    (folder / "long.toml").write_bytes(b"#" * (LONGEST_TEXT + 1))
    (folder / "odd.toml").write_bytes(b"\xff\xfe")
    with pytest.raises(UserMistake, match="too long"):
        Folder(folder).read("long.toml")
    with pytest.raises(UserMistake, match="not UTF-8"):
        Folder(folder).read("odd.toml")
