from routing.outputs.cautions import CAUTIONS, INVENTED_PRICES


def test_the_usual_cautions_are_all_there():
    text = " ".join(CAUTIONS).lower()
    for word in (
        "dam safety",
        "drawdown rate",
        "unattended valves",
        "people downstream",
        "local codes",
        "licensed engineer",
    ):
        assert word in text
    assert "invented" in INVENTED_PRICES
