"""Shared by the reference scripts: versions, exact decimals, writing files.

Nothing here computes a reference value.
"""

import json
import math
import sys
from importlib.metadata import version
from pathlib import Path

# Figures such as the Python release are recorded but never compared.
NOT_COMPARED = ("versions",)


def versions(*names: str) -> dict:
    """Returns the installed version of each distribution, and of Python."""
    found = {name: version(name) for name in names}
    found["python"] = ".".join(str(part) for part in sys.version_info[:3])
    return found


def plain(value):
    """Turns numpy scalars and arrays into plain JSON values; refuses NaN and infinity."""
    if isinstance(value, dict):
        return {key: plain(item) for key, item in value.items()}
    if isinstance(value, (list, tuple)):
        return [plain(item) for item in value]
    if hasattr(value, "tolist"):
        return plain(value.tolist())
    if isinstance(value, float) and not math.isfinite(value):
        raise ValueError(f"not a finite number: {value}")
    return value


def write_json(path: Path, document: dict) -> None:
    """Writes one record per line inside each list, so that a change shows as one line."""
    lines = []
    for key, value in plain(document).items():
        if isinstance(value, list) and value and isinstance(value[0], dict):
            rows = ",\n  ".join(json.dumps(row, ensure_ascii=False, allow_nan=False) for row in value)
            body = f"[\n  {rows}\n ]"
        else:
            body = json.dumps(value, ensure_ascii=False, allow_nan=False)
        lines.append(f" {json.dumps(key)}: {body}")
    path.write_text("{\n" + ",\n".join(lines) + "\n}\n", encoding="utf-8")


def read_units(folder: Path) -> list[dict]:
    """Reads units.csv as written; numbers become floats."""
    import csv

    numeric = {
        "rated_kva", "hv_kv", "lv_kv", "frequency_hz", "impedance_pct", "no_load_loss_w",
        "load_loss_w", "no_load_current_pct", "peak_kva",
    }
    with open(folder / "units.csv", encoding="utf-8", newline="") as file:
        return [
            {key: float(cell) if key in numeric else cell for key, cell in row.items()}
            for row in csv.DictReader(file)
        ]


def impedance(unit: dict) -> complex:
    """Returns the series impedance on the unit's own base, from load loss and impedance."""
    r_pu = unit["load_loss_w"] / (unit["rated_kva"] * 1000)
    z_pu = unit["impedance_pct"] / 100
    return complex(r_pu, math.sqrt(z_pu * z_pu - r_pu * r_pu))


def folder_argument() -> Path:
    """The folder to write to: the first argument, else the folder of the scripts."""
    return Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).resolve().parent
