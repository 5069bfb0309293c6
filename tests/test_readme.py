"""What the README shows works as printed."""

import re
import shlex
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from sizing.brief.toml_reader import read_brief
from sizing.job import pick_job

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")
RUN = [sys.executable, "-c", "from sizing.cli import main; main()"]


def blocks(language):
    return re.findall(rf"^```{language}\n(.*?)^```$", README, flags=re.MULTILINE | re.DOTALL)


def test_the_first_two_commands_install_and_run_from_nothing():
    """The first block installs and picks the example, the second installs and tests; one line each.

    They are executed as printed by the project's own CI, in a fresh environment.
    """
    first, second = blocks("sh")[:2]
    assert first.count("\n") == second.count("\n") == 1
    assert "sizing pick examples/market-hall.toml --out" in first
    assert "pytest" in second


def test_the_commands_for_an_own_truss_work(tmp_path):
    """Start, check, pick, convert and pick from the workbook, in the order of the README."""
    shutil.copytree(ROOT / "examples", tmp_path / "examples")
    for block in blocks("sh")[2:]:
        for line in block.splitlines():
            program, *arguments = shlex.split(line)
            assert program == ".venv/bin/sizing", line
            done = subprocess.run(
                [*RUN, *arguments], cwd=tmp_path, capture_output=True, text=True, check=False
            )
            assert done.returncode == 0, f"{line}\n{done.stderr}"
    assert (tmp_path / "out" / "shed" / "schedule.xlsx").exists()
    assert (tmp_path / "out" / "shed-from-workbook" / "schedule.xlsx").exists()


def test_the_brief_of_the_readme_is_read_and_picked(tmp_path):
    """The brief explained in the README is a whole brief; both of its options have an answer."""
    path = tmp_path / "brief.toml"
    path.write_text(blocks("toml")[0], encoding="utf-8")
    result = pick_job(read_brief(path))
    assert [option.status for option in result.options] == ["proven", "proven"]


@pytest.mark.parametrize("name", sorted(p.name for p in (ROOT / "examples").glob("*.toml")))
def test_every_example_is_read(name):
    """Every shipped example is a valid brief and says that it is invented."""
    brief = read_brief(ROOT / "examples" / name)
    assert "invented" in brief.title
