"""Whatever stands in a file, reading it ends in a catalogue or in advice, never in a crash."""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

import sizing
from sizing.brief.catalogue_reader import MOST_ROWS, catalogue_from_bytes, shipped_folder
from sizing.brief.model import SourceFile
from sizing.brief.sections import Catalogue
from sizing.errors import InputError

SOURCE = SourceFile(name="list.csv", path=Path("list.csv"), sha256="0" * 64)
GOOD = (
    "# density = 7850 kg/m3\n"
    "designation,family,product,area [cm2],mass [kg/m],I major [cm4],i minor [cm],depth [mm],"
    "width [mm],thickness [mm],price [EUR/m]\n"
    "SHS 100x100x5,SHS,EN 10210-2,18.7,14.7,279,3.86,100,100,5,21.5\n"
    "RHS 100x60x5,RHS,EN 10210-2,14.7,11.6,189,2.38,100,60,5,18\n"
    "L 50x50x5,angle,EN 10056-1,4.80,3.77,11.0,1.51,50,50,5,7\n"
).replace("i minor [cm]", "i minor [cm],i least [cm]")
GOOD = GOOD.replace("3.86,100", "3.86,,100").replace("2.38,100", "2.38,,100")
GOOD = GOOD.replace("1.51,50", "1.51,0.973,50")
PIECES = [
    ",", ";", "\t", "\n", "\r\n", '"', "#", "1,234", "1e9", "-", "−", "0", "nan", "[", "]",
    "(", "cm2", "mm4", "Iy", "r", "\x00", "\ufeff", "=1+1", "/", "plies", "𝟙", "1e99", "1e-99",
    "x" * 300,
    "# decimal = comma\n", "# delimiter = ;\n", "# density = 1e5 kg/m3\n", "sep=;\n", "²", "ß", "٣",
]  # fmt: skip


def read(data: bytes) -> Catalogue | None:
    try:
        return catalogue_from_bytes(data, name="list", source=SOURCE)
    except InputError as error:
        problems = error.problems
    assert problems
    assert all(problem.found and problem.expected for problem in problems)
    return None


def test_an_endless_list_is_refused_before_its_rows_are_read() -> None:
    """One row too many is one message, though every row holds a mistake."""
    heads = "# density = 7850 kg/m3\ndesignation,family,area [cm2],I major [cm4],I minor [cm4]\n"
    rows = "".join(f"P{k},SHS,wrong,1,1\n" for k in range(MOST_ROWS + 1))
    with pytest.raises(InputError) as refusal:
        catalogue_from_bytes((heads + rows).encode(), name="list", source=SOURCE)
    assert str(refusal.value) == (
        "list.csv: file: found more than 5000 rows; expected only those that may be picked. "
        "Split the file into several catalogues."
    )


def test_the_good_file_reads() -> None:
    """The file that the others are broken from has nothing wrong with it."""
    catalogue = read(GOOD.encode())
    assert catalogue is not None
    assert catalogue.remarks == ()


@settings(max_examples=400, deadline=None)
@given(
    st.lists(
        st.tuples(st.floats(0, 1), st.integers(0, 12), st.sampled_from(PIECES)),
        min_size=1,
        max_size=5,
    )
)
@example([(0.0, 0, '"')])
def test_cut_and_pasted_files_never_crash(edits: list[tuple[float, int, str]]) -> None:
    """Pieces cut out and pasted in: what still reads is finite, positive and in order."""
    text = GOOD
    for where, cut, piece in edits:
        at = int(where * len(text))
        text = text[:at] + piece + text[at + cut :]
    catalogue = read(text.encode())
    if catalogue is not None:
        assert np.all(np.isfinite(catalogue.area) & (catalogue.area > 0))
        assert np.all(np.isfinite(catalogue.mass) & (catalogue.mass > 0))
        assert np.all(catalogue.i_least > 0)
        assert np.all(catalogue.i_least <= catalogue.i_minor)
        assert np.all(catalogue.i_minor <= catalogue.i_major)
        assert np.all(np.isfinite(catalogue.i_major))


@settings(max_examples=300, deadline=None)
@given(
    st.sampled_from(["SHS", "RHS", "CHS", "angle", "I", "rectangle"]),
    st.sampled_from(["EN 10210-2", "EN 10219-2", "ASTM A500", ""]),
    st.lists(st.floats(-4, 5), min_size=10, max_size=10),
)
@example("SHS", "EN 10219-2", [0.0, 0, 0, 0, 0, 1.342, 1.342, 1.037, 1, 1])
def test_wild_numbers_never_crash(family: str, product: str, powers: list[float]) -> None:
    """Numbers over nine orders of magnitude, thick walls and huge radii among them."""
    heads = (
        "designation,family,product,area [cm2],mass [kg/m],I major [cm4],I minor [cm4],"
        "I least [cm4],depth [mm],width [mm],thickness [mm],flange [mm],root radius [mm]\n"
    )
    numbers = ",".join(f"{10.0**power:.4g}" for power in powers)
    read(f"{heads}S1,{family},{product},{numbers}\n".encode())


@settings(max_examples=200, deadline=None)
@given(st.binary(max_size=300))
@example(b"\xa0")
def test_random_bytes_never_crash(data: bytes) -> None:
    """Bytes at random are refused with advice."""
    assert read(data) is None


@settings(max_examples=200, deadline=None)
@given(st.text(max_size=200))
def test_random_text_never_crashes(text: str) -> None:
    """Text at random is refused with advice."""
    assert read(text.encode("utf-8", errors="surrogatepass")) is None


@pytest.mark.parametrize("encoding", ["utf-16", "utf-16-le", "utf-32"])
def test_cut_off_wide_files_never_crash(encoding: str) -> None:
    """UTF-16 without its mark or cut in the middle, and UTF-32."""
    data = GOOD.encode(encoding)
    read(data)
    read(data[:-1])


def test_an_installed_package_finds_its_catalogues(tmp_path: Path) -> None:
    """In a wheel the catalogues lie inside the package; reading by name works from anywhere."""
    package = Path(sizing.__file__).parent
    site = tmp_path / "site"
    shutil.copytree(
        package, site / "sizing", ignore=shutil.ignore_patterns("__pycache__", "catalogs")
    )
    shutil.copytree(shipped_folder(), site / "sizing" / "catalogs")
    program = (
        "from pathlib import Path\n"
        "from sizing.brief.catalogue_reader import read_catalogue, shipped_catalogues\n"
        "c = read_catalogue('square-hollow-sections', Path('/'))\n"
        "print(len(shipped_catalogues()), len(c), c.source.path)\n"
    )
    done = subprocess.run(
        [sys.executable, "-c", program],
        cwd=tmp_path,
        env={"PYTHONPATH": str(site)},
        capture_output=True,
        text=True,
        check=True,
    )
    found = site / "sizing" / "catalogs" / "square-hollow-sections.csv"
    assert done.stdout.split() == ["16", "87", str(found.resolve())]
