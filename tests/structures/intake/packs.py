"""A small good pack, and ways to write it down in each form with something changed."""

import copy
import io
import zipfile

import openpyxl

GOOD = {
    "pack": 1,
    "site": {"code": "KE-04", "name": "Keldun ford", "stream": "Keldun", "bed_slope": 0.004},
    "ground": [
        {"offset_m": 0.0, "level_m": 103.2, "note": "left bank"},
        {"offset_m": 12.0, "level_m": 101.6},
        {"offset_m": 24.0, "level_m": 100.4},
        {"offset_m": 33.0, "level_m": 100.1},
        {"offset_m": 42.0, "level_m": 100.2},
        {"offset_m": 50.0, "level_m": 100.3},
        {"offset_m": 58.0, "level_m": 100.5},
        {"offset_m": 70.0, "level_m": 102.9},
    ],
    "toes": {"left_m": 24.0, "right_m": 58.0},
    "rock": [
        {"offset_m": 30.0, "depth_m": 6.1, "method": "bore", "met_rock": True},
        {"offset_m": 52.0, "depth_m": 6.0, "method": "bore", "met_rock": False},
    ],
    "probes": [
        {"offset_m": 36.0, "depth_m": 4.0, "refused": True, "why_stopped": "rock-like"},
        {"offset_m": 44.0, "depth_m": 4.4, "refused": False},
    ],
    "soundings": [
        {
            "sounding": "S1",
            "offset_m": 40.0,
            "array": "schlumberger",
            "readings": [
                {"ab2_m": ab2, "mn2_m": mn2, "apparent_resistivity_ohm_m": rho}
                for ab2, mn2, rho in (
                    # handbook 2, table 2
                    (1.5, 0.5, 190.832362),
                    (2.0, 0.5, 180.148128),
                    (3.0, 0.5, 151.362163),
                    (4.0, 0.5, 122.092585),
                    (6.0, 0.5, 83.364289),
                    (8.0, 0.5, 69.635646),
                    (10.0, 0.5, 69.386256),
                    (10.0, 2.5, 70.369479),
                    (15.0, 2.5, 87.197841),
                    (20.0, 2.5, 111.936660),
                )
            ],
        },
        {
            "sounding": "W1",
            "offset_m": 48.0,
            "array": "wenner",
            "readings": [
                {"a_m": a, "apparent_resistivity_ohm_m": rho, "sd_percent": 5}
                for a, rho in zip(
                    (1.0, 2.0, 3.0, 4.0, 5.0, 7.0, 10.0, 15.0),
                    (98.0, 96.9, 90.0, 80.0, 73.4, 50.0, 33.9, 20.0),
                    strict=True,
                )
            ],
        },
    ],
    "refraction": [
        {
            "line": "R1",
            "offset_m": 44.0,
            "picks": [
                {"shot_m": 0.0, "geophone_m": 5.0, "time_ms": 9.8},
                {"shot_m": 0.0, "geophone_m": 10.0, "time_ms": 15.0},
                {"shot_m": 10.0, "geophone_m": 5.0, "time_ms": 9.9},
                {"shot_m": 10.0, "geophone_m": 0.0, "time_ms": 15.1},
            ],
        }
    ],
    "rock_line": [
        {"offset_m": 0.0, "level_m": 101.0},
        {"offset_m": 36.0, "level_m": 93.5},
        {"offset_m": 70.0, "level_m": 95.0},
    ],
    "ground_water": {
        "hydraulic_conductivity_m_per_day": 40,
        "gradient": 0.004,
        "specific_yield": 0.18,
        "water_level_m": 98.9,
    },
    "wall": {"thickness_m": 0.8, "side_slope": 1.5},
    "works": {"pump_hours": 480},
}

GOOD_TABLES = {
    "site.csv": "code,name,stream,bed_slope\nKE-04,Keldun ford,Keldun,0.004\n",
    "ground.csv": "offset_m,level_m,note\n0,103.2,left bank\n12,101.6,\n24,100.4,\n33,100.1,\n"
    "42,100.2,\n50,100.3,\n58,100.5,\n70,102.9,\n",
    "toes.csv": "left_m,right_m\n24,58\n",
    "rock.csv": "offset_m,depth_m,method,met_rock\n30,6.1,bore,yes\n52,6.0,bore,0\n",
    "probes.csv": "offset_m,depth_m,refused,why_stopped\n36,4.0,true,rock-like\n44,4.4,no,\n",
    "soundings.csv": "sounding,offset_m,array,ab2_m,mn2_m,a_m,apparent_resistivity_ohm_m,sd_percent\n"
    + "".join(
        f"S1,40,schlumberger,{r['ab2_m']},{r['mn2_m']},,{r['apparent_resistivity_ohm_m']},\n"
        for r in GOOD["soundings"][0]["readings"]
    )
    + "".join(
        f"W1,48,wenner,,,{r['a_m']},{r['apparent_resistivity_ohm_m']},5\n"
        for r in GOOD["soundings"][1]["readings"]
    ),
    "refraction.csv": "line,offset_m,shot_m,geophone_m,time_ms\n"
    "R1,44,0,5,9.8\nR1,44,0,10,15.0\nR1,44,10,5,9.9\nR1,44,10,0,15.1\n",
    "rock_line.csv": "offset_m,level_m\n0,101\n36,93.5\n70,95\n",
    "ground_water.csv": "hydraulic_conductivity_m_per_day,gradient,specific_yield,water_level_m\n"
    "40,0.004,0.18,98.9\n",
    "wall.csv": "thickness_m,side_slope\n0.8,1.5\n",
    "works.csv": "pump_hours\n480\n",
}


def good(**changes):
    """The good pack with parts exchanged; None leaves a part out."""
    pack = copy.deepcopy(GOOD) | changes
    return {key: value for key, value in pack.items() if value is not None}


def with_row(part, place, **changes):
    """The good pack with fields of one row of a list exchanged."""
    pack = copy.deepcopy(GOOD)
    pack[part][place] |= changes
    return pack


def write_folder(folder, **changes):
    """Write the good tables; a keyword exchanges one (text or bytes), None leaves it out."""
    folder.mkdir()
    tables = GOOD_TABLES | {f"{name}.csv": text for name, text in changes.items()}
    for name, text in tables.items():
        if text is not None:
            content = text.encode() if isinstance(text, str) else text
            (folder / name).write_bytes(content)
    return folder


def write_zip(path, entries=None, **options):
    """Write a zip of the good tables, or of the entries given."""
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED, **options) as archive:
        for name, content in (GOOD_TABLES if entries is None else entries).items():
            archive.writestr(name, content)
    return path


def workbook(**sheets):
    """The good pack as a workbook whose sheets hold numbers and yes/no as such."""
    book = openpyxl.Workbook()
    book.remove(book.active)
    for name, text in GOOD_TABLES.items():
        sheet = book.create_sheet(name.removesuffix(".csv"))
        for line in text.splitlines():
            sheet.append([_typed(cell) for cell in line.split(",")])
    for name, cells in sheets.items():
        sheet = book[name] if name in book.sheetnames else book.create_sheet(name)
        for address, value in cells.items():
            sheet[address] = value
    return book


def write_workbook(path, **sheets):
    """Write the good workbook with cells exchanged."""
    workbook(**sheets).save(path)
    return path


def workbook_bytes(**sheets):
    stream = io.BytesIO()
    workbook(**sheets).save(stream)
    return stream.getvalue()


def _typed(cell):
    if cell in {"yes", "no", "true", "false"}:
        return cell in {"yes", "true"}
    try:
        return float(cell)
    except ValueError:
        return cell or None
