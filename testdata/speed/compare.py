#!/usr/bin/env python3
"""The work of hourly.yaml with pandas and SciPy, for the speed comparison.

Run:  /usr/bin/python3 testdata/speed/make_hourly.py
      hyperfine -w 1 '/usr/bin/python3 testdata/speed/compare.py /tmp/quietslope-speed/hourly.csv'

Reads the file, replays eight linear options with scipy.signal.lfilter (exact for rain of constant intensity within an hour, so
the levels are those of the differential equations) after a warm-up of three years, finds the month in which years start, and
counts events, days, load and years for three bands. No resampling and no intervals. Nothing loops over hours in Python.
"""
import sys

import numpy as np
import pandas as pd
from scipy.signal import lfilter

DT = 1 / 24
N1, N2, COVER, DEEP = 0.08, 0.014, 4.0, 9.0
SEEPAGE, PERCOLATION, DEEP_SEEPAGE, K = 0.011, 0.0045, 0.007, 0.044
BANDS = [("watch", 2.8), ("movement onset", 3.2), ("fast movement", 3.6)]
APART = 10.0  # d
WARM_UP = 3  # years


def trench(spacing):
    """Reaction factor of trenches that reach the contact (De Zeeuw & Hellinga 1958), mean flow depth a quarter of their depth."""
    return np.pi ** 2 * K * COVER / 4 / (N1 * spacing ** 2)


# Name, share kept out, extra rate of the cover, extra rate of the deep store.
OPTIONS = [
    ("as it stands", 0, 0, 0), ("trenches 12 m apart", 0, trench(12), 0), ("trenches 24 m apart", 0, trench(24), 0),
    ("trenches 48 m apart", 0, trench(48), 0), ("bored drains", 0, 0, 0.001), ("lined channels", 0.1, 0, 0),
    ("trenches 48 m apart with channels", 0.1, trench(48), 0), ("bored drains with channels", 0.1, 0, 0.001),
]


def replay(r, mean, lam, mu):
    """End-of-step storages of both stores from the steady state under the mean input; r and mean in mm/d."""
    x, y = -lam * DT, -mu * DT
    f1, f2 = np.expm1(x) / x, np.expm1(y) / y
    fxy = (np.exp(x) - np.exp(y)) / (x - y)
    f0xy = (f2 - fxy) / -x
    s10 = mean / lam
    s20 = PERCOLATION * s10 / mu
    s1, _ = lfilter([DT * f1], [1, -np.exp(x)], r, zi=[np.exp(x) * s10])
    before = np.concatenate(([s10], s1[:-1]))
    into = PERCOLATION * (before * DT * fxy + r * DT ** 2 * f0xy)
    s2, _ = lfilter([1.0], [1, -np.exp(y)], into, zi=[np.exp(y) * s20])
    return s1, s2


def main():
    w = pd.read_csv(sys.argv[1], parse_dates=["time"])
    time = w["time"]
    assert (np.diff(time.to_numpy()) == np.timedelta64(1, "h")).all()
    warm = int((time < pd.Timestamp(time.iloc[0].year + WARM_UP, 1, 1)).sum())
    rain = w["rain_mm"].to_numpy()
    year0, month = time.dt.year.to_numpy(), time.dt.month.to_numpy()

    def levels(kept, cover, deep, counted):
        r = (1 - kept) * 0.36 * rain / DT
        s1, s2 = replay(np.concatenate((r[:warm], r)), r[counted].mean(), SEEPAGE + PERCOLATION + cover, DEEP_SEEPAGE + deep)
        if s1.max() > 1000 * N1 * COVER or s2.max() > 1000 * N2 * DEEP:
            sys.exit("a store is full: a filter cannot do this")
        return s2[warm:] / (1000 * N2)

    base = levels(0, 0, 0, slice(None))
    starts = int(pd.Series(base).groupby(month).mean().idxmin())
    year = year0 - (month < starts)
    counted = (year >= year0[0]) & (year < year0[-1])
    years = int(year0[-1] - year0[0])
    print("years start in month %d, %d counted" % (starts, years))
    for name, kept, cover, deep in OPTIONS:
        h = levels(kept, cover, deep, counted)
        for band, b in BANDS:
            at = np.flatnonzero(h > b)
            events = longest = 0
            if len(at):
                first = np.flatnonzero(np.concatenate(([True], np.diff(at) * DT > APART)))
                peaks = np.maximum.reduceat(h[at], first)
                group = np.repeat(np.arange(len(first)), np.diff(np.append(first, len(at))))
                tops = at[h[at] == peaks[group]]
                _, one = np.unique(group[h[at] == peaks[group]], return_index=True)
                mine = counted[tops[one]]
                events = int(mine.sum())
                longest = (np.diff(np.append(first, len(at)))[mine].max() if events else 0) * DT
            above = at[counted[at]]
            print("%-34s %-15s events %3d, days per year %8.4f, load %9.5f, years with %2d, longest %7.2f d"
                  % (name, band, events, len(above) * DT / years, (h[above] - b).sum() * DT / years, len(np.unique(year[above])), longest))


if __name__ == "__main__":
    main()
