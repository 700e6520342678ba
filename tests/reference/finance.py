"""finance.json: annuities, growing flows, loss factors, internal rates, Weibull, best-efficiency load.

The rates, prices and years are ordinary inputs chosen here to cover the cases, limits included.
"""

import math
from pathlib import Path

import numpy
import numpy_financial as npf
from scipy.optimize import minimize_scalar
from scipy.stats import weibull_min

from common import folder_argument, read_units, versions, write_json


def present(rate, flows, mid_year=False):
    """Present value of flows of the years 1..N, by numpy-financial on explicit flows.

    Mid-year flows are laid on half-year periods, so that no factor (1+i)^0.5 is assumed.
    """
    if mid_year:
        half = math.sqrt(1 + rate) - 1
        steps = [0.0] * (2 * len(flows))
        steps[1::2] = flows
        return float(npf.npv(half, steps))
    return float(npf.npv(rate, [0.0, *flows]))


def annuities():
    rows = []
    for rate in (0.0, 0.001, 0.025, 0.05, 0.07, 0.10, 0.15, -0.01):
        for years in (1, 10, 25, 40):
            with numpy.errstate(invalid="ignore"):  # the library also divides by a rate of 0, then drops the result
                factor = float(npf.pv(rate, years, -1))
                recovery = float(npf.pmt(rate, years, -1))
                future = float(npf.fv(rate, years, 0, -1))
            rows.append({
                "discount_rate": rate, "years": years, "annuity": factor, "capital_recovery": recovery,
                "annuity_mid_year": present(rate, [1.0] * years, mid_year=True),
                "future_value_of_one": future,
            })
            if not math.isclose(factor, present(rate, [1.0] * years), rel_tol=1e-12):
                raise ValueError("pv and npv disagree")
    return rows


def growing():
    rows = []
    for rate, growth in ((0.05, 0.02), (0.05, 0.05), (0.02, 0.05), (0.0, 0.03), (0.03, 0.0),
                         (0.0, 0.0), (0.07, -0.02), (0.05, 0.0500000001), (0.06, 0.06)):
        for years in (1, 20, 40):
            flows = [100 * (1 + growth) ** (k - 1) for k in range(1, years + 1)]
            rows.append({
                "first_flow": 100.0, "discount_rate": rate, "growth": growth, "years": years,
                "present_value": present(rate, flows), "present_value_mid_year": present(rate, flows, True),
            })
    return rows


def loss_factors():
    """Capitalised loss factors of METHODS 5, present-value form, by npv of yearly flows."""
    base = {
        "discount_rate": 0.06, "years": 30, "hours": 8760.0, "auxiliary_hours": 2000.0,
        "no_load_price_per_kwh": 0.11, "load_price_per_kwh": 0.11, "energy_escalation": 0.0,
        "demand_per_kw_year": 0.0, "demand_escalation": 0.0, "responsibility_pu": 1.0,
        "carbon_price_per_t": 0.0, "carbon_escalation": 0.0, "no_load_carbon_kg_per_kwh": 0.0,
        "load_carbon_kg_per_kwh": 0.0, "peak_pu": 0.6, "load_growth": 0.0, "load_growth_years": 30,
        "loss_factor_pu": 0.3, "mid_year": False,
    }
    changes = [
        {},
        {"discount_rate": 0.0},
        {"energy_escalation": 0.06},  # i = g
        {"energy_escalation": 0.025, "load_price_per_kwh": 0.13},
        {"load_growth": 0.02},
        {"load_growth": 0.02, "load_growth_years": 10},
        {"demand_per_kw_year": 85.0, "demand_escalation": 0.01, "responsibility_pu": 0.8},
        {"carbon_price_per_t": 80.0, "carbon_escalation": 0.03,
         "no_load_carbon_kg_per_kwh": 0.35, "load_carbon_kg_per_kwh": 0.41},
        {"mid_year": True},
        {"mid_year": True, "energy_escalation": 0.02, "load_growth": 0.015, "load_growth_years": 12,
         "demand_per_kw_year": 60.0, "demand_escalation": 0.02, "responsibility_pu": 0.9,
         "carbon_price_per_t": 65.0, "carbon_escalation": 0.04, "no_load_carbon_kg_per_kwh": 0.3,
         "load_carbon_kg_per_kwh": 0.33, "load_price_per_kwh": 0.125, "hours": 8400.0},
    ]
    rows = []
    for change in changes:
        c = {**base, **change}
        years = range(1, c["years"] + 1)
        energy = [(1 + c["energy_escalation"]) ** (k - 1) for k in years]
        demand = [c["demand_per_kw_year"] * (1 + c["demand_escalation"]) ** (k - 1) for k in years]
        carbon = [c["carbon_price_per_t"] * (1 + c["carbon_escalation"]) ** (k - 1) for k in years]
        beta2 = [(c["peak_pu"] * (1 + c["load_growth"]) ** (min(k, c["load_growth_years"]) - 1)) ** 2 for k in years]

        def energy_cost(price, kappa):
            return [price * e + p * kappa / 1000 for e, p in zip(energy, carbon)]

        no_load = energy_cost(c["no_load_price_per_kwh"], c["no_load_carbon_kg_per_kwh"])
        load = energy_cost(c["load_price_per_kwh"], c["load_carbon_kg_per_kwh"])
        mid = c["mid_year"]
        rate = c["discount_rate"]
        sum_d = present(rate, [1.0] * c["years"], mid)
        rows.append({
            **c,
            "factor_a_per_kw": present(rate, [c["hours"] * p + d for p, d in zip(no_load, demand)], mid),
            "factor_b_per_kw": present(rate, [
                b * (c["hours"] * c["loss_factor_pu"] * p + d * c["responsibility_pu"] ** 2)
                for b, p, d in zip(beta2, load, demand)], mid),
            "factor_aux_per_kw": present(rate, [c["auxiliary_hours"] * p for p in no_load], mid),
            "capital_recovery": 1 / sum_d,
            "levelised_price_per_kwh": present(rate, [c["no_load_price_per_kwh"] * e for e in energy], mid) / sum_d,
            "levelised_square_of_peak": present(rate, beta2, mid) / sum_d,
        })
    return rows


def internal_rates():
    rows = []
    cases = [
        ("premium of 1500 saves 210 a year for 25 years", [-1500.0] + [210.0] * 25),
        ("premium saves a growing sum", [-8000.0] + [600.0 * 1.02**k for k in range(30)]),
        ("saving that falls with age", [-5000.0] + [900.0 * 0.95**k for k in range(20)]),
        ("exactly zero", [-1000.0] + [100.0] * 10),
        ("negative rate", [-1000.0] + [80.0] * 10),
        ("scrap at the end", [-2500.0] + [300.0] * 11 + [800.0]),
        ("delayed start", [-2000.0, 0.0, 0.0] + [450.0] * 8),
        ("library documentation 1", [-100.0, 39.0, 59.0, 55.0, 20.0]),
        ("library documentation 2", [-100.0, 0.0, 0.0, 74.0]),
    ]
    for name, flows in cases:
        rate = float(npf.irr(flows))
        rest = float(npf.npv(rate, flows))
        if abs(rest) > 1e-8 * abs(flows[0]):
            raise ValueError(f"{name}: npv at the rate is {rest}")
        rows.append({"case": name, "flows": flows, "internal_rate": rate, "npv_at_7_pct": float(npf.npv(0.07, flows))})
    return rows


def weibull():
    """h of METHODS 7 from the survival function; survival to the start of each year beside it."""
    rows, worst = [], 0.0
    for shape, scale in ((1.0, 40.0), (0.8, 60.0), (2.0, 50.0), (3.5, 45.0), (5.0, 42.0), (7.5, 55.0)):
        law = weibull_min(shape, scale=scale)
        for age in (0, 1, 5, 15, 25, 35, 40, 50, 60, 80):
            log_survival = law.logsf(age), law.logsf(age + 1)
            h = float(-numpy.expm1(log_survival[1] - log_survival[0]))
            direct = float((law.sf(age) - law.sf(age + 1)) / law.sf(age))
            worst = max(worst, abs(h - direct))
            rows.append({"shape": shape, "scale_years": scale, "age": age,
                         "failure_probability": h, "survival_to_age": float(law.sf(age))})
    if worst > 1e-12:
        raise ValueError(f"two ways to h differ by {worst}")
    return rows


def best_load(folder):
    rows = []
    for unit in read_units(folder):
        p0, pk, rated_w = unit["no_load_loss_w"], unit["load_loss_w"], unit["rated_kva"] * 1000
        # Greatest efficiency = least loss per power carried; the flat minimum bounds the accuracy.
        found = minimize_scalar(lambda b: (p0 + b * b * pk) / (b * rated_w),
                                bounds=(1e-3, 2.0), method="bounded", options={"xatol": 1e-12, "maxiter": 500})
        rows.append({
            "unit": unit["unit"], "best_load_pu": float(found.x),
            "efficiency_at_best_load_pf_1": float(1 / (1 + found.fun)),
            "efficiency_at_best_load_pf_0_8": float(0.8 / (0.8 + found.fun)),
        })
        if abs(found.x / math.sqrt(p0 / pk) - 1) > 1e-6:
            raise ValueError(f"{unit['unit']}: the optimiser found {found.x}")
    return rows


def main(folder: Path) -> dict:
    best = best_load(folder)
    document = {
        "source": "numpy-financial (pv, pmt, fv, npv, irr) on explicit yearly flows, scipy.stats.weibull_min, "
                  "scipy.optimize.minimize_scalar; rates and growth as fractions. best_loads: an optimiser on a flat "
                  "minimum, good to 1e-6 in the load and 1e-9 in the efficiency.",
        "versions": versions("numpy-financial", "numpy", "scipy"),
        "tolerances": {"best_load_pu": 1e-6},
        "annuities": annuities(), "growing_flows": growing(), "loss_factors": loss_factors(),
        "internal_rates": internal_rates(), "weibull": weibull(), "best_loads": best,
    }
    write_json(folder / "finance.json", document)
    return {key: len(value) for key, value in document.items() if isinstance(value, list)}


if __name__ == "__main__":
    print(main(folder_argument()))
