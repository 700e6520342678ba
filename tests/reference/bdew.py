"""profiles.csv: BDEW standard load profiles of 2025, quarter-hourly, peak of each = 1."""

import warnings
from pathlib import Path

from demandlib import bdew

from common import folder_argument, versions, write_json

YEAR = 2025
PROFILES = ["h0", "g0", "g1", "g3", "g6", "l0"]
OFFSET = "+01:00"  # one offset all year: the library's index has no summer time either


def main(folder: Path) -> dict:
    with warnings.catch_warnings():  # the library turns every later warning into an error
        frame = bdew.ElecSlp(YEAR).get_profiles(*PROFILES)
    if frame.isna().any().any() or len(frame) != 35040:
        raise ValueError("the profiles are not complete")
    frame = frame / frame.max()
    with open(folder / "profiles.csv", "w", encoding="utf-8", newline="\n") as file:
        file.write("timestamp," + ",".join(PROFILES) + "\n")
        for stamp, row in zip(frame.index, frame.to_numpy()):
            cells = ",".join(f"{value:.6g}" for value in row)
            file.write(f"{stamp.isoformat()}{OFFSET},{cells}\n")
    write_json(folder / "profiles.source.json", {
        "source": "demandlib.bdew.ElecSlp, BDEW standard load profiles (static h0; no holidays), year 2025, "
                  "start of each quarter hour, divided by the year's maximum, 6 significant digits.",
        "versions": versions("demandlib", "pandas", "numpy"),
        "rows": len(frame),
        "profiles": PROFILES,
    })
    return {"rows": len(frame)}


if __name__ == "__main__":
    print(main(folder_argument()))
