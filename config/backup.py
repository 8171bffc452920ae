"""The whole state as one zip: every row of every table as text, every file, and a digest of each.

Rows stand as text in the order of their fields, so that a copy of SQLite goes into PostgreSQL and
the other way round. Sessions, counted wrong passwords and workers' signs of life are not state.
"""

from __future__ import annotations

import hashlib
import json
import zipfile
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import IO, TYPE_CHECKING, Any, Final

from django.apps import apps
from django.conf import settings
from django.core.management import call_command
from django.core.management.color import no_style
from django.db import DatabaseError, connection, models, transaction
from django.db.migrations.recorder import MigrationRecorder

from structures.errors import Refused
from structures.queries.register import check_registers

if TYPE_CHECKING:
    from collections.abc import Iterator

FORM: Final = "underbund-backup-1"
MANIFEST: Final = "manifest.json"
LEFT_OUT: Final = frozenset({"contenttypes", "sessions", "axes"})
LEFT_OUT_TABLES: Final = frozenset({"auth.permission", "structures.workerpulse"})
PIECE: Final = 1 << 20
ROWS_AT_ONCE: Final = 2000


@dataclass(frozen=True, slots=True)
class Copied:
    """What a backup holds."""

    made_at: datetime
    rows: int
    files: int
    digest: str


def write_backup(path: Path) -> Copied:
    """Write the whole state to a file that was not there before, or leave nothing behind.

    Raises
    ------
    Refused
        If the file is there, or cannot be written.
    """
    if path.exists():
        raise Refused(f"{path} is there already.", remedy="Name a file that is not there yet.")
    half = path.with_name(f"{path.name}.half")
    try:
        with half.open("xb") as out:
            half.chmod(0o600)  # it holds everything that the office knows
            made_at, rows, files = _write(out)
        half.rename(path)
    except OSError as error:
        raise Refused(
            f"{path} cannot be written: {error.strerror}.", remedy="Name another place."
        ) from error
    finally:
        half.unlink(missing_ok=True)
    return Copied(made_at, rows, files, _digest_of(path))


def read_backup(path: Path) -> Copied:
    """Bring a backup into an empty database and an empty folder of files, whole or not at all.

    Raises
    ------
    Refused
        If the file is no whole backup, is of another version of the program, something is there
        already, or the register does not fit afterwards.
    """
    try:
        with zipfile.ZipFile(path) as archive:
            manifest = _manifest(archive)
            _check_whole(archive, manifest)
            call_command("migrate", interactive=False, verbosity=0)
            _check_level(manifest)
            _check_empty()
            written = _bring_in(archive, manifest)
    except (OSError, zipfile.BadZipFile) as error:
        raise Refused(
            f"{path} is no readable backup.", remedy="Take another copy of it."
        ) from error
    made_at = datetime.fromisoformat(manifest["made_at"])
    return Copied(made_at, written, len(manifest["files"]), _digest_of(path))


def _write(out: IO[bytes]) -> tuple[datetime, int, int]:
    made_at = datetime.now(UTC)
    tables, files = {}, {}
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as archive:
        with transaction.atomic():
            if connection.vendor == "postgresql":
                # All tables as of one moment; on SQLite the transaction keeps writers waiting.
                with connection.cursor() as cursor:
                    cursor.execute("SET TRANSACTION ISOLATION LEVEL REPEATABLE READ, READ ONLY")
            for model in _kept():
                tables[model._meta.label_lower] = _write_table(archive, model)
            level = _level()
        # A file is kept before the row that names it: those of the rows above are all there.
        for name, source in _files():
            files[name] = _write_file(archive, f"files/{name}", source)
        manifest = {
            "form": FORM,
            "made_at": made_at.isoformat(),
            "migrations": level,
            "tables": tables,
            "files": files,
        }
        archive.writestr(MANIFEST, json.dumps(manifest, indent=1, sort_keys=True))
    return made_at, sum(one["rows"] for one in tables.values()), len(files)


def _kept() -> list[type[models.Model]]:
    return [
        model
        for model in apps.get_models(include_auto_created=True)
        if model._meta.managed
        and not model._meta.proxy
        and model._meta.app_label not in LEFT_OUT
        and model._meta.label_lower not in LEFT_OUT_TABLES
    ]


def _write_table(archive: zipfile.ZipFile, model: type[models.Model]) -> dict[str, Any]:
    digest, rows = hashlib.sha256(), 0
    fields = model._meta.concrete_fields
    found = model._base_manager.order_by("pk").iterator(chunk_size=ROWS_AT_ONCE)
    with archive.open(f"rows/{model._meta.label_lower}.jsonl", "w", force_zip64=True) as out:
        for row in found:
            values = [_text(field, row) for field in fields]
            line = json.dumps(values, ensure_ascii=False).encode() + b"\n"
            digest.update(line)
            out.write(line)
            rows += 1
    return {
        "fields": [field.attname for field in fields],
        "rows": rows,
        "sha256": digest.hexdigest(),
    }


def _text(field: models.Field, row: models.Model) -> Any:
    return None if field.value_from_object(row) is None else field.value_to_string(row)


def _write_file(archive: zipfile.ZipFile, name: str, source: Path) -> dict[str, Any]:
    digest, size = hashlib.sha256(), 0
    with source.open("rb") as file, archive.open(name, "w", force_zip64=True) as out:
        while piece := file.read(PIECE):
            digest.update(piece)
            out.write(piece)
            size += len(piece)
    return {"bytes": size, "sha256": digest.hexdigest()}


def _files() -> Iterator[tuple[str, Path]]:
    """Files kept by now; one half written belongs to no row."""
    root = Path(settings.MEDIA_ROOT)
    for path in sorted(root.rglob("*")):
        if path.is_file() and not path.name.startswith(".half-"):
            yield path.relative_to(root).as_posix(), path


def _level() -> list[list[str]]:
    done = MigrationRecorder(connection).applied_migrations()
    return sorted([app, name] for app, name in done)


def _manifest(archive: zipfile.ZipFile) -> dict[str, Any]:
    try:
        manifest = json.loads(archive.read(MANIFEST))
        form = manifest["form"]
    except (KeyError, ValueError, TypeError) as error:
        raise Refused(
            "This file is no backup of Underbund.", remedy="Name one made by `backup`."
        ) from error
    if form != FORM:
        raise Refused(f"It is a backup of the form {form}.", remedy="Use the version that made it.")
    return manifest


def _check_whole(archive: zipfile.ZipFile, manifest: dict[str, Any]) -> None:
    """Refuse a copy of which a part is missing, is more or was altered."""
    told = {f"rows/{name}.jsonl": one for name, one in manifest["tables"].items()}
    told |= {f"files/{name}": one for name, one in manifest["files"].items()}
    there = set(archive.namelist()) - {MANIFEST}
    for name in sorted(there ^ set(told)):
        what = "is missing" if name in told else "is not in its list"
        raise Refused(f"{name} {what}.", remedy="The copy was altered: take another one.")
    for name, one in told.items():
        try:
            found = _digest_in(archive, name)
        except (zipfile.BadZipFile, EOFError) as error:
            raise Refused(f"{name} is damaged.", remedy="Take another copy.") from error
        if found != one["sha256"]:
            raise Refused(f"{name} was altered.", remedy="Take another copy.")
    root = Path(settings.MEDIA_ROOT).resolve()
    for name in manifest["files"]:
        if not (root / name).resolve().is_relative_to(root):
            raise Refused(f"{name} lies outside the folder of files.", remedy="Do not use it.")


def _digest_in(archive: zipfile.ZipFile, name: str) -> str:
    digest = hashlib.sha256()
    with archive.open(name) as part:
        while piece := part.read(PIECE):
            digest.update(piece)
    return digest.hexdigest()


def _check_level(manifest: dict[str, Any]) -> None:
    there, here = {tuple(one) for one in manifest["migrations"]}, {tuple(one) for one in _level()}
    if there == here:
        return
    newest = sorted(".".join(one) for one in there ^ here)[-1]
    whose = "this program" if there < here else "the backup"
    raise Refused(
        f"Backup and program are of different versions: only {whose} knows {newest}.",
        remedy="Restore with the version that made the backup, then bring the program up to date.",
    )


def _check_empty() -> None:
    for model in _kept():
        if model._base_manager.exists():
            raise Refused(
                f"The database is not empty: {model._meta.verbose_name_plural} are in it.",
                remedy="Restore into an empty one; what is there is never overwritten.",
            )
    if next(_files(), None) is not None:
        raise Refused(
            f"{settings.MEDIA_ROOT} holds files already.", remedy="Name an empty MEDIA_ROOT."
        )


def _bring_in(archive: zipfile.ZipFile, manifest: dict[str, Any]) -> int:
    """Write files, then rows in one transaction that ends only if all of it fits."""
    written: list[Path] = []
    try:
        for name in manifest["files"]:
            written.append(Path(settings.MEDIA_ROOT) / name)
            _read_file(archive, f"files/{name}", written[-1])
        with transaction.atomic():
            rows = sum(
                _read_table(archive, model, manifest["tables"].get(model._meta.label_lower))
                for model in _kept()
            )
            for statement in connection.ops.sequence_reset_sql(no_style(), _kept()):
                with connection.cursor() as cursor:
                    cursor.execute(statement)
            _check_register()
    except DatabaseError as error:
        _take_back(written)
        raise Refused(
            f"The database refuses what the backup holds: {error}",
            remedy="Nothing was kept. Take another copy.",
        ) from error
    except BaseException:
        _take_back(written)
        raise
    return rows


def _take_back(written: list[Path]) -> None:
    for path in written:
        path.unlink(missing_ok=True)


def _read_file(archive: zipfile.ZipFile, name: str, to: Path) -> None:
    to.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
    with archive.open(name) as part, to.open("xb") as out:
        to.chmod(0o640)
        while piece := part.read(PIECE):
            out.write(piece)


def _read_table(
    archive: zipfile.ZipFile, model: type[models.Model], told: dict[str, Any] | None
) -> int:
    label, fields = model._meta.label_lower, model._meta.concrete_fields
    if told is None or told["fields"] != [field.attname for field in fields]:
        raise Refused(
            f"The table {label} has other columns here.",
            remedy="Restore with the version that made the backup.",
        )
    with archive.open(f"rows/{label}.jsonl") as lines:
        for line in lines:
            values = zip(fields, json.loads(line), strict=True)
            row = model(**{f.attname: None if v is None else f.to_python(v) for f, v in values})
            # Raw: days and times stay as they were, and no history is written twice.
            row.save_base(raw=True, force_insert=True)
    found = model._base_manager.count()
    if found != told["rows"]:
        raise Refused(
            f"{label} holds {found} rows, and the backup says {told['rows']}.",
            remedy="Nothing was kept. Take another copy.",
        )
    return found


def _check_register() -> None:
    for one in check_registers():
        if not one.whole:
            raise Refused(
                f"The register of {one.where} does not fit at entry {one.number}: {one.why}.",
                remedy="Nothing was kept. Restore an older backup, and look who altered this one.",
            )


def _digest_of(path: Path) -> str:
    with path.open("rb") as file:
        return hashlib.file_digest(file, "sha256").hexdigest()
