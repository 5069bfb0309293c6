"""The registry of standards: every entry can be built, named several ways, and refuses slips."""

from __future__ import annotations

import subprocess
import sys

import numpy as np
import pytest

from sizing.standards.contract import SettingsError
from sizing.standards.registry import (
    SPELLINGS,
    STANDARDS,
    factory_of,
    make_standard,
    resolve,
    standard_names,
)

MINIMAL = {
    "elastic": (
        None,
        {
            "E": "70 GPa",
            "density": "2700 kg/m3",
            "allowable_tension": "100 MPa",
            "allowable_compression": "100 MPa",
            "buckling_safety_factor": 2,
        },
    ),
    "EN 1993-1-1": ("S355", {}),
    "AISC 360": ("A992", {}),
    "EN 1995-1-1": ("C24", {}),
    "NDS": ("No. 2 Douglas Fir-Larch", {}),
}
ROW = {
    "area": 1.9e-3,
    "i_major": 2.86e-6,
    "family": "SHS",
    "product": "EN 10210-2",
    "depth": 0.1,
    "width": 0.1,
    "thickness": 0.005,
}


@pytest.mark.parametrize("name", STANDARDS)
def test_every_standard_can_be_built(catalogue_of, members_of, name):
    """Each entry builds from a minimal setting and answers with words and numbers."""
    grade, settings = MINIMAL[name]
    standard = make_standard(name, grade, settings)
    assert standard.name == name
    assert standard.edition
    assert standard.material.E > 0.0
    assert standard.material.density > 0.0
    assert standard.basis()
    assert all(what and value for what, value in standard.basis())
    assert standard.cautions()
    table = standard.resistances(catalogue_of(ROW), members_of(length=[1.0, 2.0]), ("short",))
    assert table.tension.shape == table.compression.shape == (2, 1, 1)
    assert np.isfinite(table.tension).all()
    assert np.isfinite(table.compression).all()


@pytest.mark.parametrize("name", STANDARDS)
def test_every_standard_refuses_an_unknown_setting(name):
    """A slip in a key is named, with the keys that there are."""
    grade, settings = MINIMAL[name]
    with pytest.raises(SettingsError) as caught:
        make_standard(name, grade, settings | {"no_such_setting": 1})
    assert caught.value.key == "no_such_setting"
    assert caught.value.found == "an unknown setting"
    assert caught.value.expected.startswith("one of ")


@pytest.mark.parametrize("spelling", SPELLINGS)
def test_other_spellings(spelling):
    """Every spelling means a registered standard, whatever its case and spacing."""
    name, implied = SPELLINGS[spelling]
    assert name in STANDARDS
    assert resolve(spelling.upper().replace(" ", "")) == (name, implied)
    grade, settings = MINIMAL[name]
    assert make_standard(spelling, grade, settings).name == name


def test_an_unknown_standard_gets_the_nearest_name():
    """The message lists the standards and guesses."""
    with pytest.raises(SettingsError) as caught:
        make_standard("EN 1993-1-2", "S355", {})
    assert caught.value.key == "standard"
    assert caught.value.found == '"EN 1993-1-2"'
    assert caught.value.fix == 'Did you mean "EN 1993-1-1"?'
    assert all(f'"{name}"' in caught.value.expected for name in standard_names())


def test_factories_are_found():
    """No entry points at a module or function that is not there."""
    assert all(callable(factory_of(name)) for name in STANDARDS)


def test_asking_for_the_names_imports_no_standard():
    """The command line lists standards without loading them."""
    code = (
        "import sys; from sizing.standards.registry import standard_names; standard_names(); "
        "print([m for m in sys.modules if m.endswith(('en1993', 'aisc360', 'elastic'))])"
    )
    found = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True, timeout=60
    )
    assert found.stdout.strip() == "[]"
