from dataclasses import dataclass

from optimiser.report.problems import problem_rows, problems_text


@dataclass(frozen=True)
class Wrong:
    file: str | None = "case.yaml"
    line: int | None = 12
    column: int | None = 15
    path: str | None = "loop.pressure"
    read: str | None = "150 kW"
    wanted: str = "a pressure, such as 150 bar"
    nearest: str | None = None


def test_each_problem_says_where_what_and_how_to_mend():
    text = problems_text([Wrong(), Wrong(line=None, column=None, path="lop", nearest="loop", read="lop")])
    assert text == (
        "case.yaml:12:15  loop.pressure\n"
        "  read    150 kW\n"
        "  wanted  a pressure, such as 150 bar\n"
        "\n"
        "case.yaml  lop\n"
        "  read    lop\n"
        "  wanted  a pressure, such as 150 bar\n"
        "  nearest loop\n"
        "\n"
        "2 things to mend.\n"
    )


def test_one_problem_is_one_thing():
    assert problems_text([Wrong()]).endswith("\n1 thing to mend.\n")


def test_what_a_file_holds_cannot_reach_the_terminal():
    assert "\x1b" not in problems_text([Wrong(read="\x1b]0;title\x07", path="\x1b[2J")])


def test_rows_have_every_field():
    assert problem_rows([Wrong()]) == [
        {
            "file": "case.yaml",
            "line": 12,
            "column": 15,
            "path": "loop.pressure",
            "read": "150 kW",
            "wanted": "a pressure, such as 150 bar",
            "nearest": None,
        }
    ]
