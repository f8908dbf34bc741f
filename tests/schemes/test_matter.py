"""What is judged."""

import dataclasses

import pytest


def test_matter_cannot_be_changed_behind_a_verdict(job_of):
    matter = job_of().matter(0.05)
    with pytest.raises(dataclasses.FrozenInstanceError):
        matter.count = 2
