"""estimate.json: losses estimated from known units by least squares of ln P, with 95 % prediction intervals.

The fleets are drawn here from a stated law and a seed; the estimates come from numpy.linalg.lstsq on the whole design
matrix and scipy.stats.t, by the textbook formula y +- t*s*sqrt(1 + x'(X'X)^-1 x). Coverage is found by simulation.
"""

import math
from pathlib import Path

import numpy
from scipy import stats

from common import folder_argument, versions, write_json

SIZES = [25.0, 50.0, 100.0, 160.0, 250.0, 400.0, 630.0, 1000.0]
SEED = 20270101


def draw(random, count, scatter, years=True, dry=True, aluminium=True, single=False):
    """Units of the law P = 8 S^0.75 exp(-0.02 (year - 2000)), dearer in aluminium, dry and single-phase units."""
    rows = []
    for n in range(count):
        row = {
            "rated_kva": SIZES[(n + n // 8) % 8],
            "year_made": int(random.integers(1965, 2025)) if years else None,
            "winding_metal": "aluminium" if aluminium and n % 3 == 0 else "copper",
            "insulation": "dry" if dry and n % 4 == 1 else "liquid",
            "phases": 1 if single and n % 5 == 2 else 3,
        }
        loss = 8.0 * row["rated_kva"] ** 0.75
        loss *= math.exp(-0.02 * ((row["year_made"] or 2000) - 2000))
        loss *= 1.4 if row["winding_metal"] == "aluminium" else 1.0
        loss *= 1.25 if row["insulation"] == "dry" else 1.0
        loss *= 0.8 if row["phases"] == 1 else 1.0
        rows.append(row | {"loss_w": loss * math.exp(scatter * random.standard_normal())})
    return rows


def terms(row, names):
    value = {
        "rating": math.log(row["rated_kva"]),
        "year made": ((row["year_made"] or 2000) - 2000) / 10,
        "aluminium windings": float(row["winding_metal"] == "aluminium"),
        "dry-type": float(row["insulation"] == "dry"),
        "single phase": float(row["phases"] == 1),
    }
    return [1.0] + [value[name] for name in names]


def predict(known, asked, names):
    """Estimate and ends of the interval by the normal equations of the whole design matrix."""
    x = numpy.array([terms(row, names) for row in known])
    y = numpy.log([row["loss_w"] for row in known])
    b = numpy.linalg.lstsq(x, y, rcond=None)[0]
    freedom = len(y) - x.shape[1]
    s = math.sqrt(float(numpy.sum((y - x @ b) ** 2)) / freedom)
    at = numpy.array(terms(asked, names))
    half = stats.t.ppf(0.975, freedom) * s * math.sqrt(1.0 + float(at @ numpy.linalg.inv(x.T @ x) @ at))
    middle = float(at @ b)
    return {"exponent": float(b[1]), "loss_w": math.exp(middle), "low_w": math.exp(middle - half),
            "high_w": math.exp(middle + half)}


def main(folder: Path) -> dict:
    random = numpy.random.default_rng(SEED)
    every = ["rating", "year made", "aluminium windings", "dry-type"]
    plans = [
        (draw(random, 60, 0.12), every),
        (draw(random, 200, 0.05, single=True), every + ["single phase"]),
        (draw(random, 40, 0.2, years=False, dry=False), ["rating", "aluminium windings"]),
        (draw(random, 7, 0.1, dry=False, aluminium=False), ["rating"]),
        (draw(random, 12, 0.1, dry=False, aluminium=False), ["rating", "year made"]),
    ]
    fleets = []
    for known, names in plans:
        years = [1972, 2019] if known[0]["year_made"] else [None, None]
        asked = [
            {"rated_kva": 315.0, "year_made": years[0], "winding_metal": "aluminium", "insulation": "dry", "phases": 3},
            {"rated_kva": 1250.0, "year_made": years[1], "winding_metal": "copper", "insulation": "liquid", "phases": 1},
        ]
        fleets.append({"terms": names, "known": known,
                       "asked": [row | predict(known, row, names) for row in asked]})
    held, drawn = 0, 2000
    for _ in range(drawn):
        known = draw(random, 25, 0.12)
        asked = known.pop(0)
        got = predict(known, asked, every)
        held += got["low_w"] <= asked["loss_w"] <= got["high_w"]
    coverage = held / drawn
    if abs(coverage - 0.95) > 3 * math.sqrt(0.95 * 0.05 / drawn):
        raise ValueError(f"the interval holds {coverage} of the units drawn, not 95 %")
    write_json(folder / "estimate.json", {
        "source": "numpy.linalg.lstsq and scipy.stats.t on units drawn from a stated law (estimate.py); prediction "
                  "interval y +- t(0.975, n-p)*s*sqrt(1 + x'(X'X)^-1 x) of ln P.",
        "versions": versions("numpy", "scipy"),
        "confidence": 0.95,
        "coverage_of_2000_drawn_units": coverage,
        "fleets": fleets,
    })
    return {"share of 2000 drawn units inside their interval": coverage}


if __name__ == "__main__":
    print(main(folder_argument()))
