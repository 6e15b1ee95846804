"""The page as exact text, and what must hold for it at every width."""

from pathlib import Path

import pytest
from result_sample import FAILED, RESULT, result

from optimiser.report.look import Look
from optimiser.report.terminal import result_page

TITLE = "Ammonia at a windy coast"


def page(data, **look):
    return result_page(data, title=TITLE, look=Look(**look))


def test_the_page_is_exactly_this():
    expected = (Path(__file__).parent / "page_80.txt").read_text(encoding="utf-8")
    assert result_page(RESULT, title=TITLE) == expected


@pytest.mark.parametrize("width", [60, 72, 80, 96, 100])
def test_no_line_is_longer_than_the_place_allows(width):
    assert max(map(len, page(RESULT, width=width).splitlines())) <= width


def test_all_that_is_found_is_on_the_page_at_every_width():
    for width in (60, 80, 100):
        words = page(RESULT, width=width)
        for name in ("152.3 bar", "281,600", "14.61", "98,120,000", "83,210,000", "NH3"):
            assert name in words, f"{name} at {width}"


def test_plain_text_has_no_escape_and_nothing_beyond_ascii():
    text = page(RESULT)
    assert text.isascii()
    assert "\x1b" not in text


def test_colour_and_drawn_lines_only_where_the_place_allows():
    assert "\x1b[" in page(RESULT, colour=True)
    assert "●" in page(RESULT, drawn=True)


def test_the_answer_comes_first():
    text = page(RESULT)
    order = ("audited optimum", "2.1738 kg/EUR", "Decisions", "Binding limits", "Beds", "Streams", "Costs")
    places = [text.index(word) for word in (*order, "Audit ", "Warnings", "For screening")]
    assert places == sorted(places)


def test_limits_are_sorted_by_money_and_those_without_come_last():
    data = result()
    data["binding"].append(
        data["binding"][0]
        | {"path": "limits.product.rate", "name": "product.rate", "worth": 9.0, "worth_per_year": None}
        | {"marginal_cost": {"value": 412.7, "unit": "EUR/t"}}
    )
    text = page(data, width=100)
    order = ("bed1.hottest  ", "outlet_temperature.low", "volume.high", "product.rate  ")
    places = [text.index(key) for key in order]
    assert places == sorted(places)
    assert "one more costs 412.7 EUR/t" in text


def test_that_nothing_binds_is_said():
    assert "No limit binds" in page(result(binding=[]))


def test_hostile_text_from_a_case_cannot_steer_the_terminal():
    data = result(warnings=["\x1b[2Jgone", "[red]not markup[/red]"])
    text = result_page(data, title="a\x1b]0;b\x07", look=Look())
    assert "\x1b" not in text
    assert "[red]not markup[/red]" in text
    assert "a\\x1b]0;b\\x07" in text


def test_a_run_without_a_point_says_why():
    text = page(FAILED)
    assert text.startswith(TITLE)
    assert "best point so far\nThe solver reached its largest number of iterations.\n" in text
    assert "Decisions" not in text


def test_a_failed_audit_names_the_lines_that_failed():
    data = result(status="failed", grade="converged, but the audit disagrees")
    data["audit"]["passed"] = False
    data["audit"]["lines"][0] |= {"passed": False, "audit": 1004.0, "difference": 0.4}
    text = " ".join(page(data).split())
    assert "Audit failed" in text
    assert "product rate, 0.40 of 0.10 % allowed: 1,000 by the optimiser, 1,004 by the audit" in text
    assert "hottest point of bed1" not in text


def test_a_calculated_section_shows_what_was_held():
    held = {path: d | {"low": None, "high": None, "at": "held"} for path, d in RESULT["decisions"].items()}
    text = page(result(status="calculated", decisions=held, binding=[], starts=[]))
    assert "Held\n" in text
    assert "Decisions" not in text
    assert "No limit binds" not in text
    assert "loop.pressure 152.31 bar" in text


def test_a_decision_inside_its_range_never_touches_the_end_of_its_line():
    data = result()
    data["decisions"] = {"loop.pressure": RESULT["decisions"]["loop.pressure"] | {"value": 249.9}}
    assert "-o- 250  inside" in page(data)


def test_beds_with_different_units_carry_them_in_each_cell():
    data = result()
    data["beds"]["bed1"]["volume"] = {"value": 25000.0, "unit": "L"}
    text = page(data)
    assert "25,000 L" in text
    assert "40.00 m3" in text
