"""units.csv: the two-winding standard transformer types of pandapower.

Electrical data are the library's; unit ids, peak loads and the choice of profile are ours.
"""

import csv
from decimal import Decimal
from pathlib import Path

import pandapower

from common import folder_argument, versions, write_json

COLUMNS = [
    "unit", "phases", "rated_kva", "hv_kv", "lv_kv", "frequency_hz", "vector_group",
    "impedance_pct", "no_load_loss_w", "load_loss_w", "no_load_current_pct", "peak_kva",
    "profile", "note",
]
PROFILES = ["h0", "g0", "g1", "g3", "g6", "l0"]  # as in profiles.csv


def exact(value) -> Decimal:
    """The decimal number as the library prints it, free of binary fuzz."""
    return Decimal(str(value))


def text(value: Decimal) -> str:
    return format(value.normalize(), "f")


def peak_share(index: int) -> Decimal:
    """Peak load over rating: 0.40 .. 0.92, different for each of the first 56 units."""
    return Decimal(40 + 23 * index % 56) / 100


def main(folder: Path) -> dict:
    net = pandapower.create_empty_network()
    types = net.std_types["trafo"]  # three-winding types are kept apart, in "trafo3w"
    rows = []
    for index, (name, data) in enumerate(types.items()):
        rated_kva = exact(data["sn_mva"]) * 1000
        rows.append({
            "unit": f"std-{index + 1:02}",
            "phases": "3",
            "rated_kva": text(rated_kva),
            "hv_kv": text(exact(data["vn_hv_kv"])),
            "lv_kv": text(exact(data["vn_lv_kv"])),
            "frequency_hz": text(exact(net.f_hz)),
            "vector_group": data["vector_group"],
            "impedance_pct": text(exact(data["vk_percent"])),
            "no_load_loss_w": text(exact(data["pfe_kw"]) * 1000),
            "load_loss_w": text(exact(data["vkr_percent"]) / 100 * rated_kva * 1000),
            "no_load_current_pct": text(exact(data["i0_percent"])),
            "peak_kva": text(rated_kva * peak_share(index)),
            "profile": PROFILES[index % len(PROFILES)],
            "note": name,
        })
    with open(folder / "units.csv", "w", encoding="utf-8", newline="") as file:
        writer = csv.DictWriter(file, COLUMNS, lineterminator="\n")
        writer.writeheader()
        writer.writerows(rows)
    write_json(folder / "units.source.json", {
        "source": "pandapower.std_types, all two-winding types; the type's name stands in the note column. "
                  "load_loss_w = vkr_percent/100 of rating, no_load_loss_w = pfe_kw, impedance_pct = vk_percent, "
                  "no_load_current_pct = i0_percent. unit, peak_kva and profile are chosen here, not published.",
        "versions": versions("pandapower"),
        "rows": len(rows),
        "three_winding_left_out": sorted(net.std_types["trafo3w"]),
    })
    return {"two-winding types": len(rows)}


if __name__ == "__main__":
    print(main(folder_argument()))
