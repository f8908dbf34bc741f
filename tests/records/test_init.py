"""What all rooms share: frozen, named once, and without third parties beyond numpy."""

from __future__ import annotations

import dataclasses
import inspect
import pkgutil
from importlib import import_module

import pytest

from routing import records

MODULES = [import_module(f"routing.records.{info.name}") for info in pkgutil.iter_modules(records.__path__)]
CLASSES = sorted(
    {
        cls
        for module in MODULES
        for _, cls in inspect.getmembers(module, inspect.isclass)
        if cls.__module__ == module.__name__
    },
    key=lambda cls: cls.__name__,
)


def test_every_record_has_its_name_in_the_room():
    assert {cls.__name__ for cls in CLASSES} <= set(records.__all__)
    assert sorted(set(records.__all__)) == sorted(records.__all__)
    for name in records.__all__:
        assert getattr(records, name) is not None


@pytest.mark.parametrize("record", CLASSES, ids=lambda cls: cls.__name__)
def test_records_are_frozen_slim_and_documented(record):
    assert dataclasses.is_dataclass(record)
    assert record.__dataclass_params__.frozen
    assert "__slots__" in vars(record)
    assert record.__doc__
    assert not record.__doc__.startswith(f"{record.__name__}(")  # the text that dataclasses make up


@pytest.mark.parametrize("record", CLASSES, ids=lambda cls: cls.__name__)
def test_no_two_records_share_a_default_that_can_change(record):
    for field in dataclasses.fields(record):
        if field.default is not dataclasses.MISSING:
            assert field.default.__hash__ is not None, field.name
