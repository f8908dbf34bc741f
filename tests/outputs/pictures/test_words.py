from dataclasses import replace

from routing.outputs.pictures.subject import overview, single_routes
from routing.outputs.pictures.words import picture_text, picture_title, pictures_text


def test_the_words_hold_what_the_picture_shows(everything):
    text = picture_text(overview(everything))
    for part in (
        "Map of 2 routes",
        "stands at 102.00 m now",
        "down to 100.00 m",
        "R1 runs east over crossing C1, 281 m long, highest ground 103.40 m at 110 m.",
        "lowest possible crest between water and outlet is 103.02 m",
        "Crossing C3 lies at 103.40 m; no route passes over it.",
        "bars routes.",
        "Zone bog multiplies the cost by 2.50.",
        "Long section of 1 x PE 315 SDR 17 on route R1",
        "2.32 m above the reserve of 2.50 m.",
        "Verdict fit",
        "Prices are invented",
    ):
        assert part in text, part


def test_a_missing_reserve_and_no_scheme_are_said(make):
    assert "0.80 m short of the reserve" in picture_text(overview(make.no_route()))
    bare = picture_text(overview(replace(make.no_route(), schemes=())))
    assert "Map of 0 routes" in bare
    assert "No long section: No route works." in bare


def test_a_single_route_tells_of_itself_alone(everything):
    second = single_routes(everything)[1]
    assert picture_title(second).endswith(": route R2")
    assert "R1" not in picture_text(second)
    assert "C1" not in picture_text(second)


def test_one_text_for_all_pictures(everything):
    text = pictures_text([overview(everything), *single_routes(everything)])
    assert [line for line in text.splitlines() if ".svg" in line] == [
        f"{name}.png, {name}.svg - {title}"
        for name, title in (
            ("overview", "Upper basin, blocked bottom outlet"),
            ("R1", "Upper basin, blocked bottom outlet: route R1"),
            ("R2", "Upper basin, blocked bottom outlet: route R2"),
        )
    ]
