"""A proof on disk: written beside the documents, read back and checked without the search.

The file is a zip archive of plain arrays (the ``.npz`` form of numpy, no objects in it) that
holds the certificate's fields under their names, and one text, ``about``, in JSON: what it belongs
to (brief, catalogue and their SHA-256, option), the sections of the design and the claims.
``sizing verify`` formulates the problem anew from the brief, so a certificate proves something
about that brief and that catalogue, or is refused.
"""

from __future__ import annotations

import io
import json
import zipfile
from dataclasses import asdict, dataclass, fields
from pathlib import Path
from typing import Any

import numpy as np

from sizing.errors import InputError, Problem
from sizing.formulation import Formulation
from sizing.selection.certificate import Certificate, ForceBasis

FORMAT = "truss sizing certificate"
VERSION = 1
GREATEST_FILE = 512 * 1024 * 1024
"""Bytes, unpacked: beyond this a file is no certificate of a problem that this tool can solve."""

BASIS = "basis_"
"""Prefix of the arrays of the force basis."""


@dataclass(frozen=True, kw_only=True, slots=True)
class About:
    """What a certificate belongs to and claims. ``sections``: designation by group."""

    brief_sha256: str
    catalogue_sha256: str
    option: str
    minimise: str
    objective: float
    bound: float
    sections: dict[str, str]
    made_by: str


def about(formulation: Formulation, sections: list[int], bound: float, version: str) -> About:
    """Return what a certificate of this design and bound belongs to."""
    brief, names = formulation.brief, formulation.catalogue.designation
    return About(
        brief_sha256=brief.source.sha256,
        catalogue_sha256=formulation.catalogue.source.sha256,
        option=formulation.option.name,
        minimise=brief.minimise,
        objective=formulation.problem.objective(np.asarray(sections)),
        bound=bound,
        sections={g.name: names[s] for g, s in zip(brief.groups, sections, strict=True)},
        made_by=f"sizing {version}",
    )


def certificate_bytes(certificate: Certificate, facts: About) -> bytes:
    """Return the file as bytes; the same certificate gives the same bytes."""
    arrays: dict[str, Any] = {}
    for field in fields(Certificate):
        value = getattr(certificate, field.name)
        if field.name != "basis":
            arrays[field.name] = np.asarray(value)
        elif value is not None:
            for part in fields(ForceBasis):
                arrays[BASIS + part.name] = np.asarray(getattr(value, part.name))
    head = {"format": FORMAT, "version": VERSION, **asdict(facts)}
    text = json.dumps(head, indent=1, sort_keys=True, ensure_ascii=False).encode("utf-8")
    arrays["about"] = np.frombuffer(text, dtype=np.uint8)
    stream = io.BytesIO()
    np.savez_compressed(stream, allow_pickle=False, **arrays)
    return stream.getvalue()


def read_certificate(path: Path) -> tuple[Certificate, About]:
    """Read a certificate; raise :class:`InputError` for a file that is none."""
    try:
        with zipfile.ZipFile(path) as archive:
            if sum(entry.file_size for entry in archive.infolist()) > GREATEST_FILE:
                raise _refused(path, "an archive that unpacks to more than 512 MiB")
        with np.load(path, allow_pickle=False) as loaded:
            arrays = {name: loaded[name] for name in loaded.files}
        return _from_arrays(arrays)
    except OSError as error:
        reason = error.strerror or "an error while reading"
        raise _refused(path, reason.lower()) from error
    except (zipfile.BadZipFile, ValueError, KeyError, TypeError, EOFError) as error:
        raise _refused(path, "something else or a damaged file") from error


def _from_arrays(arrays: dict[str, Any]) -> tuple[Certificate, About]:
    head = json.loads(bytes(arrays["about"]).decode("utf-8"))
    if head.pop("format") != FORMAT or head.pop("version") != VERSION:
        raise ValueError("another format or version")
    given: dict[str, Any] = {}
    for field in fields(Certificate):
        if field.name == "bound":
            given["bound"] = float(arrays["bound"])
        elif field.name != "basis":
            given[field.name] = arrays[field.name]
    given["basis"] = None
    if BASIS + "passes" in arrays:
        parts = {field.name: arrays[BASIS + field.name] for field in fields(ForceBasis)}
        parts["passes"] = int(parts["passes"])
        given["basis"] = ForceBasis(**parts)
    return Certificate(**given), About(**head)


def _refused(path: Path, found: str) -> InputError:
    return InputError(
        [
            Problem(
                file=str(path),
                place="the file",
                found=found,
                expected="a certificate written by sizing pick --certificate",
                fix="Write it again with the same version of the tool.",
            )
        ]
    )
