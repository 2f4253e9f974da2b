"""Which plans are variants of one another, by the names of their files, and which are compared."""

from decimal import Decimal

import pytest
from PySide6.QtCore import QSettings

from desktop import family
from solver.plan import Category, Plan, Work
from solver.planfile import save_plan

D = Decimal


def plan(amount=100):
    who = Category("A", D(10), D(40), on_books=D(3), output={"W": D(1)})
    return Plan(title="Job", categories=(who,), works=(Work("W", "units", (D(amount),)),))


@pytest.fixture
def folder(tmp_path):
    for name in ("Job", "Job - night shift", "Job - fewer", "Other"):
        save_plan(plan(), tmp_path / f"{name}.crew.json")
    return tmp_path


def test_variants_are_found_by_their_names(folder):
    job, night = folder / "Job.crew.json", folder / "Job - night shift.crew.json"
    assert family.base_of(night) == job
    assert family.base_of(job) == job
    assert family.base_of(folder / "Else - night.crew.json") == folder / "Else - night.crew.json"
    assert [p.name for p in family.chosen(job)] == ["Job - fewer.crew.json", "Job - night shift.crew.json"]
    assert [p.name for p in family.chosen(night)] == ["Job.crew.json", "Job - fewer.crew.json"]
    assert family.short_name(night, job) == "night shift"
    assert family.short_name(folder / "sub" / "x.crew.json", job) == "x"


def test_a_title_with_a_dash_of_its_own_is_no_variant(tmp_path):
    save_plan(plan(), tmp_path / "Dock 2 - refit.crew.json")
    save_plan(plan(), tmp_path / "Dock 2 - refit - winter.crew.json")
    base = tmp_path / "Dock 2 - refit.crew.json"
    assert family.base_of(base) == base
    assert family.base_of(tmp_path / "Dock 2 - refit - winter.crew.json") == base


@pytest.mark.parametrize(
    ("name", "says"),
    [
        ("  ", "A name is needed."),
        ("a/b", "/ cannot stand in the name of a file."),
        ("what?", "? cannot stand in the name of a file."),
        ("x" * 61, "The name is too long: at most 60 characters."),
        ("fewer", "There is a file called Job - fewer.crew.json already."),
    ],
)
def test_names_that_no_file_can_have_are_refused(folder, name, says):
    with pytest.raises(family.NoVariantName) as refused:
        family.variant_path(folder / "Job.crew.json", name)
    assert str(refused.value) == says


def test_a_variant_of_a_variant_stands_beside_both(folder):
    made = family.variant_path(folder / "Job - fewer.crew.json", " two  gangs ")
    assert made == folder / "Job - two gangs.crew.json"


def test_the_choice_is_remembered_for_the_whole_family(folder):
    job, other = folder / "Job.crew.json", folder / "Other.crew.json"
    family.choose(job, [other])
    assert family.chosen(job) == [other]
    assert family.chosen(folder / "Job - fewer.crew.json") == [job, other]
    family.choose(job, [])
    assert family.chosen(job) == []


@pytest.mark.parametrize("stored", ["rubbish", "[1]", '{"a": 3}', "{"])
def test_odd_settings_are_survived(folder, stored):
    QSettings().setValue("variants", stored)
    assert len(family.chosen(folder / "Job.crew.json")) == 2


def test_a_folder_that_is_gone_has_no_variants(tmp_path):
    assert family.chosen(tmp_path / "gone" / "Job.crew.json") == []
