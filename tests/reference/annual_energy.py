"""annual_energy.json: energy of losses of one year, from units.csv and profiles.csv as written: at rated voltage, and
with the voltage drop of every quarter hour solved on its own."""

import csv
import math
from pathlib import Path

import numpy

from common import folder_argument, impedance, read_units, versions, write_json

HOURS = 8760.0
V_HV, POWER_FACTOR = 1.02, 0.9


def squared_current(unit, load):
    """(load/v_lv)^2 with v_lv^2 the larger root of the voltage equation of a constant-power load."""
    z = impedance(unit)
    p = V_HV**2 - 2 * load * (z.real * POWER_FACTOR + z.imag * math.sqrt(1 - POWER_FACTOR**2))
    return load**2 / ((p + numpy.sqrt(p**2 - 4 * load**2 * abs(z)**2)) / 2)


def main(folder: Path) -> dict:
    with open(folder / "profiles.csv", encoding="utf-8", newline="") as file:
        header = next(csv.reader(file))[1:]
    table = numpy.loadtxt(folder / "profiles.csv", delimiter=",", skiprows=1, usecols=range(1, 1 + len(header)))
    curves = {name: table[:, index] for index, name in enumerate(header)}
    rows, worst = [], 0.0
    for unit in read_units(folder):
        curve = curves[unit["profile"]]
        peak = curve.max()
        load_factor = curve.mean() / peak
        loss_factor = (curve * curve).mean() / peak**2
        peak_pu = unit["peak_kva"] / unit["rated_kva"]
        no_load = unit["no_load_loss_w"] * HOURS / 1000
        load = unit["load_loss_w"] * peak_pu**2 * loss_factor * HOURS / 1000

        # The same, interval by interval, with exactly rounded sums.
        step = HOURS / len(curve)
        kva = curve * (unit["peak_kva"] / peak)
        no_load_sum = math.fsum([unit["no_load_loss_w"] * step / 1000] * len(curve))
        load_sum = math.fsum(unit["load_loss_w"] * (s / unit["rated_kva"]) ** 2 * step / 1000 for s in kva)
        difference = max(abs(no_load_sum / no_load - 1), abs(load_sum / load - 1))
        if difference > 1e-12:
            raise ValueError(f"{unit['unit']}: interval sum and closed form differ by {difference}")
        worst = max(worst, difference)
        rows.append({
            "unit": unit["unit"], "peak_pu": peak_pu, "load_factor_pu": load_factor,
            "loss_factor_pu": loss_factor, "no_load_energy_kwh": no_load, "load_energy_kwh": load,
            "drop_no_load_energy_kwh": no_load * V_HV**2,
            "drop_load_energy_kwh":
                unit["load_loss_w"] * squared_current(unit, curve * (peak_pu / peak)).mean() * HOURS / 1000,
            "drop_at_rms_load_energy_kwh":
                unit["load_loss_w"] * squared_current(unit, peak_pu * math.sqrt(loss_factor)) * HOURS / 1000,
        })
    write_json(folder / "annual_energy.json", {
        "source": "numpy, from units.csv and profiles.csv; LF = mean/peak, LsF = mean(s^2)/peak^2, E0 = P0*h/1000, "
                  "Ek = Pk*(peak/rated)^2*LsF*h/1000, h = 8760; checked against a sum over the 35040 intervals. drop_*: P0*v_hv^2 and Pk*(load/v_lv)^2 "
                  "solved in each interval, or once at the RMS load.",
        "versions": versions("numpy"),
        "energised_hours": HOURS,
        "operating_voltage_pu": V_HV,
        "power_factor": POWER_FACTOR,
        "units": rows,
    })
    return {"worst relative difference, interval sum against closed form": worst}


if __name__ == "__main__":
    print(main(folder_argument()))
