"""The commands: exit status, what goes where, and how wide it is."""
from __future__ import annotations

import json
import os
import re
import subprocess
import sys
import time

import pytest
from click.testing import CliRunner

from calcpack import __version__
from calcpack.cli import main
from calcpack.methods import methods
from calcpack.methods.starter import starter

HEAVY = ("CoolProp", "pint", "matplotlib", "weasyprint", "pydantic", "scipy", "numpy")


@pytest.fixture
def cli(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    runner = CliRunner()

    def run(*arguments):
        result = runner.invoke(main, [str(one) for one in arguments])
        assert result.exception is None or isinstance(result.exception, SystemExit), result.exception
        assert "Traceback" not in result.output
        return result
    return run


@pytest.fixture
def spec(tmp_path):
    """``spec(name, method, old, new)`` writes a starter, changed in one place."""
    def write(name, method="carnot-cycle", old="", new=""):
        text = starter(method, {})
        assert old in text
        (tmp_path / name).write_text(text.replace(old, new) if old else text, "utf-8")
        return name
    return write


def process(*arguments, **environment):
    command = [sys.executable, "-c", "from calcpack.cli import main; main(prog_name='calcpack')", *arguments]
    return subprocess.run(command, capture_output=True, text=True, env={**os.environ, **environment}, check=False)


@pytest.mark.parametrize("flag", ["-h", "--help"])
@pytest.mark.parametrize("command", [[], ["new"], ["solve"], ["build"], ["compare"], ["methods"], ["fluids"],
    ["schema"]])
def test_every_command_helps(cli, command, flag):
    result = cli(*command, flag)
    assert result.exit_code == 0
    assert result.stdout.startswith("Usage: ")
    assert all(len(line) <= 100 for line in result.stdout.splitlines())


def test_the_version(cli):
    assert cli("--version").stdout == f"calcpack {__version__}\n"


@pytest.mark.parametrize("arguments", [["-h"], ["--version"], ["solve", "-h"], ["nonsense"]])
def test_help_and_version_import_nothing_heavy(arguments):
    code = ("import sys\nfrom calcpack.cli import main\ntry:\n    main(sys.argv[1:])\nexcept SystemExit:\n    pass\n"
            f"print([name for name in {HEAVY!r} if name in sys.modules], file=sys.stderr)")
    done = subprocess.run([sys.executable, "-c", code, *arguments], capture_output=True, text=True, check=True)
    assert done.stderr.splitlines()[-1] == "[]"


@pytest.mark.parametrize("name", list(methods()))
def test_a_new_spec_solves_as_written(cli, name):
    assert cli("new", name, "-o", "new.yaml").exit_code == 0
    result = cli("solve", "new.yaml")
    assert result.exit_code == 0
    assert "Results" in result.stdout and result.stderr == ""


def test_a_new_spec_is_printed_or_written_and_overwrites_nothing(cli, tmp_path):
    printed = cli("new", "carnot-cycle")
    assert printed.exit_code == 0 and printed.stdout == starter("carnot-cycle", {})
    assert cli("new", "carnot-cycle", "-o", "a.yaml").stdout == "wrote a.yaml\n"
    assert (tmp_path / "a.yaml").read_text("utf-8") == printed.stdout
    again = cli("new", "carnot-bound", "-o", "a.yaml")
    assert again.exit_code == 2 and again.stdout == ""
    assert again.stderr == ("error: a.yaml is there already\n    hint:     name another file; nothing is overwritten\n"
                            "1 error, nothing was written.\n")
    assert (tmp_path / "a.yaml").read_text("utf-8") == printed.stdout


def test_options_of_a_new_spec(cli):
    result = cli("new", "carnot-bound", "--option", "machine=refrigerator", "--option", "real=power")
    assert "    machine: refrigerator " in result.stdout and "W_dot_real" in result.stdout
    wrong = cli("new", "carnot-bound", "--option", "machine=windmill")
    assert wrong.exit_code == 2 and "carnot-bound has no option machine=windmill" in wrong.stderr


def test_status_0_where_every_limit_holds_and_1_where_one_fails(cli, spec, tmp_path):
    spec("good.yaml")
    text = (tmp_path / "good.yaml").read_text("utf-8")
    limit = "limits: [{{id: L1, symbol: eta, at_least: {}, why: Tender.}}]\n"
    (tmp_path / "holds.yaml").write_text(text + limit.format(0.4), "utf-8")
    (tmp_path / "fails.yaml").write_text(text + limit.format(0.6), "utf-8")
    assert cli("solve", "good.yaml").exit_code == cli("solve", "holds.yaml").exit_code == 0
    failing = cli("solve", "fails.yaml")
    assert failing.exit_code == 1
    assert "FAILS" in failing.stdout and "FAILS" not in cli("solve", "holds.yaml").stdout


def test_status_2_where_the_spec_is_wrong_with_line_and_caret(cli, spec):
    result = cli("solve", spec("bad.yaml", old="gamma: 1.4", new="gamma: 0.4"))
    assert (result.exit_code, result.stdout) == (2, "")
    assert re.fullmatch(
        r"bad\.yaml:\d+:\d+: gamma, heat capacity ratio of the gas, is out of its range\n"
        r"    .*gamma: 0\.4.*\n +\^\^\^\n    found:    '0\.4'\n    expected: above 1 and at most 2\n"
        r"1 error, nothing was written\.\n", result.stderr)


def test_status_3_where_the_numbers_have_no_answer(cli, spec):
    result = cli("solve", spec("hopeless.yaml", old="T_h: 327", new="T_h: 1"))
    assert (result.exit_code, result.stdout) == (3, "")
    assert result.stderr.startswith("hopeless.yaml:21:3: the hot isotherm is not above the cold one\n")
    assert "hint" in result.stderr or "check the two temperatures" in result.stderr


@pytest.mark.parametrize("arguments", [
    ["solve", "none.yaml"], ["solve"], ["nonsense"], ["solve", "--nonsense"], ["new", "nonsense"],
    ["fluids", "nonsense"],
    ["methods", "nonsense"], ["build", "nowhere"], ["compare", "a.json", "b.json"], ["build", "--jobs", "0"]])
def test_status_2_where_the_command_is_wrong(cli, arguments):
    result = cli(*arguments)
    assert result.exit_code == 2
    assert result.stdout == "" and result.stderr


@pytest.mark.parametrize("pair", ["T_c", "=5 K", "T_c=", "T_c = "])
def test_a_set_without_symbol_or_value_is_told(cli, spec, pair):
    result = cli("solve", spec("a.yaml"), "--set", pair)
    assert result.exit_code == 2
    assert result.stderr == (f"error: --set {pair}: a name and a value are meant\n    expected: --set T_e='2 degC'\n"
                             "1 error, nothing was written.\n")


@pytest.mark.parametrize("pair, what, more", [
    ("T_cc=5 degC", "error: --set T_cc: there is no input of that symbol\n", "did you mean 'T_c'?"),
    ("gamma=3", "error: --set gamma: gamma, heat capacity ratio of the gas, is out of its range\n", "at most 2"),
    ("T_c=5 bar", "error: --set T_c: a temperature is meant here\n", "a quantity such as '38 degC'")])
def test_a_set_that_cannot_be_is_told(cli, spec, pair, what, more):
    result = cli("solve", spec("a.yaml"), "--set", pair)
    assert result.exit_code == 2
    assert result.stderr.startswith(what) and more in result.stderr


def test_set_replaces_an_input(cli, spec):
    name = spec("a.yaml")
    record = json.loads(cli("solve", name, "--json", "--set", "T_c=300.075 K", "--set", "T_h = 600.15 K").stdout)
    assert record["results"]["eta"]["value"] == pytest.approx(0.5, rel=1e-12)


def test_json_alone_is_on_standard_output(cli, spec):
    one, two = spec("a.yaml"), spec("b.yaml", "carnot-bound")
    single = cli("solve", one, "--json")
    assert single.stderr == "" and json.loads(single.stdout)["sheet"]["number"] == "XX-001"
    several = cli("solve", one, two, "--json")
    assert several.stderr == "" and [one["case"]["method"] for one in json.loads(several.stdout)] == [
        "carnot-cycle", "carnot-bound"]
    assert json.loads(several.stdout)[0] == json.loads(single.stdout)


def test_quiet_keeps_results_and_failed_limits(cli, spec, tmp_path):
    spec("a.yaml")
    with (tmp_path / "a.yaml").open("a", encoding="utf-8") as file:
        file.write("limits:\n  - {id: L1, symbol: eta, at_least: 0.6, why: Tender.}\n"
                   "  - {id: L2, symbol: eta, at_least: 0.1, why: Tender.}\n")
    quiet, full = cli("solve", "a.yaml", "-q").stdout, cli("solve", "a.yaml").stdout
    assert "L1" in quiet and "L2" not in quiet and "Checks" not in quiet and "Holds" not in quiet and "eta" in quiet
    assert "L1" in full and "L2" in full and "Checks" in full and "Holds" in full


def test_steps_prints_every_step_with_its_numbers(cli, spec):
    text = " ".join(cli("solve", spec("a.yaml"), "--steps").stdout.split())
    assert "1 - T_c / T_h = 1 - 300.15 K / 600.15 K = 0.4998" in text
    assert "8.3144" in text


WIDE = [["solve", "pump.yaml"], ["solve", "pump.yaml", "--steps"], ["solve", "us.yaml", "--steps"], ["methods"],
        ["methods", "--units"], ["fluids"], ["fluids", "R-1234ze(E)"], ["fluids", "R-454C"],
        *(["methods", name] for name in methods())]


@pytest.mark.parametrize("arguments", WIDE, ids=" ".join)
def test_output_that_is_piped_fits_80_columns(cli, spec, arguments):
    spec("pump.yaml", "vapour-compression")
    spec("us.yaml", "vapour-compression", "units: si", "units: us")
    result = cli(*arguments)
    assert result.exit_code == 0
    assert max(map(len, result.stdout.splitlines())) <= 80
    assert "\x1b" not in result.stdout


def test_no_color_is_honoured_even_where_colour_is_forced(spec, tmp_path):
    spec("a.yaml")
    done = process("solve", str(tmp_path / "a.yaml"), NO_COLOR="1", TERM="xterm-256color")
    assert done.returncode == 0
    assert re.search(r"\x1b\[[0-9;]*3[0-9]m", done.stdout) is None


def test_a_closed_pipe_is_no_error(spec, tmp_path):
    spec("a.yaml", "vapour-compression")
    start = f"{sys.executable} -c \"from calcpack.cli import main; main()\""
    command = f"{start} solve {tmp_path / 'a.yaml'} --steps | head -1"
    done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, check=False)
    assert done.stdout.startswith("XX-001") and "Traceback" not in done.stderr


def test_the_exit_status_of_the_process(spec, tmp_path):
    spec("good.yaml"), spec("bad.yaml", old="gamma: 1.4", new="gamma: 0.4"), spec("hopeless.yaml", old="T_h: 327",
        new="T_h: 1")
    statuses = [process("solve", str(tmp_path / name)).returncode for name in ("good.yaml", "bad.yaml",
        "hopeless.yaml")]
    assert statuses == [0, 2, 3]


def test_hostile_specs_leave_no_traceback(cli, tmp_path):
    start = time.monotonic()
    base = ("calcpack: 1\n"
            "sheet: {number: T-1, title: T, project: P, revision: A, status: draft, purpose: P, scope: S}\n"
            "case:\n  method: none\n  inputs: {x: 5}\nsteps:\n  - {symbol: y, title: Y, formula: '%s'}\nresults: [x]\n")
    formulas = ["9^9^9^9", "9**9**9**9", "((9^12)^12)^12", "x.__class__", "eval(x)", "+".join(["x"] * 299), "(" * 500,
        "1/0",
                "ln(-x)", "(-x)^0.5", "exp(1000*x)", "h(wf, p=x)", "x" * 599, "1e308*10*x", "y", "x - x", "1/(x - 5)",
                "٣*x",
                "abs(" * 30 + "x" + ")" * 30, "+".join(["x"] * 120)]
    for index, formula in enumerate(formulas):
        (tmp_path / "h.yaml").write_text(base % formula, "utf-8")
        assert cli("solve", "h.yaml", "--steps").exit_code == (0 if formula in (
            "x - x", "abs(" * 30 + "x" + ")" * 30, "+".join(["x"] * 120)) else 3 if index in (2, 7, 8, 9, 10, 13,
            16) else 2)
    assert time.monotonic() - start < 20


def test_methods_and_fluids_tell_what_there_is(cli):
    listed = cli("methods").stdout
    assert all(name in listed for name in methods())
    assert "cyclopentane" in cli("methods", "organic-rankine").stdout
    rows = cli("methods", "organic-rankine").stdout.splitlines()
    assert any(row.split()[:6] == ["eta_t", "0.80", "above", "0", "to", "1"] for row in rows)
    assert "R-1234ze(E)" in cli("fluids").stdout
    assert json.loads(cli("schema").stdout)["type"] == "object"
    units = cli("methods", "--units").stdout
    assert "kJ/(kg·K)" in units and "bar(g)" in units
