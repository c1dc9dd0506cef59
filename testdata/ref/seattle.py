#!/usr/bin/env python3
"""Reference levels and counts for testdata/seattle/study.yaml.

Run from the repository's root:  /usr/bin/python3 testdata/ref/seattle.py [--check]
Writes testdata/ref/seattle-levels.csv and testdata/ref/seattle-counts.csv in a few seconds; with --check in about three minutes.

The numbers of the study are set down here a second time, by hand; nothing reads the study file and nothing is shared with
the program under test. Levels: the event-exact integration of engine.py (SciPy, DOP853, restarted at every breakpoint), step
by step; with --check also by the matrix exponential at 30 digits (mpmath), and the largest difference is printed. Counts: pandas.
"""
import os
import sys

import numpy as np
import pandas as pd

sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import engine  # noqa: E402
from engine import DDRAINS, DRAINS, DSEEP, INF, PERC, SEEP, S1, S2  # noqa: E402

HERE = os.path.dirname(os.path.abspath(__file__))

# The ground. Storages are mm of drainable water: 1000 mm/m times porosity times level.
INFILTRATION = 0.42
N1, N2 = 0.05, 0.006
COVER, DEEP = 3.0, 8.0  # m
COVER_FULL, DEEP_FULL = 1.5, 5.2  # m
SEEPAGE, PERCOLATION, CEILING = 0.020, 0.030, 1.6
DEEP_SEEPAGE, LATERAL = 0.05, 0.04
START = (0.8, 3.5)  # m

# Options: share kept out, cover drains, deep drains; a drain is (rate 1/d, invert m, ceiling mm/d).
TRENCH = (0.05, COVER - 2.2, INF)
BORED = (0.8 * 0.03, 2.6, 0.3)
OPTIONS = [
    ("as it stands", 0.0, [], []),
    ("trenches", 0.0, [TRENCH], []),
    ("bored drains", 0.0, [], [BORED]),
    ("lined channels", 0.18, [], []),
    ("channels with bored drains", 0.18, [], [BORED]),
]
# Bands: name, onset and arrest level, m above the base of the deep layer.
BANDS = [("watch", 3.4, 3.4), ("slow movement", 4.0, 3.7), ("fast movement", 4.8, 4.8)]
APART = 6  # d


def models():
    for name, kept, cover, deep in OPTIONS:
        c = [(SEEPAGE, 0.0, INF, SEEP), (PERCOLATION, 0.0, CEILING, PERC)] + [(k, 1000 * N1 * z, m, DRAINS) for k, z, m in cover]
        d = [(DEEP_SEEPAGE, 0.0, INF, DSEEP)] + [(k, 1000 * N2 * z, m, DDRAINS) for k, z, m in deep]
        yield name, kept, engine.Model(engine.Store(1000 * N1 * COVER_FULL, c), engine.Store(1000 * N2 * DEEP_FULL, d), LATERAL)


def replay(model, depths, solver, met=None):
    """End-of-step levels of both layers, m."""
    s1, s2 = 1000 * N1 * START[0], 1000 * N2 * START[1]
    out = np.empty((len(depths), 2))
    for i, depth in enumerate(depths):
        log = []
        y = engine.step(model, solver, depth, 1.0, s1, s2, log)
        s1, s2 = y[S1], y[S2]
        out[i] = s1 / (1000 * N1), s2 / (1000 * N2)
        if met is not None:
            for e in log[0][0]:
                met[e] = met.get(e, 0) + 1
    return out


def events(h, onset, arrest, counted):
    """The events of one series that belong to the counted years: lists of the positions of their steps above the onset."""
    above = np.flatnonzero(h > onset)
    runs = []
    for i in above:
        if runs:
            last = runs[-1][-1]
            # Adjacent steps, a gap of APART days or less, or a level that stayed above the arrest level in between.
            if i - last <= max(1, APART) or (arrest < onset and (h[last + 1:i] > arrest).all()):
                runs[-1].append(i)
                continue
        runs.append([i])
    kept = []
    for run in runs:
        peak = run[int(np.argmax(h[run]))]  # the first of equal ones
        if counted[peak]:
            kept.append(run)
    return kept


def main():
    weather = pd.read_csv(os.path.join(HERE, "..", "seattle", "seattle-weather.csv"), usecols=["date", "precipitation"])
    date = pd.to_datetime(weather["date"])
    assert (date.diff().dropna() == pd.Timedelta(days=1)).all()
    levels = pd.DataFrame({"time": weather["date"]})
    for name, kept, model in models():
        depths = (1 - kept) * INFILTRATION * weather["precipitation"].to_numpy()
        met = {}
        h = replay(model, depths, engine.Dense(), met)
        levels[name + "/cover_m"], levels[name + "/deep_m"] = h[:, 0], h[:, 1]
        print(name, met, "highest", h.max(axis=0), "lowest", h.min(axis=0))
        if "--check" in sys.argv:
            print("  against the matrix exponential: %.1e m" % np.abs(replay(model, depths, engine.Exponential()) - h).max())
    levels.to_csv(os.path.join(HERE, "seattle-levels.csv"), index=False, lineterminator="\n")

    # The first month of the counted year: the one with the lowest mean deep level of the baseline.
    base = levels[OPTIONS[0][0] + "/deep_m"]
    by_month = base.groupby(date.dt.month).mean()
    starts = int(by_month.idxmin())
    print("mean deep level by month:", by_month.round(3).to_dict(), "-> years start in month", starts)
    year = date.dt.year - (date.dt.month < starts)
    full = [y for y in sorted(set(year))
            if pd.Timestamp(y, starts, 1) >= date.iloc[0] and pd.Timestamp(y + 1, starts, 1) <= date.iloc[-1] + pd.Timedelta(days=1)]
    counted = year.isin(full).to_numpy()
    print("complete years:", full, date[counted].min().date(), date[counted].max().date())

    rows, near = [], 1e9
    for name, *_ in OPTIONS:
        h = levels[name + "/deep_m"].to_numpy()
        for band, onset, arrest in BANDS:
            near = min(near, np.abs(h - onset).min(), np.abs(h - arrest).min())
            ev = events(h, onset, arrest, counted)
            above = counted & (h > onset)
            rows.append({
                "option": name, "band": band, "years_counted": len(full), "events": len(ev), "days": int(above.sum()),
                "load_m_days": float((h[above] - onset).sum()), "years_with": int(year[above].nunique()),
                "longest_days": max((len(e) for e in ev), default=0),
                "peak_excess_m": max((float(h[e].max() - onset) for e in ev), default=0.0),
            })
    counts = pd.DataFrame(rows)
    print(counts.to_string())
    print("nearest any level comes to a band: %.1e m" % near)
    assert near > 2e-6
    counts.to_csv(os.path.join(HERE, "seattle-counts.csv"), index=False, lineterminator="\n")


if __name__ == "__main__":
    main()
