import json
import subprocess
import sys
from pathlib import Path

import pytest

import optimiser
from optimiser.cli.main import main

HEAVY = ("pyomo", "casadi", "cyipopt", "scipy", "numpy", "pandas", "pint", "rich", "ruamel")


@pytest.mark.parametrize("words", [["--help"], ["solve", "--help"], ["check", "--help"], ["--version"]])
def test_help_loads_nothing_heavy(words):
    code = (
        "import sys; from optimiser.cli.main import main; code = main(sys.argv[1:]); "
        f"heavy = sorted({{m.split('.')[0] for m in sys.modules}} & {set(HEAVY)!r}); "
        "sys.exit(f'loaded {heavy}' if heavy else code)"
    )
    home = Path(optimiser.__file__).parents[1]
    done = subprocess.run(
        [sys.executable, "-c", code, *words], capture_output=True, text=True, cwd=home, check=False
    )
    assert (done.returncode, done.stderr) == (0, "")
    assert "setpoise" in done.stdout


@pytest.mark.parametrize("command", ["solve", "check", "doctor"])
def test_help_of_each_command_says_how_it_ends(command, capsys):
    assert main([command, "--help"]) == 0
    words = " ".join(capsys.readouterr().out.split())
    assert "Ends with 0 where" in words


def test_every_option_of_solve_is_in_its_help(capsys):
    main(["solve", "--help"])
    out = capsys.readouterr().out
    for option in ("--json", "--out", "--set", "--starts", "--seed", "--thorough", "--quiet", "--no-save"):
        assert f"  {option}" in out


def test_version(capsys):
    assert main(["--version"]) == 0
    assert capsys.readouterr().out == f"setpoise {optimiser.__version__}\n"


def test_a_bare_command_shows_its_help(capsys):
    assert main([]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.count("Usage: setpoise") == 1
    assert "doctor" in err


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["solve"], "Missing argument"),
        (["slove", "x"], "No such command"),
        (["solve", "x", "--start", "3"], "No such option"),
        (["solve", "x", "--starts", "none"], "--starts"),
        (["solve", "x", "--starts", "0"], "--starts"),
        (["solve", "x", "--seed", "-1"], "--seed"),
    ],
)
def test_usage_errors_are_wrong_input(words, said, capsys):
    assert main(words) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert said in err
    assert "Traceback" not in err
    assert main([*words, "--json"]) == 2
    out, err = capsys.readouterr()
    told = json.loads(out)
    assert told["status"] == "invalid"
    assert said in told["errors"][0]["wanted"]
    assert set(told["errors"][0]) == {"file", "line", "column", "path", "read", "wanted", "nearest"}
