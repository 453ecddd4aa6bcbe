"""Fifteen measured releases of one dam against the releases computed from its casts.

    field.py FOLDER

FOLDER holds `release_pairs.csv` and `forebay_casts.csv`; the origin of the measurements is
written at their heads. One penstock level, all units as one sink. Prints one table a
variant: full digits, to be compared with another program's.
"""

import csv
import sys
from math import pi, sqrt
from pathlib import Path

import numpy as np

from column import Column
from withdrawal import Sink, release

PENSTOCK_M, BED_M = 1057.7, 960.0
CUBIC_FOOT_M3 = 0.3048**3
# dissolved solids from specific conductance, mg/L per uS/cm (recalled; 0.6-0.9 in nature)
SOLIDS_FACTOR = 0.65
# samples this far above the stated pool count as taken at its surface
ABOVE_SURFACE_M = 0.1


def rows(path):
    """Rows of a CSV file with `#` lines at its head."""
    with open(path, encoding="utf-8", newline="") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


def number(cell):
    """The value of a cell, or None where it is empty."""
    return float(cell) if cell.strip() else None


def bridged(z, values):
    """Linear values across samples where this one quantity was not measured."""
    known = [i for i, value in enumerate(values) if value is not None]
    return np.interp(z, [z[i] for i in known], [values[i] for i in known])


def column(cast, surface, factor):
    """The column of one cast; solids from conductance where `factor` is given."""
    taken = [row for row in cast if float(row["sample_elev_m"]) <= surface + ABOVE_SURFACE_M]
    taken.sort(key=lambda row: float(row["sample_elev_m"]))
    z = [min(float(row["sample_elev_m"]), surface) for row in taken]
    names = ["temp_c", "do_mgl"] + (["spcond_us_cm"] if factor else [])
    values = [bridged(z, [number(row[name]) for row in taken]) for name in names]
    if factor:
        values[2] = values[2] * factor
    return Column(BED_M, surface, list(zip(z, *values)))


def table(folder, flow_name, factor):
    """Print every pair and the bias and RMSE of measured minus computed temperature."""
    casts = {}
    for row in rows(folder / "forebay_casts.csv"):
        casts.setdefault(row["trip_id"], []).append(row)
    print("trip,flow_m3s,lower_m,upper_m,peak_m,temperature_c,oxygen_mg_l,", end="")
    print("measured_c,measured_minus_computed_c,measured_oxygen_mg_l,pooled_blocks")
    errors, oxygen_errors = [], []
    for pair in rows(folder / "release_pairs.csv"):
        water = column(casts[pair["trip_id"]], float(pair["lake_elev_m"]), factor)
        flow = float(pair[flow_name]) * CUBIC_FOOT_M3
        drawn = release(water, Sink(PENSTOCK_M, flow, pi))
        measured = float(pair["release_temp_c"])
        oxygen = float(pair["release_do_mgl"])
        errors.append(measured - drawn.temperature)
        oxygen_errors.append(oxygen - drawn.oxygen)
        print(
            pair["trip_id"], flow, drawn.zone.lower.limit, drawn.zone.upper.limit,
            drawn.zone.peak, drawn.temperature, drawn.oxygen, measured, errors[-1], oxygen,
            len(water.blocks), sep=",",
        )
    for name, error in (("temperature", errors), ("oxygen", oxygen_errors)):
        bias = sum(error) / len(error)
        rmse = sqrt(sum(e * e for e in error) / len(error))
        print(f"# {name}: bias {bias} rmse {rmse} of {len(error)} pairs")


def main():
    if len(sys.argv) != 2:
        sys.exit("usage: field.py FOLDER")
    folder = Path(sys.argv[1])
    for flow_name in ("power_cfs", "total_cfs"):
        for factor in (None, SOLIDS_FACTOR):
            print(f"# flow {flow_name}, solids factor {factor}")
            table(folder, flow_name, factor)


if __name__ == "__main__":
    main()
