"""Checks not made."""

from routing.schemes import NOT_MADE
from routing.schemes.unmade import unmade, unmade_checks


def test_each_is_told_with_its_source_and_no_grade():
    checks = unmade_checks()
    assert [check.name for check in checks] == [name for name, _, _ in NOT_MADE]
    assert len({check.name for check in checks}) == len(checks)
    for check in checks:
        assert check.grade is None
        assert check.title
        assert check.source
        assert check.reason == "not made by this version"


def test_a_reason_of_its_own():
    assert unmade("a", "A", "practice", "not known").reason == "not known"
