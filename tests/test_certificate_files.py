"""Proofs on disk: written by the pick, accepted by the checker, refused when altered."""

import io
import os
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from sizing.brief.toml_reader import read_brief
from sizing.errors import InputError
from sizing.job import pick_job
from sizing.selection.outcome import Limits
from sizing.verification import verify_certificate

EXAMPLES = Path(__file__).parents[1] / "examples"
NAMES = ("market-hall", "two-span-girder", "village-hall-us")


@pytest.fixture(scope="module", params=NAMES)
def certified(request, tmp_path_factory):
    brief = read_brief(EXAMPLES / f"{request.param}.toml")
    answer = pick_job(
        brief,
        options=[brief.options[0].name],
        limits=lambda _: Limits(seconds=120, certificate=True),
    ).options[0]
    path = tmp_path_factory.mktemp(request.param) / "certificate.npz"
    path.write_bytes(answer.certificate)
    return brief, answer, path


def test_the_certificate_of_a_proven_pick_is_accepted(certified):
    """The checker confirms the printed bound, and the design it belongs to."""
    brief, answer, path = certified
    found = verify_certificate(brief, path)
    assert answer.status == "proven"
    assert found.accepted, found.reason
    assert found.adequate
    assert found.unchanged
    assert found.objective == pytest.approx(answer.objective, rel=1e-12)
    assert found.gap <= 3e-8


def rewritten(path, **changes):
    with np.load(path) as loaded:
        arrays = {name: loaded[name] for name in loaded.files}
    for name, change in changes.items():
        arrays[name] = change(arrays[name])
    stream = io.BytesIO()
    np.savez_compressed(stream, **arrays)
    path.write_bytes(stream.getvalue())


def test_a_bound_that_was_raised_is_refused(certified, tmp_path):
    """Claiming one part in ten thousand more than was proven is found out."""
    brief, _, path = certified
    other = tmp_path / "raised.npz"
    other.write_bytes(path.read_bytes())
    rewritten(other, bound=lambda bound: bound * 1.0001)
    assert not verify_certificate(brief, other).accepted


def test_a_certificate_does_not_carry_over_to_lighter_loads(tmp_path):
    """With half the snow the same tree no longer proves the bound, and the change is told."""
    text = (EXAMPLES / "market-hall.toml").read_text(encoding="utf-8")
    brief = read_brief(EXAMPLES / "market-hall.toml")
    answer = pick_job(brief, limits=lambda _: Limits(certificate=True)).options[0]
    path = tmp_path / "certificate.npz"
    path.write_bytes(answer.certificate)
    lighter = tmp_path / "lighter.toml"
    lighter.write_text(text.replace("-14.40]", "-7.20]"), encoding="utf-8")
    found = verify_certificate(read_brief(lighter), path)
    assert not found.unchanged
    assert not found.accepted


@pytest.mark.parametrize("damage", ["empty", "text", "cut", "objects"])
def test_files_that_are_no_certificates_are_told(tmp_path, damage):
    """Rubbish is refused with a message, never unpickled."""
    path = tmp_path / "file.npz"
    if damage == "empty":
        path.write_bytes(b"")
    elif damage == "text":
        path.write_text("hello", encoding="utf-8")
    elif damage == "cut":
        stream = io.BytesIO()
        np.savez_compressed(stream, bound=1.0)
        path.write_bytes(stream.getvalue()[:40])
    else:
        stream = io.BytesIO()
        np.savez_compressed(stream, about=np.array([{}], dtype=object))
        path.write_bytes(stream.getvalue())
    brief = read_brief(EXAMPLES / "market-hall.toml")
    with pytest.raises(InputError, match=r"expected a certificate written by sizing pick"):
        verify_certificate(brief, path)


def test_near_ties_are_adequate_distinct_and_no_lighter():
    """The other designs listed differ from the pick, pass every check and weigh no less."""
    brief = read_brief(EXAMPLES / "market-hall.toml")
    answer = pick_job(
        brief, limits=lambda _: replace(Limits(), near_ties=4, near_tie_margin=0.02)
    ).options[0]
    assert 1 <= len(answer.near_ties) <= 4
    picked = tuple(group.designation for group in answer.groups)
    seen = {picked, *(tie.designations for tie in answer.near_ties)}
    assert len(seen) == 1 + len(answer.near_ties)
    for tie in answer.near_ties:
        assert answer.objective * (1 - 1e-9) <= tie.objective <= 1.02 * answer.objective
        assert tie.utilisation <= 1 + 1e-9


def test_the_command_line_writes_and_verifies(tmp_path):
    """`pick --certificate` writes the file that `verify` accepts with exit code 0."""
    run = [sys.executable, "-c", "from sizing.cli import main; main()"]
    brief = str(EXAMPLES / "village-hall-us.toml")
    done = subprocess.run(
        [*run, "pick", brief, "--certificate", "--out", str(tmp_path / "out")],
        capture_output=True, text=True, check=False, env={**os.environ},
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
    for option in ("hss", "lumber"):
        path = tmp_path / "out" / f"certificate-{option}.npz"
        seen = subprocess.run(
            [*run, "verify", brief, str(path)], capture_output=True, text=True, check=False
        )
        assert seen.returncode == 0, seen.stdout + seen.stderr
        assert "accepted" in seen.stdout
