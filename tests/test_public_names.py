"""The public surface of the package is a short sorted list, and the list is true."""

import subprocess
import sys

import sizing

EXPECTED = [
    "Brief",
    "Catalogue",
    "DisagreementError",
    "InputError",
    "JobResult",
    "Limits",
    "NoAdequateSectionError",
    "OptionResult",
    "OutputError",
    "Pick",
    "Problem",
    "SizingError",
    "SizingProblem",
    "SolverError",
    "UnstableTrussError",
    "check_job",
    "formulate",
    "pick",
    "pick_job",
    "read_brief",
    "read_catalogue",
    "write_documents",
]


def test_public_names_are_the_expected_ones():
    """The names offered are exactly those listed here, in order."""
    assert sizing.__all__ == EXPECTED


def test_every_public_name_exists_and_is_documented():
    """Each public name loads, is what it says, and has a docstring."""
    for name in sizing.__all__:
        thing = getattr(sizing, name)
        assert thing.__name__ == name
        assert thing.__doc__


def test_importing_the_package_and_the_command_line_loads_nothing_heavy():
    """`import sizing.cli` stays light, so that --help answers at once."""
    code = (
        "import sys, sizing.cli; "
        "heavy = {'numpy', 'scipy', 'highspy', 'pint', 'pydantic', 'openpyxl', 'cvxpy', 'pandas',"
        " 'matplotlib'}; print(sorted(heavy & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
