"""Areas of the winner map from scipy's half-plane intersection, as a reference for tests/tender/map_reference.rs.

Writes tender_map.json. A bid is [constant, no_load_kw, load_kw]: its owning
cost is constant + A*no_load_kw + B*load_kw; the box is 0..a_max x 0..b_max. Cells: scipy.spatial.HalfspaceIntersection
(Qhull) about the Chebyshev centre found by scipy.optimize.linprog; area: scipy.spatial.ConvexHull.
"""

from pathlib import Path

import numpy as np
from scipy.optimize import linprog
from scipy.spatial import ConvexHull, HalfspaceIntersection

from common import folder_argument, versions, write_json

BOX = np.array([[-1.0, 0.0, 0.0], [0.0, -1.0, 0.0], [1.0, 0.0, -1.0], [0.0, 1.0, -1.0]])


def share(bids, i, a_max, b_max):
    """Part of the box in which bid i is not dearer than any other."""
    unit = bids * np.array([1.0, a_max, b_max])
    difference = np.delete(unit[i] - unit, i, axis=0)  # c + p*u + q*v <= 0
    planes = np.vstack([difference[:, [1, 2, 0]], BOX])
    norm = np.linalg.norm(planes[:, :2], axis=1)
    flat = norm == 0.0
    if np.any(planes[flat, 2] > 0.0):
        return 0.0
    planes = planes[~flat] / norm[~flat, None]
    # Greatest circle inside: maximise r with n.x + r <= -d.
    room = linprog(
        [0.0, 0.0, -1.0],
        A_ub=np.c_[planes[:, :2], np.ones(len(planes))],
        b_ub=-planes[:, 2],
        bounds=[(0, 1), (0, 1), (0, None)],
    )
    if not room.success or room.x[2] < 1e-10:
        return 0.0
    corners = HalfspaceIntersection(planes, room.x[:2]).intersections
    return float(ConvexHull(corners).volume)


def lot(rng, n):
    no_load = rng.uniform(0.3, 1.5, n)
    load = rng.uniform(2.0, 9.0, n)
    constant = 5000.0 + 1500.0 / no_load + 9000.0 / load + rng.uniform(0.0, 200.0, n)
    bids = np.round(np.c_[constant, no_load, load], 3)
    a, b = round(rng.uniform(500.0, 12000.0), 2), round(rng.uniform(100.0, 4000.0), 2)
    shares = [share(bids, i, 2 * a, 2 * b) for i in range(n)]
    return {"factor_a_per_kw": a, "factor_b_per_kw": b, "bids": bids.tolist(), "shares": shares}


def main(folder: Path) -> dict:
    rng = np.random.default_rng(1724)
    lots = [lot(rng, n) for n in [1, 2, 3, 5, 8, 13, 21, 34, 60] * 4]
    worst = max(abs(sum(lot["shares"]) - 1) for lot in lots)
    if worst > 1e-12:
        raise ValueError(f"shares do not sum to 1: {worst}")
    document = {
        "source": "scipy.spatial.HalfspaceIntersection and ConvexHull (Qhull)",
        "versions": versions("numpy", "scipy"),
        "lots": lots,
    }
    write_json(folder / "tender_map.json", document)
    return {"lots": len(lots)}


if __name__ == "__main__":
    print(main(folder_argument()))
