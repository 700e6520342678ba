"""An independent simulation of a tender under uncertain inputs, as a reference for tests/tender/risk.rs.

Writes tender_cloud.json. Loss factors by present value: year k = 1..N, discounted at year ends, peak load growing for
Y years; generator, sampling and sums are numpy's own. The rank correlation is a normal copula. Bounds for quantiles
are those of DRAWS draws at four standard errors.
"""

from pathlib import Path

import numpy as np
from scipy.stats import norm

from common import folder_argument, versions, write_json

DRAWS = 20_000  # of the run that is compared
OWN = 1_000_000
N, Y, HOURS, LSF, PRF = 25, 15, 8760.0, 0.35, 0.8
RHO = 0.6  # between energy price and its escalation
BIDS = {  # price, no-load, load, auxiliary loss in W
    "cheap": (8000.0, 1100.0, 6500.0, 0.0),
    "lean": (10500.0, 610.0, 5400.0, 30.0),
    "iron": (9800.0, 500.0, 7200.0, 0.0),
    "copper": (11000.0, 900.0, 3300.0, 0.0),
}


def factors(rate, price, escalation, growth, demand, peak):
    a = b = aux = 0.0
    for k in range(1, N + 1):
        d = (1 + rate) ** -k
        energy = price * (1 + escalation) ** (k - 1)
        load = peak * (1 + growth) ** (min(k, Y) - 1)
        a = a + d * (HOURS * energy + demand)
        aux = aux + d * HOURS * energy
        b = b + d * load**2 * (HOURS * LSF * energy + demand * PRF**2)
    return a, b, aux


def main(folder: Path) -> dict:
    rng = np.random.default_rng(57120)
    rate = rng.triangular(4.0, 6.0, 9.0, OWN) / 100
    # Price and escalation together: normals of the Pearson correlation that gives the rank correlation.
    r = 2 * np.sin(np.pi / 6 * RHO)
    z = rng.multivariate_normal([0, 0], [[1, r], [r, 1]], OWN)
    u = norm.cdf(z)
    low, mode, high = 0.06, 0.09, 0.15
    left = u[:, 0] < (mode - low) / (high - low)
    price = np.where(
        left,
        low + np.sqrt(u[:, 0] * (high - low) * (mode - low)),
        high - np.sqrt((1 - u[:, 0]) * (high - low) * (high - mode)),
    )
    escalation = 0.03 * u[:, 1]
    growth = rng.normal(1.0, 0.5, OWN) / 100
    demand = 40.0 * np.exp(rng.normal(0.0, 0.3, OWN))
    peak = rng.triangular(0.3, 0.5, 0.9, OWN)
    a, b, aux = factors(rate, price, escalation, growth, demand, peak)
    cost = np.array([p + a * i / 1e3 + b * c / 1e3 + aux * x / 1e3 for p, i, c, x in BIDS.values()])
    regret = cost - cost.min(axis=0)
    best = cost.argmin(axis=0)
    bids = []
    for i, name in enumerate(BIDS):
        bid = {"bid": name, "probability_pu": float(np.mean(best == i))}
        bid["mean_regret"] = float(regret[i].mean())
        bid["regret_deviation"] = float(regret[i].std())
        for label, p in [("p5", 0.05), ("p50", 0.5), ("p95", 0.95)]:
            step = 4 * np.sqrt(p * (1 - p) * (1 / DRAWS + 1 / OWN))
            bid[label] = [float(q) for q in np.quantile(cost[i], [p - step, p + step])]
        bids.append(bid)
    document = {
        "source": "simulation with numpy's own generator (PCG64) and distributions",
        "versions": versions("numpy", "scipy"),
        "own_draws": OWN,
        "compared_draws": DRAWS,
        "bids": bids,
    }
    write_json(folder / "tender_cloud.json", document)
    return {"bids": len(bids)}


if __name__ == "__main__":
    print(main(folder_argument()))
