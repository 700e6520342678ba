"""thermal.json: transient top-oil and hot-spot temperature by transformer-thermal-model.

Temperatures only; ageing is not looked at. The library's classes serve as carriers of the equations:
every constant is given to it, its own defaults (10 K of ambient surcharge among them) are not used.
"""

import csv
import math
from datetime import datetime, timedelta
from pathlib import Path

from scipy.integrate import solve_ivp
from transformer_thermal_model.cooler import CoolerType
from transformer_thermal_model.model import Model
from transformer_thermal_model.schemas import InputProfile, UserTransformerSpecifications
from transformer_thermal_model.schemas.thermal_model.initial_state import InitialLoad, InitialTopOilTemp
from transformer_thermal_model.transformer import DistributionTransformer, PowerTransformer

from common import folder_argument, versions, write_json

# Constants of IEC 60076-7 and its examples of ratings, as METHODS 10 states them (the rises and R, H: memory).
UNITS = {
    "distribution-onan": {"x": 0.8, "y": 1.6, "k11": 1.0, "k21": 1, "k22": 2, "tau_o_min": 180.0, "tau_w_min": 4.0,
                          "top_oil_rise_k": 55.0, "gr_k": 23.0, "r": 5.0, "h": 1.1},
    "power-onan": {"x": 0.8, "y": 1.3, "k11": 0.5, "k21": 2, "k22": 2, "tau_o_min": 210.0, "tau_w_min": 10.0,
                   "top_oil_rise_k": 52.0, "gr_k": 26.0, "r": 6.0, "h": 1.3},
    "power-onaf": {"x": 0.8, "y": 1.3, "k11": 0.5, "k21": 2, "k22": 2, "tau_o_min": 150.0, "tau_w_min": 7.0,
                   "top_oil_rise_k": 52.0, "gr_k": 26.0, "r": 6.0, "h": 1.3},
    "power-od": {"x": 1.0, "y": 2.0, "k11": 1.0, "k21": 1, "k22": 1, "tau_o_min": 90.0, "tau_w_min": 7.0,
                 "top_oil_rise_k": 49.0, "gr_k": 29.0, "r": 6.0, "h": 1.3},
    # The 250 MVA ONAF unit of IEC 60076-7:2018 Annex H, as in check value T5-IEC60076-7-AnnexH-steps.
    "annex-h-onaf": {"x": 0.8, "y": 1.3, "k11": 0.5, "k21": 2, "k22": 2, "tau_o_min": 150.0, "tau_w_min": 7.0,
                     "top_oil_rise_k": 38.3, "gr_k": 14.5, "r": 1000.0, "h": 1.4},
}
ANNEX_H_ENDS = [190, 365, 500, 705, 730, 745]
ANNEX_H_LOADS = [1.0, 0.6, 1.5, 0.3, 2.1, 0.0]
ANNEX_H_TOP_OIL = [61.9, 44.4, 89.2, 35.0, 67.9, 60.3]
ANNEX_H_HOT_SPOT = [83.8, 54.0, 127.0, 37.54, 138.6, 75.3]
START = datetime(2025, 1, 1)


def transformer(name):
    p = UNITS[name]
    specifications = UserTransformerSpecifications(
        no_load_loss=100.0, load_loss=100.0 * p["r"], nom_load_sec_side=1.0, amb_temp_surcharge=0.0,
        end_temp_reduction=0.0, top_oil_temp_rise=p["top_oil_rise_k"], winding_oil_gradient=p["gr_k"],
        hot_spot_fac=p["h"], time_const_oil=p["tau_o_min"], time_const_windings=p["tau_w_min"],
        oil_const_k11=p["k11"], winding_const_k21=p["k21"], winding_const_k22=p["k22"],
        oil_exp_x=p["x"], winding_exp_y=p["y"])
    if name == "distribution-onan":
        return DistributionTransformer(user_specs=specifications)
    # The cooling class only selects defaults, and none is left to select.
    return PowerTransformer(user_specs=specifications, cooling_type=CoolerType.ONAN)


def run(name, minutes, k, ambient, initial):
    """Element i of k and ambient holds from minutes[i-1] to minutes[i]; element 0 is the start."""
    profile = InputProfile.create(
        datetime_index=[START + timedelta(minutes=m) for m in minutes],
        load_profile=k, ambient_temperature_profile=ambient)
    result = Model(temperature_profile=profile, transformer=transformer(name), initial_condition=initial).run()
    return result.top_oil_temp_profile.tolist(), result.hot_spot_temp_profile.tolist()


def integrate(name, minutes, k, ambient, top_oil, steady_k):
    """The three states of METHODS 10 by numerical integration, step by step; returns both temperatures."""
    p = UNITS[name]
    rise = lambda load: p["top_oil_rise_k"] * ((1 + p["r"] * load**2) / (1 + p["r"])) ** p["x"]
    gradient = lambda load: p["h"] * p["gr_k"] * load ** p["y"]
    first = gradient(steady_k)
    state = [top_oil, p["k21"] * first, (p["k21"] - 1) * first]
    oil, hot = [top_oil], [state[0] + state[1] - state[2]]
    for index in range(1, len(minutes)):
        load, air = k[index], ambient[index]

        def slope(_, s):
            return [(air + rise(load) - s[0]) / (p["k11"] * p["tau_o_min"]),
                    (p["k21"] * gradient(load) - s[1]) / (p["k22"] * p["tau_w_min"]),
                    ((p["k21"] - 1) * gradient(load) - s[2]) / (p["tau_o_min"] / p["k22"])]

        state = solve_ivp(slope, (0, minutes[index] - minutes[index - 1]), state,
                          method="DOP853", rtol=1e-11, atol=1e-11).y[:, -1].tolist()
        oil.append(state[0])
        hot.append(state[0] + state[1] - state[2])
    return oil, hot


def step_case(name, before, after, ambient):
    minutes = [0, 1, 2, 3, 5, 10, 15, 20, 30, 45, 60, 90, 120, 180, 240, 360, 480, 720, 1440]
    return {"unit": name, "case": f"step from steady {before} to {after}", "initial_k": before,
            "initial_ambient_c": ambient, "minutes": minutes, "k": [before] + [after] * (len(minutes) - 1),
            "ambient_c": [ambient] * len(minutes)}


def daily_case(folder, name, peak_k):
    """Two winter working days of profile h0, quarter-hourly; air temperature a smooth daily wave, ours."""
    with open(folder / "profiles.csv", encoding="utf-8", newline="") as file:
        rows = [row for row in csv.DictReader(file) if row["timestamp"][:10] in ("2025-01-15", "2025-01-16")]
    curve = [float(row["h0"]) for row in rows]
    load = [round(peak_k * value / max(curve), 6) for value in curve]
    air = [round(15 + 6 * math.cos(2 * math.pi * (index - 60) / 96), 1) for index in range(len(load))]
    return {"unit": name, "case": "two days of profile h0, 2025-01-15 and 16", "initial_k": load[0],
            "initial_ambient_c": air[0], "minutes": [15 * index for index in range(len(load) + 1)],
            "k": [load[0], *load], "ambient_c": [air[0], *air]}


def annex_h_case():
    minutes = list(range(0, 750, 5))
    load = [ANNEX_H_LOADS[0]] + [next(k for end, k in zip(ANNEX_H_ENDS, ANNEX_H_LOADS) if m <= end) for m in minutes[1:]]
    return {"unit": "annex-h-onaf", "case": "IEC 60076-7:2018 Annex H, load steps", "initial_top_oil_c": 25.6 + 12.7,
            "initial_gradient_k": 0.0, "minutes": minutes, "k": load, "ambient_c": [25.6] * len(minutes)}


def main(folder: Path) -> dict:
    cases = [step_case(name, 0.5, 1.2, 20.0) for name in ("distribution-onan", "power-onan", "power-onaf", "power-od")]
    cases.append(step_case("distribution-onan", 1.0, 0.0, 30.0))
    cases.append(step_case("power-onaf", 1.3, 0.4, -5.0))
    cases += [daily_case(folder, "distribution-onan", 1.1), daily_case(folder, "power-onan", 1.0),
              daily_case(folder, "power-onaf", 1.2)]
    cases.append(annex_h_case())
    worst = 0.0
    for case in cases:
        name, minutes, k, ambient = case["unit"], case["minutes"], case["k"], case["ambient_c"]
        steady = case.get("initial_k", 0.0)
        initial = InitialLoad(initial_load=steady) if "initial_k" in case else InitialTopOilTemp(
            initial_top_oil_temp=case["initial_top_oil_c"])
        case["top_oil_c"], case["hot_spot_c"] = run(name, minutes, k, ambient, initial)
        oil, hot = integrate(name, minutes, k, ambient, case["top_oil_c"][0], steady)
        worst = max(worst, *(abs(a - b) for a, b in zip(oil + hot, case["top_oil_c"] + case["hot_spot_c"])))
    if worst > 1e-7:
        raise ValueError(f"numerical integration and the library differ by {worst} K")
    annex = cases[-1]
    at = [annex["minutes"].index(end) for end in ANNEX_H_ENDS]
    printed = {
        "top_oil_k": [annex["top_oil_c"][i] - value for i, value in zip(at, ANNEX_H_TOP_OIL)],
        "hot_spot_k": [annex["hot_spot_c"][i] - value for i, value in zip(at, ANNEX_H_HOT_SPOT)],
    }
    if max(abs(value) for row in printed.values() for value in row) > 1.5:
        raise ValueError(f"the printed figures of Annex H are missed: {printed}")
    write_json(folder / "thermal.json", {
        "source": "transformer-thermal-model, exact exponential steps, every constant given (units); element i of k and "
                  "ambient_c holds from minutes[i-1] to minutes[i], the temperatures stand at minutes[i], element 0 is "
                  "the start (steady at initial_k and initial_ambient_c where given). Loads and air temperatures are "
                  "ours except Annex H, whose constants and loads are those of the check value "
                  "T5-IEC60076-7-AnnexH-steps.",
        "versions": versions("transformer-thermal-model", "numpy", "pandas", "scipy"),
        "tolerance": 1e-9,
        "difference_to_printed_annex_h_not_compared": printed,
        "units": UNITS,
        "cases": cases,
    })
    return {"cases": len(cases), "integration against library, worst K": worst,
            "library minus printed Annex H, K": {key: [round(v, 3) for v in row] for key, row in printed.items()}}


if __name__ == "__main__":
    print(main(folder_argument()))
