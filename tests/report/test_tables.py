from optimiser.report.look import Look, render
from optimiser.report.tables import Column, keyed


def lines(width, count):
    columns = [Column(f"c{k}", "bar", ["1.0", "22.0"]) for k in range(count)]
    look = Look(width=width)
    return render(keyed(["one", "two"], columns, look), look).splitlines()


def test_what_fits_is_one_table():
    assert lines(60, 2) == [
        "         c0    c1",
        "        bar   bar",
        "  one   1.0   1.0",
        "  two  22.0  22.0",
    ]


def test_what_does_not_fit_goes_below_with_its_keys():
    found = lines(60, 12)
    assert max(map(len, found)) <= 60
    assert [line.split()[0] for line in found if "1.0" in line] == ["one", "one"]
    assert sum(line.count("22.0") for line in found) == 12


def test_wide_letters_count_twice():
    assert Column("圧力", "bar", ["1"]).width == 4
