"""Makes every reference file again; with --check compares instead of writing.

    python regenerate.py            write the files beside the scripts
    python regenerate.py --check    make them in a temporary folder, compare, exit 1 on a difference
"""

import csv
import json
import sys
import tempfile
from pathlib import Path

import annual_energy
import bdew
import estimate
import finance
import grid
import power_flow
import standard_types
import tender_cloud
import tender_map
import thermal
from common import NOT_COMPARED

HERE = Path(__file__).resolve().parent
# In order: later scripts read the CSV files of the earlier ones.
SCRIPTS = [standard_types, bdew, annual_energy, power_flow, finance, grid, thermal, tender_map,
           tender_cloud, estimate]
FILES = ["units.csv", "units.source.json", "profiles.csv", "profiles.source.json", "annual_energy.json",
         "power_flow.json", "finance.json", "grid.json", "thermal.json", "tender_map.json", "tender_cloud.json",
         "estimate.json"]
TOLERANCE = 1e-9
SHOWN = 20


class Tally:
    """Counts compared records (a row, a case, a column of profiles.csv) and shows the first differences."""

    def __init__(self):
        self.passed, self.failed, self.shown, self.worst = 0, 0, 0, 0.0

    def record(self, where, old, new, tolerance, special, key=""):
        self.good = True
        compare(self, where, key, old, new, tolerance, special)
        self.passed += self.good
        self.failed += not self.good

    def value(self, where, old, new, tolerance):
        if is_number(old) and is_number(new):
            scale = max(abs(old), abs(new))
            difference = abs(old - new) / scale if scale else 0.0
            self.worst = max(self.worst, difference)
            good = difference <= tolerance
        else:
            good = type(old) is type(new) and old == new
        if not good:
            self.good = False
            self.shown += 1
            if self.shown <= SHOWN:
                print(f"{where}: committed {old!r}, now {new!r}", file=sys.stderr)


def is_number(value):
    return isinstance(value, (int, float)) and not isinstance(value, bool)


def compare(tally, where, key, old, new, tolerance, special):
    """Walks two JSON values; `special` holds tolerances by the name of a key."""
    if key in NOT_COMPARED or key.endswith("_not_compared"):
        return
    tolerance = special.get(key, tolerance)
    if isinstance(old, dict) and isinstance(new, dict):
        for name in sorted(old.keys() | new.keys()):
            compare(tally, f"{where}.{name}", name, old.get(name), new.get(name), tolerance, special)
    elif isinstance(old, list) and isinstance(new, list) and len(old) == len(new):
        for index, (one, other) in enumerate(zip(old, new)):
            compare(tally, f"{where}[{index}]", "", one, other, tolerance, special)
    else:
        tally.value(where, old, new, tolerance)


def cell(text):
    try:
        return float(text)
    except ValueError:
        return text


def records(path):
    """A file as named records, with the tolerances that it states for itself."""
    if path.suffix == ".json":
        document = json.loads(path.read_text(encoding="utf-8"))
        found = {}
        for key, value in document.items():
            if key in NOT_COMPARED or key.endswith("_not_compared"):
                continue
            if isinstance(value, list) and value and isinstance(value[0], dict):
                found |= {f"{key}[{index}]": row for index, row in enumerate(value)}
            else:
                found[key] = value
        return found, document
    with open(path, encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    if path.name == "profiles.csv":
        return {key: [cell(row[key]) for row in rows] for key in rows[0]}, {}
    return {f"row {index + 2}": {key: cell(value) for key, value in row.items()} for index, row in enumerate(rows)}, {}


def check(fresh):
    tally = Tally()
    for name in FILES:
        old, document = records(HERE / name) if (HERE / name).exists() else ({}, {})
        new, now = records(fresh / name)
        before = tally.passed, tally.failed
        tally.worst = 0.0
        for key in old | new:
            tally.record(f"{name}: {key}", old.get(key), new.get(key),
                         document.get("tolerance", TOLERANCE), document.get("tolerances", {}), key.split("[")[0])
        print(f"{name}: {tally.passed - before[0]} records agree, {tally.failed - before[1]} differ, "
              f"worst relative difference {tally.worst:.1e}")
        if document.get("versions") != now.get("versions"):
            print(f"{name}: other versions: {document.get('versions')} then, {now.get('versions')} now", file=sys.stderr)
    print(f"{tally.passed} passed, {tally.failed} failed")
    return 1 if tally.failed else 0


def make(folder):
    for script in SCRIPTS:
        for line in script.main(folder).items():
            print(f"{script.__name__}:", *line)


def main():
    if sys.argv[1:] == ["--check"]:
        with tempfile.TemporaryDirectory() as name:
            make(Path(name))
            return check(Path(name))
    if sys.argv[1:]:
        print(__doc__, file=sys.stderr)
        return 2
    make(HERE)
    return 0


if __name__ == "__main__":
    sys.exit(main())
