"""Options side by side on the screen, and a catalogue as understood."""

import io
from pathlib import Path

from rich.console import Console

from sizing.brief.catalogue_reader import read_catalogue
from sizing.brief.toml_reader import read_brief
from sizing.documents.side_by_side import print_catalogue, print_comparison
from sizing.job import compare_job

EXAMPLE = Path(__file__).parents[2] / "examples" / "village-hall-steel-timber.toml"


def printed(write, thing):
    out = io.StringIO()
    write(thing, Console(file=out, width=120, highlight=False))
    return out.getvalue()


def test_comparison_shows_each_option_in_its_own_column():
    """Mass, cost, carbon and bound of every option stand in one row each, in brief order."""
    result = compare_job(read_brief(EXAMPLE))
    text = printed(print_comparison, result)
    row = next(line for line in text.splitlines() if "Mass of members" in line)
    assert [f"{option.mass:.1f}" for option in result.options] == row.split()[-3:]
    assert "Biogenic carbon, apart" in text
    assert "not given" in text
    assert "cautions" in text


def test_cost_and_carbon_drive_the_pick_when_asked(tmp_path):
    """Minimising cost or carbon gives no dearer and no dirtier design than minimising mass."""
    text = EXAMPLE.read_text(encoding="utf-8")
    by_mass = compare_job(read_brief(EXAMPLE))
    for objective in ("cost", "carbon"):
        path = tmp_path / f"{objective}.toml"
        path.write_text(
            text.replace('minimise = "mass"', f'minimise = "{objective}"'), encoding="utf-8"
        )
        other = compare_job(read_brief(path))
        for a, b in zip(other.options, by_mass.options, strict=True):
            assert a.status == "proven"
            assert getattr(a, objective) <= getattr(b, objective) * (1 + 1e-12)
            assert abs(a.objective - getattr(a, objective)) <= 1e-9 * a.objective


def test_catalogue_as_understood():
    """Rows, units and ranges of a shipped catalogue are said in words."""
    text = printed(print_catalogue, read_catalogue("square-hollow-sections", Path()))
    assert "area in cm2" in text
    assert "SHS 400x400x16" in text
