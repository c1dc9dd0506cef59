#!/usr/bin/env python3
"""Invented hourly rain for forty years (350,640 rows), for the speed comparison only.

Run:  /usr/bin/python3 testdata/speed/make_hourly.py [FOLDER]

Writes hourly.csv into FOLDER (/tmp/quietslope-speed unless given) and puts a copy of hourly.yaml beside it. The seed is fixed,
the rows are the same each time. Rain comes in showers of a few hours whose frequency follows the season; about 970 mm a year.
"""
import os
import shutil
import sys

import numpy as np
import pandas as pd

folder = sys.argv[1] if len(sys.argv) > 1 else "/tmp/quietslope-speed"
os.makedirs(folder, exist_ok=True)
rng = np.random.default_rng(40)
time = pd.date_range("1984-01-01 00:00", "2023-12-31 23:00", freq="h")
n = len(time)
assert n == 350640
season = np.cos(2 * np.pi * (time.dayofyear.to_numpy() - 335) / 365.25)
year = np.exp(0.12 * rng.standard_normal(41))[(time.year + (time.month >= 9) - 1984).to_numpy()]
begins = rng.random(n) < 0.021 * (1 + 0.25 * season)
rain = np.zeros(n)
for i in np.flatnonzero(begins):
    hours = 1 + rng.geometric(0.2)
    depth = rng.exponential(5.24) * (1 + 0.15 * season[i]) * year[i]
    share = rng.random(hours)
    rain[i:i + hours] += (depth * share / share.sum())[:n - i]
rows = pd.DataFrame({"time": time.strftime("%Y-%m-%d %H:%M"), "rain_mm": np.round(rain, 2)})
rows.to_csv(os.path.join(folder, "hourly.csv"), index=False, lineterminator="\n")
shutil.copy(os.path.join(os.path.dirname(os.path.abspath(__file__)), "hourly.yaml"), folder)
print("%d rows, %.0f mm a year, in %s" % (n, rows.rain_mm.sum() / 40, folder))
