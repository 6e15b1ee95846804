import pytest

from optimiser.report.backends import backends_page, can_solve


def rows(*broken):
    return [
        {
            "backend": name,
            "ok": name not in broken,
            "versions": {} if name in broken else {name: "1.2"},
            "message": "ImportError: nothing here" if name in broken else "solved a test problem",
        }
        for name in ("cyipopt", "casadi", "highs")
    ]


def test_page_of_a_machine_that_has_all():
    assert backends_page(rows(), machine="setpoise 0.1.0, Python 3.12.1, Linux x86_64") == (
        "setpoise 0.1.0, Python 3.12.1, Linux x86_64\n"
        "\n"
        "  cyipopt  works  solved a test problem\n"
        "                  cyipopt 1.2\n"
        "  casadi   works  solved a test problem\n"
        "                  casadi 1.2\n"
        "  highs    works  solved a test problem\n"
        "                  highs 1.2\n"
        "\n"
        "Everything is there: cases can be solved.\n"
    )


@pytest.mark.parametrize(
    ("broken", "able", "said"),
    [
        (["cyipopt"], True, "without cyipopt the other solver takes its place"),
        (["highs"], True, "cannot say which"),
        (["cyipopt", "casadi"], False, "no case can be solved"),
    ],
)
def test_what_is_missing_is_said_with_what_it_means(broken, able, said):
    page = backends_page(rows(*broken), machine="m")
    assert can_solve(rows(*broken)) is able
    assert said in page
    assert page.count("does not work  ImportError: nothing here") == len(broken)
