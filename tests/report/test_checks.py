import pytest

from optimiser.report.checks import check_page

FOUND = {
    "status": "ready",
    "free": [{"path": "loop.pressure", "low": 80.0, "high": 250.0, "unit": "bar"}],
    "held": [{"path": "feed.product_rate", "value": 1000.0, "unit": "t/d"}],
    "limits": [
        {"path": "limits.reactor.bed1.hottest", "low": None, "high": 520.0, "unit": "degC"},
        {"path": "limits.reactor.cooler.approach", "low": 10.0, "high": None, "unit": "K"},
    ],
    "variables": 1301,
    "equations": 1300,
    "freedom": 1,
    "groups": [],
    "warnings": [],
}


def test_page_of_a_case_that_is_ready():
    assert check_page(FOUND, title="Ammonia at a windy coast") == (
        "Ammonia at a windy coast" + " " * 51 + "ready\n"
        "\n"
        "  The case is well formed; nothing was solved.\n"
        "  1,301 variables, 1,300 equations: one setting is free.\n"
        "\n"
        "Free\n"
        "  loop.pressure  80 .. 250 bar\n"
        "\n"
        "Held\n"
        "  feed.product_rate  1,000 t/d\n"
        "\n"
        "Limits\n"
        "  limits.reactor.bed1.hottest     <= 520 degC\n"
        "  limits.reactor.cooler.approach  >= 10 K\n"
    )


@pytest.mark.parametrize("status", ["over-specified", "under-specified", "conflict"])
def test_what_does_not_add_up_is_named(status):
    group = "too many values are stated for the equations of: loop"
    page = check_page(FOUND | {"status": status, "groups": [group], "freedom": -1}, title="x")
    assert status in page.splitlines()[0]
    assert "The case is well formed; nothing was solved." not in page
    assert page.endswith(f"\nDoes not add up\n  - {group}\n")
