from routing.outputs.field import row
from routing.outputs.point_fields import POINT_FIELDS, MapPoint


def test_point_without_a_level(plan):
    found = row(POINT_FIELDS, plan, MapPoint("intake", "intake", 1.0, 2.0, None))
    assert found == {
        "kind": "intake",
        "name": "intake",
        "route": None,
        "chainage_m": None,
        "level_m": None,
        "x": 1.0,
        "y": 2.0,
        "proven": None,
        "length_m": None,
        "lift_m": None,
        "used": None,
        "note": None,
    }


def test_a_crossing_tells_what_it_is(make):
    plan = make.beside()
    crossing = plan.crossings[2]
    point = MapPoint("crossing", crossing.name, crossing.x, crossing.y, crossing.level_m, crossing=crossing)
    found = row(POINT_FIELDS, plan, point)
    assert (found["length_m"], found["lift_m"], found["used"]) == (391.2, 4.1, False)
    assert found["note"] == crossing.note
