"""One site's survey pack from a file, a folder or bytes: the door through which all packs come.

Forms: a JSON file; a folder or a zip of CSV files; a zip of one JSON file; an XLSX workbook.
"""

from __future__ import annotations

from pathlib import Path, PurePosixPath
from typing import TYPE_CHECKING, Final

from structures.errors import Finding, Refused
from structures.intake.archive import (
    BOOK,
    check_nested,
    entry_names,
    is_packed,
    read_archive,
    too_large,
)
from structures.intake.builder import build_pack, refusal
from structures.intake.delimited import no_table, read_delimited
from structures.intake.json_form import read_json
from structures.intake.table_form import is_part, tree_of_tables
from structures.intake.tree import Ledger, Node, shown

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.intake.pack import SurveyPack

TABLE_ENDINGS: Final = (".csv", ".tsv", ".txt")
JSON_ENDING: Final = ".json"
FORMS: Final = "a JSON file, a folder or zip of CSV files, or an XLSX workbook"


def read_pack(source: Path) -> SurveyPack:
    """Read one site's survey.

    Parameters
    ----------
    source
        A JSON file, a folder of CSV files named like the parts of a pack, a zip of such files (or
        of one JSON file), or an XLSX workbook with sheets of those names.

    Raises
    ------
    Refused
        If the pack cannot be used; `findings` names each file, line or cell and field.
    """
    try:
        if source.is_dir():
            return _read_folder(source)
        if not source.is_file():
            raise _single(source.name, "There is no such file or folder.", f"Name {FORMS}.")
        _check_size(source.name, source.stat().st_size)
        return read_pack_bytes(source.name, source.read_bytes())
    except OSError as error:
        raise _single(
            source.name, f"It cannot be opened: {error.strerror}.", "Look at its rights."
        ) from error


def read_pack_bytes(name: str, data: bytes) -> SurveyPack:
    """Read one site's survey from the bytes of a file; `name` only names it in findings.

    Raises
    ------
    Refused
        If the pack cannot be used; `findings` names each file, line or cell and field.
    """
    _check_size(name, len(data))
    if not data.strip():
        raise _single(name, "The file is empty.", "Send it again.")
    ledger = Ledger()
    if is_packed(data):
        if BOOK in entry_names(data):
            # The workbook library takes a fifth of a second to load; other forms do without it.
            from structures.intake.workbook import read_workbook  # noqa: PLC0415 -- see above

            tables = read_workbook(name, data, ledger)
            if ledger.blocks and not tables:
                raise refusal(ledger)
            return _build_tables(name, tables, ledger)
        return _read_zip(name, data, ledger)
    kind = no_table(data)
    if kind:
        raise _single(name, f"This is {kind}, not a survey pack.", f"Send {FORMS}.")
    if name.lower().endswith(TABLE_ENDINGS):
        read_delimited(Path(name).stem, name, data, ledger)
        what = "One table is not yet a survey pack."
        ledger.add(
            Node(None, name), what, "Put site.csv, ground.csv, toes.csv into one folder or zip."
        )
        raise refusal(ledger)
    return build_pack(read_json(name, data), ledger)


def _read_folder(folder: Path) -> SurveyPack:
    ledger = Ledger()
    files: dict[str, bytes] = {}
    for path in sorted(folder.iterdir()):
        if path.name.startswith("."):
            continue
        if not path.is_file() or not path.name.lower().endswith(TABLE_ENDINGS):
            _tell_left(path.name, ledger)
            continue
        try:
            _check_size(path.name, path.stat().st_size)
        except Refused as refused:
            ledger.findings.extend(refused.findings)
            ledger.blocks += 1
            ledger.unread.add(path.stem.lower())
            continue
        files[path.name] = path.read_bytes()
    return _build_files(folder.resolve().name, files, ledger)


def _read_zip(name: str, data: bytes, ledger: Ledger) -> SurveyPack:
    entries = read_archive(name, data, ledger)
    check_nested(name, entries, ledger)
    if ledger.blocks:
        raise refusal(ledger)
    documents = [inner for inner in entries if inner.lower().endswith(JSON_ENDING)]
    tables = [inner for inner in entries if inner.lower().endswith(TABLE_ENDINGS)]
    if len(documents) == 1 and not tables:
        place = f"{name} {PurePosixPath(documents[0]).name}"
        return build_pack(read_json(place, entries[documents[0]]), ledger)
    for inner in entries:
        if inner not in tables:
            _tell_left(f"{name} {shown(inner)[1:-1]}", ledger)
    files = {inner: entries[inner] for inner in tables}
    return _build_files(name, files, ledger, before=f"{name} ")


def _build_files(
    name: str, files: dict[str, bytes], ledger: Ledger, before: str = ""
) -> SurveyPack:
    if not files:
        what = "No CSV file of a survey pack is here."
        ledger.add(Node(None, name), what, "Put in site.csv, ground.csv, toes.csv and the rest.")
        raise refusal(ledger)
    tables = []
    for inner, content in files.items():
        plain = PurePosixPath(inner.replace("\\", "/")).name
        part = PurePosixPath(plain).stem.strip().lower()
        where = before + shown(plain)[1:-1]
        if not is_part(part, where, ledger):
            continue
        table = read_delimited(part, where, content, ledger)
        if table is None:
            ledger.unread.add(part)
        else:
            tables.append(table)
    return _build_tables(name, tables, ledger)


def _build_tables(name: str, tables: Iterable, ledger: Ledger) -> SurveyPack:
    return build_pack(tree_of_tables(name, tables, ledger), ledger)


def _tell_left(where: str, ledger: Ledger) -> None:
    what = "This is no table of a pack; it is not read."
    ledger.add(Node(None, where), what, f"Send {FORMS}.", level="note", rule="FI-03")


def _check_size(name: str, size: int) -> None:
    if what := too_large(size):
        raise _single(name, what, "Send one site's survey.", rule="FI-02")


def _single(where: str, what: str, remedy: str, rule: str = "") -> Refused:
    finding = Finding(where, "", what, remedy, rule=rule)
    return Refused(what, where=where, remedy=remedy, findings=(finding,))
