"""Problems that only the DEM brings to light still name a line of the site file."""

from __future__ import annotations

import pytest

from routing.planning.troubles import site_problem


@pytest.mark.parametrize(
    ("key", "starts"),
    [
        ("outlet.level_m", "level_m = 90.0"),  # the key's own line
        ("outlet.tailwater_level_m", "[outlet]"),  # the table that would hold it
        ("water.lowest_level_m", "lowest_level_m"),
        ("demand.discharge_m3s", None),  # a table that is not there either
    ],
)
def test_the_line_is_that_of_the_key_or_of_its_table(make_job, ground, key, starts):
    job = make_job(ground.valley())
    problem = site_problem(job.site, key, "what", found="found", allowed="allowed", remedy="remedy")
    assert problem.key == key
    assert problem.file == str(job.file)
    assert problem.line == (None if starts is None else job.line_of(starts))
    assert (problem.what, problem.found, problem.allowed, problem.remedy) == ("what", "found", "allowed", "remedy")
