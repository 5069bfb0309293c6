"""The command line as a user meets it: documents written, exit codes, nothing half-done."""

import json
import os
import re
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
EXAMPLES = ROOT / "examples"
RUN = [sys.executable, "-c", "from sizing.cli import main; main()"]


def sizing(*arguments, cwd=None):
    return subprocess.run(
        [*RUN, *map(str, arguments)],
        capture_output=True,
        text=True,
        encoding="utf-8",
        cwd=cwd,
        check=False,
        timeout=300,
        env={**os.environ, "PYTHONIOENCODING": "utf-8"},
    )


@pytest.fixture(scope="module")
def market_hall(tmp_path_factory):
    folder = tmp_path_factory.mktemp("issued")
    done = sizing("pick", EXAMPLES / "market-hall.toml", "--out", folder)
    return done, folder


def test_pick_issues_every_document_and_says_so(market_hall):
    """`sizing pick` ends with 0, prints the table and writes the five documents."""
    done, folder = market_hall
    assert done.returncode == 0, done.stderr
    assert {p.name for p in folder.iterdir()} == {
        "schedule.xlsx",
        "truss.svg",
        "truss.dxf",
        "result.json",
        "report.html",
    }
    assert "proven lightest" in done.stdout
    assert "bottom-chord-inner" in done.stdout
    assert "cautions" in done.stdout


def test_result_file_holds_what_a_script_needs(market_hall):
    """result.json gives, under options, the keys that scripts rely on, in SI units."""
    _, folder = market_hall
    data = json.loads((folder / "result.json").read_text(encoding="utf-8"))
    answer = data["options"]["steel"]
    for key in (
        "status", "mass_kg", "bound_kg", "gap", "analyses", "seconds", "sections", "members",
        "deflections", "reactions",
    ):  # fmt: skip
        assert key in answer, key
    assert answer["status"] == "proven"
    assert answer["bound_kg"] == pytest.approx(answer["mass_kg"])
    assert len(answer["members"]) == 49
    assert set(answer["sections"]) >= {"bottom-chord-inner", "verticals-end"}


def test_checking_the_picked_sections_gives_the_same_mass(market_hall, tmp_path):
    """`sizing check` with the result file as section list agrees with the pick."""
    _, folder = market_hall
    done = sizing(
        "check", EXAMPLES / "market-hall.toml", "--sections", folder / "result.json",
        "--out", tmp_path / "again",
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
    first = json.loads((folder / "result.json").read_text(encoding="utf-8"))
    again = json.loads((tmp_path / "again" / "result.json").read_text(encoding="utf-8"))
    assert again["options"]["steel"]["mass_kg"] == first["options"]["steel"]["mass_kg"]
    assert again["options"]["steel"]["status"] == "checked"


def test_sections_that_fail_are_reported_with_exit_code_1(market_hall, tmp_path):
    """Given sections that are too weak are checked, documented, and end with 1."""
    _, folder = market_hall
    data = json.loads((folder / "result.json").read_text(encoding="utf-8"))
    groups = dict(data["options"]["steel"]["sections"])
    weak = dict.fromkeys(groups, "SHS 60x60x3")
    lines = ["[sections.steel]", *(f'{name} = "{s}"' for name, s in weak.items())]
    (tmp_path / "weak.toml").write_text("\n".join(lines), encoding="utf-8")
    done = sizing(
        "check", EXAMPLES / "market-hall.toml", "--sections", tmp_path / "weak.toml",
        "--out", tmp_path / "weak",
    )  # fmt: skip
    assert done.returncode == 1
    assert (tmp_path / "weak" / "schedule.xlsx").exists()
    assert "not met" in done.stdout.lower() or "fail" in done.stdout.lower()


def changed(tmp_path, *pairs):
    text = (EXAMPLES / "market-hall.toml").read_text(encoding="utf-8")
    for old, new in pairs:
        assert old in text
        text = text.replace(old, new)
    path = tmp_path / "brief.toml"
    path.write_text(text, encoding="utf-8")
    return path


@pytest.mark.parametrize(
    ("pairs", "code", "words"),
    [
        ((('"A5-A6"', '"A5-A66"'),), 2, ["groups.bottom-chord-inner.members", "A66"]),
        ((('grade = "S355"', 'grade = "S3555"'),), 2, ["options.steel.grade", "S3555"]),
        ((("square-hollow-sections", "square-holow-sections"),), 2, ["square-hollow-sections"]),
        ((('"B5-A6", ', ""),), 3, ["A6"]),
        ((('held = ["x", "y"]', 'held = ["y"]'),), 3, ["support"]),
        ((("0, -14.40]", "0, -1440.0]"),), 4, ["member", "combination", "utilisation"]),
    ],
    ids=["member", "grade", "catalogue", "mechanism", "support", "too-heavy"],
)
def test_mistakes_end_with_their_code_and_a_message(tmp_path, pairs, code, words):
    """Each kind of mistake has its exit code, a message with the place, and writes nothing."""
    brief = changed(tmp_path, *pairs)
    done = sizing("pick", brief, "--out", tmp_path / "out")
    assert done.returncode == code, done.stderr
    assert "Traceback" not in done.stderr
    assert "Nothing was written." in done.stderr
    for word in words:
        assert word in done.stderr
    assert not (tmp_path / "out").exists()


@pytest.mark.skipif(sys.platform == "win32", reason="POSIX signals")
def test_interrupt_gives_the_best_checked_design_so_far(tmp_path):
    """Ctrl-C during a long pick issues the best design found, with status `stopped`."""
    process = subprocess.Popen(
        [*RUN, "pick", str(EXAMPLES / "mast.toml"), "--out", str(tmp_path / "out")],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    said = ""
    while not re.search(r"best \d", said):
        line = process.stderr.readline()
        assert line, said
        said += line
    time.sleep(0.5)
    process.send_signal(signal.SIGINT)
    out, rest = process.communicate(timeout=120)
    assert process.returncode == 0, said + rest
    data = json.loads((tmp_path / "out" / "result.json").read_text(encoding="utf-8"))
    assert data["options"]["steel"]["status"] in {"stopped", "proven", "within gap"}
    assert "cautions" in out


def test_help_names_the_commands_and_defers_to_an_engineer():
    """`sizing --help` lists the commands and says who must check the result."""
    done = sizing("--help")
    assert done.returncode == 0
    assert "licensed" in done.stdout
    for command in ("pick", "check", "compare", "catalogue"):
        assert command in done.stdout


def test_interrupt_while_reading_says_that_nothing_was_written(monkeypatch, capsys):
    """Ctrl-C before the pick has begun ends with code 130 and a sentence, not in silence."""
    from sizing import cli
    from sizing.brief import toml_reader

    def interrupted(_path):
        raise KeyboardInterrupt

    monkeypatch.setattr(toml_reader, "read_brief", interrupted)
    monkeypatch.setattr(sys, "argv", ["sizing", "check", str(EXAMPLES / "mast.toml")])
    with pytest.raises(SystemExit) as ended:
        cli.main()
    assert ended.value.code == 130
    assert capsys.readouterr().err.endswith("interrupted; nothing was written\n")


def test_a_section_that_the_catalogue_lacks_is_placed_in_its_own_file(tmp_path, market_hall):
    """A wrong designation is told with the file that holds it, and the nearest one."""
    data = json.loads((market_hall[1] / "result.json").read_text(encoding="utf-8"))
    data["options"]["steel"]["sections"]["verticals-end"] = "SHS 80x80x33"
    (tmp_path / "earlier.json").write_text(json.dumps(data), encoding="utf-8")
    done = sizing("check", EXAMPLES / "market-hall.toml", "--sections", tmp_path / "earlier.json")
    assert done.returncode == 2
    assert "earlier.json: sections.steel.verticals-end: found 'SHS 80x80x33'" in done.stderr
    assert "Did you mean 'SHS 80x80x3'?" in done.stderr


def test_an_error_that_nobody_foresaw_has_a_code_of_its_own(tmp_path):
    """A bug ends with code 9 and one line, never with the code of an inadequate design."""
    broken = (
        "import sizing.brief.toml_reader as reader\n"
        "def fail(path):\n    raise RuntimeError('out of the blue')\n"
        "reader.read_brief = fail\n"
        "from sizing.cli import main\nmain()"
    )
    done = subprocess.run(
        [sys.executable, "-c", broken, "pick", str(EXAMPLES / "market-hall.toml")],
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 9
    assert "RuntimeError: out of the blue" in done.stderr
    assert "Traceback" not in done.stderr


def test_missing_dimensions_are_named_where_nothing_fits(tmp_path):
    """Walls whose class cannot be told have no compression resistance; the message says why."""
    rows = "designation,family,product,area [cm2],mass [kg/m],I major [cm4],I minor [cm4],t [mm]\n"
    rows += "RHS 200x100x10,RHS,EN 10210-2,54.9,43.1,2664,869,10\n"
    (tmp_path / "thin.csv").write_text(rows, encoding="utf-8")
    brief = changed(tmp_path, ("square-hollow-sections", "thin.csv"))
    done = sizing("pick", brief)
    assert done.returncode == 4
    assert "no section has any resistance there (" in done.stderr
