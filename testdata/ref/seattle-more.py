#!/usr/bin/env python3
"""Reference levels and counts for the studies testdata/seattle/more*.yaml: works in three conditions, rates of a stepping
scheme, months, gaps and factors of safety.

Run from the repository's root:  /usr/bin/python3 testdata/ref/seattle-more.py [--check]
Takes about two minutes, with --check half a minute more. Writes

  testdata/seattle/seattle-pet.csv      rain of seattle-weather.csv with an evapotranspiration worked out here
  testdata/seattle/seattle-months.csv   the same summed by calendar month
  testdata/seattle/seattle-gaps.csv     the days with cells blanked and rows left out
  testdata/seattle/seattle-months-gaps.csv   the months likewise
  testdata/ref/seattle-more*.csv        levels, counts, sums and bands

The numbers of the studies are set down here a second time, by hand; nothing reads a study file and nothing is shared with
the program under test. Levels: the event-exact integration of engine.py (SciPy, DOP853, restarted at every breakpoint), step
by step; with --check part of every series again by the matrix exponential at 30 digits (mpmath). Counts: pandas and NumPy.
"""
import calendar
import copy
import datetime
import os
import platform
import sys

import numpy as np
import pandas as pd
import scipy
from scipy.optimize import brentq

HERE = os.path.dirname(os.path.abspath(__file__))
SEATTLE = os.path.join(HERE, "..", "seattle")
sys.path.insert(0, HERE)
import engine  # noqa: E402
from engine import DDRAINS, DRAINS, DSEEP, INF, PERC, SEEP, S1, S2  # noqa: E402

EVERY = 8  # of the daily series, each eighth step is written; all steps go into the counts and sums

# ---- Weather ---------------------------------------------------------------------------------------------------------


def hargreaves(weather):
    """Reference evapotranspiration, mm in the day: ETo = 0.0023 (T + 17.8) sqrt(Tmax - Tmin) Ra, T the mean of both, Ra as mm/d.

    Hargreaves & Samani 1985; Allen et al. 1998, FAO Irrigation and Drainage Paper 56, eq. 52, with Ra of eq. 21 and 23-25 and 0.408 mm
    for 1 MJ/m2. The formulas and the latitude of 47.45 degrees north are from memory. Two figures of FAO-56, from memory too,
    are asserted below: example 8 (20 S, 3 September) Ra 32.2 MJ/m2/d; example 20 (45 deg 43 min N, July) 5.0 mm/d.
    """
    day = pd.to_datetime(weather["date"]).dt.dayofyear.to_numpy()
    return eto(weather["temp_min"].to_numpy(), weather["temp_max"].to_numpy(), radiation(47.45, day))


def radiation(latitude, day):
    """Extraterrestrial radiation, MJ/m2/d."""
    phi = np.radians(latitude)
    dr = 1 + 0.033 * np.cos(2 * np.pi / 365 * day)
    delta = 0.409 * np.sin(2 * np.pi / 365 * day - 1.39)
    ws = np.arccos(-np.tan(phi) * np.tan(delta))
    return 24 * 60 / np.pi * 0.0820 * dr * (ws * np.sin(phi) * np.sin(delta) + np.cos(phi) * np.cos(delta) * np.sin(ws))


def eto(low, high, ra):
    return np.maximum(0, 0.0023 * ((low + high) / 2 + 17.8) * np.sqrt(np.maximum(0, high - low)) * 0.408 * ra)


assert abs(radiation(-20, 246) - 32.2) < 0.05
assert abs(eto(14.8, 26.6, radiation(45 + 43 / 60, 196)) - 5.0) < 0.05


class Record:
    """Steps that follow each other: time as written in the file, first moment, days, rain and PET in mm per step."""

    def __init__(self, name, first, days, rain, pet):
        self.name, self.first, self.days = list(name), pd.DatetimeIndex(first), np.asarray(days, float)
        self.rain, self.pet = np.asarray(rain, float), np.asarray(pet, float)


def daily(frame):
    return Record(frame["date"], pd.to_datetime(frame["date"]), np.ones(len(frame)), frame["precipitation"], frame["pet"])


def make_weather():
    raw = pd.read_csv(os.path.join(SEATTLE, "seattle-weather.csv"))
    date = pd.to_datetime(raw["date"])
    assert (date.diff().dropna() == pd.Timedelta(days=1)).all()
    whole = pd.DataFrame({"date": raw["date"], "precipitation": raw["precipitation"], "pet": hargreaves(raw).round(2)})
    text = pd.DataFrame({"date": whole["date"], "precipitation": whole["precipitation"].map("{:.1f}".format),
                         "pet": whole["pet"].map("{:.2f}".format)})
    save(text, os.path.join(SEATTLE, "seattle-pet.csv"))

    sums = whole[["precipitation", "pet"]].groupby(date.dt.strftime("%Y-%m")).sum()
    months = pd.DataFrame({"month": sums.index, "precipitation": sums["precipitation"].map("{:.1f}".format).to_numpy(),
                           "pet": sums["pet"].map("{:.2f}".format).to_numpy()})
    save(months, os.path.join(SEATTLE, "seattle-months.csv"))
    first = pd.to_datetime(months["month"] + "-01")
    days = [calendar.monthrange(d.year, d.month)[1] for d in first]
    monthly = Record(months["month"], first, days, months["precipitation"].astype(float), months["pet"].astype(float))

    # Gaps: (first day, last day, what is lost); "rain" and "pet" are blank cells, "both" two cells NA, "rows" rows left out.
    gaps = [("2012-01-01", "2012-01-01", "rain"), ("2012-02-10", "2012-02-14", "rain"), ("2012-03-30", "2012-04-03", "rows"),
            ("2012-07-01", "2012-07-31", "pet"), ("2012-11-05", "2012-11-05", "rows"), ("2012-11-07", "2012-11-07", "rows"),
            ("2012-12-28", "2013-01-06", "both"), ("2013-02-28", "2013-03-01", "rain"), ("2013-11-10", "2013-11-30", "rows"),
            ("2013-12-01", "2013-12-02", "pet"), ("2014-01-01", "2014-01-31", "rows"), ("2014-05-03", "2014-05-04", "both"),
            ("2014-10-20", "2014-10-24", "rain"), ("2014-10-23", "2014-10-27", "pet"), ("2015-01-15", "2015-01-15", "rows"),
            ("2015-12-31", "2015-12-31", "both")]
    gappy, holes = text.set_index("date"), whole.set_index("date").copy()
    gone = []
    for a, b, what in gaps:
        span = [d.strftime("%Y-%m-%d") for d in pd.date_range(a, b)]
        for column, hit in (("precipitation", what != "pet"), ("pet", what != "rain")):
            if hit:
                gappy.loc[span, column] = "NA" if what == "both" else ""
                holes.loc[span, column] = np.nan
        if what == "rows":
            gone += span
    save(gappy.drop(index=gone).reset_index(), os.path.join(SEATTLE, "seattle-gaps.csv"))
    holes = holes.reset_index()
    zero = daily(holes.fillna(0))
    month = date.dt.month
    mean = holes.copy()
    for column in ("precipitation", "pet"):
        # All steps are a day long, so the mean intensity times the step is the mean depth.
        mean[column] = holes[column].fillna(holes[column].groupby(month).transform("mean"))
    filled = {"days": int(holes[["precipitation", "pet"]].isna().any(axis=1).sum())}

    # Months: those of one name differ in length only in February.
    holes = pd.DataFrame({"precipitation": monthly.rain, "pet": monthly.pet}, index=monthly.name)
    gappy = months.set_index("month")
    for month, what in (("2012-02", "rain"), ("2012-11", "rain"), ("2012-12", "rows"), ("2013-08", "pet"), ("2014-02", "both"), ("2014-03", "rows")):
        for column, hit in (("precipitation", what != "pet"), ("pet", what != "rain")):
            if hit:
                gappy.loc[month, column] = "NA" if what == "both" else ""
                holes.loc[month, column] = np.nan
        if what == "rows":
            gappy = gappy.drop(index=month)
    save(gappy.reset_index(), os.path.join(SEATTLE, "seattle-months-gaps.csv"))
    filled["months"] = int(holes.isna().any(axis=1).sum())
    gapped = []
    for column in ("precipitation", "pet"):
        x = holes[column].to_numpy()
        y = x.copy()
        for i in np.flatnonzero(np.isnan(x)):
            valid = (first.dt.month == first[i].month).to_numpy() & ~np.isnan(x)
            y[i] = x[valid].sum() / monthly.days[valid].sum() * monthly.days[i]
        gapped.append(y)
    gapped = Record(monthly.name, first, days, *gapped)
    print("steps with something filled:", filled)
    return {"daily": daily(whole), "months": monthly, "zero": zero, "month mean": daily(mean), "months filled": gapped}, filled


# ---- The ground and what is built --------------------------------------------------------------------------------------

# Lengths and levels m, rates 1/d, fluxes mm/d, depths mm, shares and porosities 0..1, infiltration limit mm/h.
GROUND = dict(infiltration=0.75, limit=0.9, soil=dict(available=90.0, readily=0.45, crop=0.95),
              cover=3.0, n1=0.05, seepage=0.020, percolation=0.030, ceiling=1.6, cover_full=1.5, conductivity=0.06,
              deep=8.0, n2=0.008, deep_seepage=0.05, lateral=0.10, deep_full=4.15)


def ground(**change):
    g = copy.deepcopy(GROUND)
    g.update(change)
    return g


class Works:
    """The measures of one option. A trench is (spacing, depth, conductivity or None, equivalent depth, efficiency, ceiling), a
    bored drain (rate, level, efficiency, ceiling)."""

    def __init__(self, trench=None, bored=None, kept_out=0.0, pet_factor=1.0, interception=0.0, cut_off=0.0, change=None):
        self.trench, self.bored, self.kept_out = trench, bored, kept_out
        self.pet_factor, self.interception, self.cut_off, self.change = pet_factor, interception, cut_off, change or {}


class Built:
    """An option in a condition: the ground it leaves, the share of water it keeps out, and the drains as (rate, invert storage
    in mm, ceiling)."""

    def __init__(self, base, works, drains=1.0, surface=1.0, vegetation=1.0, scheme=None):
        g = copy.deepcopy(base)
        for key, value in works.change.items():
            if key in ("available", "readily", "crop"):
                g["soil"][key] = value
            else:
                g[key] = value
        self.given = copy.deepcopy(g)
        if scheme:
            for rates, n in ((("seepage", "percolation"), "n1"), (("deep_seepage",), "n2")):
                total = sum(g[k] for k in rates)
                exact = -np.log(BETA[scheme](total))  # steps of a day
                for k in rates:
                    g[k] *= exact / total
                g[n] *= total / exact
        self.g = g
        self.kept = works.kept_out * surface
        self.intercepted = works.interception * vegetation
        self.pet_factor = 1 + (works.pet_factor - 1) * vegetation
        self.lateral = g["lateral"] * (1 - works.cut_off * drains)
        self.cover_drains, self.deep_drains = [], []
        if works.trench:
            spacing, depth, conductivity, d, efficiency, ceiling = works.trench
            # Reaction factor (De Zeeuw & Hellinga 1958), the water table above the drain taken as half of the depth.
            flow = d + depth / 2 / 2
            k = efficiency * np.pi ** 2 * (conductivity or g["conductivity"]) * flow / (g["n1"] * spacing ** 2)
            self.cover_drains.append((k * drains, 1000 * g["n1"] * (g["cover"] - depth), ceiling))
        if works.bored:
            rate, level, efficiency, ceiling = works.bored
            self.deep_drains.append((rate * efficiency * drains, 1000 * g["n2"] * level, ceiling))

    def key(self):
        return repr((sorted(self.g.items(), key=str), self.kept, self.intercepted, self.pet_factor, self.lateral, self.cover_drains, self.deep_drains))

    def model(self):
        g = self.g
        c = [(g["seepage"], 0.0, INF, SEEP), (g["percolation"], 0.0, g["ceiling"], PERC)] + [d + (DRAINS,) for d in self.cover_drains]
        d = [(g["deep_seepage"], 0.0, INF, DSEEP)] + [d + (DDRAINS,) for d in self.deep_drains]
        return engine.Model(engine.Store(1000 * g["n1"] * g["cover_full"], c), engine.Store(1000 * g["n2"] * g["deep_full"], d), self.lateral)

    def recharge(self, record, warm):
        """Net input of every step, mm: of the steps of the warm-up, then of the record."""
        g, soil = self.g, self.g["soil"]
        out, deficit = [], 0.0
        for i in list(range(warm)) + list(range(len(record.rain))):
            days = record.days[i]
            enters = (1 - self.kept) * min(g["infiltration"] * record.rain[i] * (1 - self.intercepted), g["limit"] * 24 * days)
            if soil is None:
                out.append(enters - self.pet_factor * record.pet[i])
                continue
            demand = soil["crop"] * self.pet_factor * record.pet[i]
            a, p = soil["available"], soil["readily"]
            parts = int(np.ceil(days))
            while demand / parts > (1 - p) * a:
                parts *= 2
                self.halved += 1
            surplus = 0.0
            for _ in range(parts):
                # Water stress coefficient: Allen et al. 1998, FAO Irrigation and Drainage Paper 56, eq. 84.
                ks = 1.0 if deficit <= p * a else (a - deficit) / ((1 - p) * a)
                deficit += ks * demand / parts - enters / parts
                if deficit < 0:
                    surplus -= deficit
                    deficit = 0.0
            out.append(surplus)
        return np.array(out)

    halved = 0


def steady(model, mean):
    """Storages at which nothing changes under a constant input, mm."""
    storages = []
    inflow = mean
    for store in (model.cover, model.deep):
        top = store.capacity if store.capacity < INF else 1e6
        if inflow <= 0:
            s = 0.0
        elif store.total(top) <= inflow:
            s = top
        else:
            s = brentq(lambda x: store.total(x) - inflow, 0, top, xtol=1e-12, rtol=1e-14)
        storages.append(s)
        inflow = model.inflow(s)
    return storages


def replay(built, net, days, s, solver=engine.Dense()):
    """End-of-step levels of both layers, m."""
    model, (s1, s2) = built.model(), s
    out = np.empty((len(net), 2))
    for i, depth in enumerate(net):
        y = engine.step(model, solver, depth / days[i], days[i], s1, s2)
        s1, s2 = y[S1], y[S2]
        out[i] = s1 / (1000 * built.g["n1"]), s2 / (1000 * built.g["n2"])
    return out


# ---- Rates of a stepping scheme -----------------------------------------------------------------------------------------

# Outflow at the ends of steps of one day: Q' = beta Q + (1 - beta) I.
BETA = {
    "centred": lambda a: (2 - a) / (2 + a),
    "explicit": lambda a: 1 - a,
    "implicit": lambda a: 1 / (1 + a),
}
# The weight of the end of the step in each scheme: S' - S = I - a ((1 - w) S + w S').
WEIGHT = {"centred": 0.5, "explicit": 0.0, "implicit": 1.0}


def by_scheme(scheme, g, net, lateral, levels):
    """Both stores by the stepping formula itself, the percolation weighted like every other flow of the step: levels, and the
    outflow of the cover in mm/d, at the ends of the steps."""
    w = WEIGHT[scheme]
    a, mu = g["seepage"] + g["percolation"], g["deep_seepage"]
    s1, s2 = 1000 * g["n1"] * levels[0], 1000 * g["n2"] * levels[1]
    out = np.empty((len(net), 3))
    for i, depth in enumerate(net):
        t1 = (s1 * (1 - (1 - w) * a) + depth) / (1 + w * a)
        inflow = g["percolation"] * ((1 - w) * s1 + w * t1) + lateral
        s2 = (s2 * (1 - (1 - w) * mu) + inflow) / (1 + w * mu)
        s1 = t1
        out[i] = s1 / (1000 * g["n1"]), s2 / (1000 * g["n2"]), a * s1
    return out


# ---- Bands ----------------------------------------------------------------------------------------------------------------


def safe_level(fs, g, angle, z, gamma, phi, c, flow):
    """Level above the base of the deep layer at which an infinite slope has the factor of safety fs, m: limit equilibrium in
    effective stress, kPa and kN/m3, water 9.81 kN/m3, the root found by bisection on FS(h)."""
    b, t = np.radians(angle), np.tan(np.radians(phi))

    def f(h):
        u = 9.81 * h * (np.cos(b) ** 2 if flow == "parallel" else 1)
        return (c + (gamma * z * np.cos(b) ** 2 - u) * t) / (gamma * z * np.sin(b) * np.cos(b)) - fs

    return g["cover"] + g["deep"] - z + brentq(f, 0, z, xtol=1e-14, rtol=1e-15)


# ---- Counting -------------------------------------------------------------------------------------------------------------


def events(h, onset, arrest, first, apart, counted):
    """The events of one series that belong to the counted years: lists of the positions of their steps above the onset."""
    runs = []
    for i in np.flatnonzero(h > onset):
        if runs:
            last = runs[-1][-1]
            gap = (first[i] - first[last]).days
            if i - last == 1 or gap <= apart or (arrest < onset and (h[last + 1:i] > arrest).all()):
                runs[-1].append(i)
                continue
        runs.append([i])
    return [r for r in runs if counted[r[int(np.argmax(h[r]))]]]  # argmax: the first of equal ones


def warm_up(study):
    """Years of the warm-up, at least three and five times the longest reservoir coefficient of any store, and its steps."""
    slowest = INF
    for _, left in study.cases:
        for _, works in study.options:
            m = Built(study.base, works, scheme=study.scheme, **left).model()
            slowest = min([slowest] + [sum(k for k, z, _, _ in store.outlets if z == 0) for store in (m.cover, m.deep)])
    n = int(np.ceil(max(3, 5 / slowest / 365.25)))
    first = study.record.first
    return n, int((first < first[0] + pd.DateOffset(years=n)).sum())


def years(record, starts):
    """The complete years from the month given: the year of every step, and whether it is counted."""
    first, end = record.first, record.first[-1] + pd.Timedelta(days=record.days[-1])
    year = first.year - (first.month < starts)
    full = [y for y in sorted(set(year)) if pd.Timestamp(y, starts, 1) >= first[0] and pd.Timestamp(y + 1, starts, 1) <= end]
    return np.asarray(year), np.isin(year, full), len(full)


class Study:
    def __init__(self, name, record, base, options, bands, apart, cases=None, scheme=None, start=None, starts=None, filled=0):
        self.name, self.record, self.base, self.options, self.bands, self.apart = name, record, base, options, bands, apart
        self.cases = cases or [("as built", {})]
        self.scheme, self.start, self.starts, self.filled = scheme, start, starts, filled


def run(study, tables, check):
    """Replays a study and adds to the tables."""
    rec = study.record
    warm_years, warm = warm_up(study) if study.start in ("steady", "any") else (0, 0)
    days = np.concatenate([rec.days[:warm], rec.days])
    series, done = {}, {}
    for case, left in study.cases:
        for name, works in study.options:
            built = Built(study.base, works, scheme=study.scheme, **left)
            if built.key() not in done:
                net = built.recharge(rec, warm)
                if study.start == "steady":
                    # Over the whole years from the first step of the record, here all of it: the counted years would be
                    # circular where their first month is read off the levels.
                    assert rec.first[0] + pd.DateOffset(years=4) == rec.first[-1] + pd.Timedelta(days=rec.days[-1])
                    s = steady(built.model(), net[warm:].sum() / rec.days.sum())
                    if name == "slow cover" and case == study.cases[0][0]:
                        counted = years(rec, study.starts)[1]
                        other = steady(built.model(), net[warm:][counted].sum() / rec.days[counted].sum())
                        print("steady start of the slow cover, mm: %s over whole years, %s over the counted ones" % (s, other))
                elif study.start == "any":  # forgotten by the end of the warm-up
                    s = [0.0, 0.0]
                else:
                    s = [1000 * built.g["n1"] * study.start[0], 1000 * built.g["n2"] * study.start[1]]
                if check:
                    part = min(60, len(net))
                    d = np.abs(replay(built, net[:part], days, s, engine.Exponential()) - replay(built, net[:part], days, s)).max()
                    check.append(d)
                done[built.key()] = replay(built, net, days, s)[warm:], net[warm:]
                if study.start == "any":
                    other = replay(built, net, days, [20.0, 20.0])[warm:]
                    assert np.abs(other - done[built.key()][0]).max() < 1e-9
                if built.halved:
                    print("  %s, %s: %d halvings of a part" % (study.name, name, built.halved))
            series[case, name] = done[built.key()]
    base = series[study.cases[0][0], study.options[0][0]][0][:, 1]
    starts = study.starts
    if starts is None:
        means = pd.Series(base).groupby(rec.first.month).mean()
        starts = int(means.idxmin())
        low = means.sort_values()
        print("%s: lowest month %d, %.4f m; next %.4f m" % (study.name, starts, low.iloc[0], low.iloc[1]))
    year, counted, full = years(rec, starts)
    levels = {"time": rec.name}
    for (case, name), (h, net) in series.items():
        levels["%s/%s/cover_m" % (case, name)], levels["%s/%s/deep_m" % (case, name)] = h[:, 0], h[:, 1]
        near = min(abs(h[:, 1] - x).min() for band in study.bands for x in band[1:])
        assert near > 2e-6, (study.name, case, name, near)
        tables["sums"].append({"study": study.name, "condition": case, "option": name, "steps": len(h), "warm_up_years": warm_years, "year_starts": starts, "steps_filled": study.filled,
                               "recharge_mm": net.sum(), "cover_sum_m": h[:, 0].sum(), "deep_sum_m": h[:, 1].sum(), "nearest_band_m": near})
        for j, (band, onset, arrest) in enumerate(study.bands):
            deep = h[:, 1]
            ev = events(deep, onset, arrest, rec.first, study.apart, counted)
            above = counted & (deep > onset)
            inside = above & ~(deep > study.bands[j + 1][1]) if j + 1 < len(study.bands) else above
            tables["counts"].append({
                "study": study.name, "condition": case, "option": name, "band": band, "years_counted": full, "events": len(ev),
                "days": int(rec.days[above].sum()), "days_in_band": int(rec.days[inside].sum()),
                "load_m_days": ((deep - onset) * rec.days)[above].sum(), "years_with": len(set(year[above])),
                "longest_days": int(max((rec.days[e].sum() for e in ev), default=0)),
                "peak_excess_m": max((deep[e].max() - onset for e in ev), default=0.0)})
    return pd.DataFrame(levels), {k: v[0] for k, v in series.items()}


# ---- Files ----------------------------------------------------------------------------------------------------------------


def save(frame, path, about=(), digits=None):
    with open(path, "w", newline="\n") as f:
        if about:
            for line in list(about) + [
                    "Source: testdata/ref/seattle-more.py on the data of testdata/seattle (ORIGIN.md there); nothing is shared with the program under test.",
                    "Made on %s with Python %s, NumPy %s, SciPy %s, pandas %s, mpmath %s." % (
                        datetime.date.today().isoformat(), platform.python_version(), np.__version__, scipy.__version__, pd.__version__, engine.mp.__version__),
                    "Command: /usr/bin/python3 testdata/ref/seattle-more.py",
                    "Digits: %s." % ("%d after the point" % digits if digits else "the shortest text that reads back to the same double")]:
                f.write("# %s\n" % line)
        frame.to_csv(f, index=False, lineterminator="\n", float_format="%%.%df" % digits if digits else None)


LEVELS = "Levels, m at the ends of steps, above the contact (cover_m) and above the base of the deep layer (deep_m); columns condition/option/layer."


def main():
    weather, filled = make_weather()
    check = [0.0] if "--check" in sys.argv else []
    tables = {"sums": [], "counts": []}

    # more.yaml
    trench = (14.0, 2.2, None, 0.70, 0.8, INF)
    contact = (20.0, 3.0, 0.09, 0.0, 1.0, 2.0)
    bored = (0.03, 2.6, 0.8, 0.3)
    options = [
        ("as it stands", Works()),
        ("trenches", Works(trench=trench)),
        ("trenches to the contact", Works(trench=contact)),
        ("bored drains", Works(bored=bored)),
        ("lined channels", Works(kept_out=0.18)),
        ("planting", Works(pet_factor=1.3, interception=0.06)),
        ("cut-off drain", Works(cut_off=0.70)),
        ("all of them", Works(trench=(18.0,) + trench[1:], bored=(0.02,) + bored[1:], kept_out=0.18, pet_factor=1.3, interception=0.06, cut_off=0.70)),
        ("planting on thin soil", Works(pet_factor=1.3, interception=0.06, change=dict(available=7.0, readily=0.40))),
        ("slow cover", Works(change=dict(n1=0.14, seepage=0.0022, percolation=0.0018, cover_full=2.9, deep_seepage=0.02))),
    ]
    slope = dict(angle=11, z=10.4, gamma=19.5, phi=12.25, c=1.0, flow="parallel")
    bands = [("watch", 2.6, 2.6)] + [
        (name, safe_level(fs, GROUND, **slope), safe_level(until, GROUND, **slope))
        for name, fs, until in (("slow movement", 1.00, 1.015), ("fast movement", 0.97, 0.97))]
    cases = [("as built", {}), ("neglected", dict(drains=0.45, surface=0.60, vegetation=0.50)), ("failing", dict(drains=0.10, surface=0.25, vegetation=0.0))]
    studies = [Study("more", weather["daily"], GROUND, options, bands, 6, cases, start="steady", starts=9)]
    shown = [("more",) + b for b in bands]

    # more-scheme.yaml
    brisk = ground(seepage=0.22, percolation=0.14, ceiling=INF, cover_full=INF, deep_seepage=0.30, deep_full=INF, n1=0.02, n2=0.004)
    options = [
        ("as it stands", Works()),
        ("trenches", Works(trench=trench)),
        ("bored drains", Works(bored=(0.12, 0.6, 1.0, INF))),
        ("other rates", Works(change=dict(seepage=0.30, n1=0.018, cover_full=0.9, deep_seepage=0.26, deep_full=1.7))),
    ]
    bands = [("watch", 0.8, 0.8), ("movement", 1.3, 1.1)]
    studies.append(Study("more-scheme", weather["daily"], brisk, options, bands, 6, scheme="centred", start=(0.3, 1.2), starts=9))
    shown += [("more-scheme",) + b for b in bands]

    # more-months.yaml, with the soil and without, and with gaps
    options = [
        ("as it stands", Works()),
        ("trenches to the contact", Works(trench=contact)),
        ("bored drains", Works(bored=(0.03, 1.2, 0.8, 0.3))),
        ("planting", Works(pet_factor=1.3, interception=0.06)),
    ]
    slope = dict(angle=10, z=11.0, gamma=19.0, phi=12.5, c=0.0, flow="standing")
    calm = ground(limit=0.2, lateral=0.15, soil=dict(available=40.0, readily=0.45, crop=0.95))
    bands = [("watch", 1.5, 1.5)] + [
        (name, safe_level(fs, GROUND, **slope), safe_level(until, GROUND, **slope))
        for name, fs, until in (("slow movement", 1.10, 1.12), ("fast movement", 1.02, 1.02))]
    shown += [("more-months",) + b for b in bands]
    wet = dict(calm, soil=None, limit=INF)
    studies.append(Study("more-months", weather["months"], calm, options, bands, 70, start="any"))
    studies.append(Study("more-months-bare", weather["months"], wet, options, bands, 70, start="any"))
    studies.append(Study("more-months, month mean", weather["months filled"], calm, options, bands, 70, start="any", filled=filled["months"]))

    # more-gaps.yaml, filled in both ways
    options = [("as it stands", Works()), ("planting", Works(pet_factor=1.3, interception=0.06))]
    bands = [("watch", 2.6, 2.6), ("movement", 4.0, 3.8)]
    for fill in ("zero", "month mean"):
        studies.append(Study("more-gaps, " + fill, weather[fill], GROUND, options, bands, 6, start="any", filled=filled["days"]))
    shown += [("more-gaps",) + b for b in bands]

    written, found = {}, {}
    for study in studies:
        written[study.name], found[study.name] = run(study, tables, check)
        h = pd.DataFrame(written[study.name]).drop(columns="time")
        print(h.describe().T[["min", "mean", "max"]].round(3).to_string())
    print(pd.DataFrame(shown))
    print(pd.DataFrame(tables["counts"]).to_string())
    print(pd.DataFrame(tables["sums"]).to_string())

    # The schemes themselves, on the ground without measures.
    rows, trapezoid = [], None
    for scheme in ("centred", "explicit", "implicit"):
        plain = Built(brisk, Works(), scheme=scheme)
        net = plain.recharge(weather["daily"], 0)
        g, start = plain.g, (0.3, 1.2)
        formula = by_scheme(scheme, plain.given, net, plain.lateral, start)
        exact = replay(plain, net, weather["daily"].days, [1000 * g["n1"] * start[0], 1000 * g["n2"] * start[1]])
        if scheme == "centred":
            assert (exact == found["more-scheme"]["as built", "as it stands"]).all()
            trapezoid = formula
        cover, deep = np.abs(formula[:, 0] - exact[:, 0]), np.abs(formula[:, 1] - exact[:, 1])
        outflow = np.abs(formula[:, 2] - (g["seepage"] + g["percolation"]) * 1000 * g["n1"] * exact[:, 0])
        assert cover.max() < 1e-10 and outflow.max() < 1e-10
        at = int(deep.argmax())
        rows.append({"scheme": scheme, "cover_exact_per_day": g["seepage"] + g["percolation"], "cover_porosity": g["n1"],
                     "deep_exact_per_day": g["deep_seepage"], "deep_porosity": g["n2"], "cover_difference_m": cover.max(),
                     "cover_outflow_difference_mm_per_day": outflow.max(), "deep_difference_m": deep.max(),
                     "deep_at": weather["daily"].name[at], "next_deep_difference_m": np.sort(deep)[-2]})
    print(pd.DataFrame(rows).to_string())

    note = "Each %dth step of the record from the first; all steps are in seattle-more-sums.csv and -counts.csv." % EVERY
    for study in ("more", "more-scheme"):
        frame = written[study]
        digits = 9
        about = ["testdata/seattle/%s.yaml." % study, LEVELS, note]
        if study == "more-scheme":
            frame["by the scheme/as it stands/cover_m"], frame["by the scheme/as it stands/deep_m"] = trapezoid[:, 0], trapezoid[:, 1]
            about.insert(1, "The last two columns are the trapezoidal rule itself with the rates as given.")
            digits = 14
        columns = []
        for c in frame:
            built = "as built/" + c.partition("/")[2]
            if c == built or built not in frame or not frame[c].equals(frame[built]):
                columns.append(c)
        if len(columns) < len(frame.columns):
            about.append("Left out: conditions of options that have nothing to decline; their levels are those as built.")
        save(frame[columns].iloc[::EVERY], os.path.join(HERE, "seattle-%s-levels.csv" % study), about, digits)
    def together(*parts):
        frames = [written[study].rename(columns=lambda c: c.replace("as built", name)) for study, name in parts]
        return pd.concat([frames[0]] + [f.drop(columns="time") for f in frames[1:]], axis=1)

    save(together(("more-months", "with soil"), ("more-months-bare", "without soil"), ("more-months, month mean", "with gaps")),
         os.path.join(HERE, "seattle-more-months-levels.csv"),
         ["testdata/seattle/more-months.yaml with its soil block, without it and the limit of infiltration, and with seattle-months-gaps.csv",
          "filled by the mean of the month.", LEVELS.replace("condition/", "variant/")], 9)
    save(together(("more-gaps, zero", "zero"), ("more-gaps, month mean", "month mean")).iloc[::EVERY],
         os.path.join(HERE, "seattle-more-gaps-levels.csv"),
         ["testdata/seattle/more-gaps.yaml, with both ways of filling.", LEVELS.replace("condition/", "gaps/"), note], 9)
    save(pd.DataFrame(tables["counts"]), os.path.join(HERE, "seattle-more-counts.csv"),
         ["Exceedances in the counted years, from all end-of-step deep levels of the studies testdata/seattle/more*.yaml.",
          "Units: days d, load m d, excess m."])
    save(pd.DataFrame(tables["sums"]), os.path.join(HERE, "seattle-more-sums.csv"),
         ["Sums over all steps of the record of the studies testdata/seattle/more*.yaml: recharge, mm; end-of-step levels, m.",
          "year_starts: number of the month. steps_filled: with something filled. nearest_band_m: least distance of any deep level from the",
          "onset or arrest level of a band."])
    save(pd.DataFrame(shown, columns=["study", "band", "level_m", "until_m"]), os.path.join(HERE, "seattle-more-bands.csv"),
         ["Levels of the bands of the studies testdata/seattle/more*.yaml, m above the base of the deep layer; those given as factors of",
          "safety are roots of the infinite slope in effective stress, flow parallel to the slope (more) and standing water (more-months)."])
    save(pd.DataFrame(rows), os.path.join(HERE, "seattle-more-schemes.csv"),
         ["testdata/seattle/more-scheme.yaml without measures, by each stepping formula itself and by exact stores with converted rates.",
          "Rates 1/d; largest differences over the record: levels m, outflow of the cover mm/d; when the deep one stands, and the second largest."])
    if check:
        print("against the matrix exponential, first 60 steps of every series: %.1e m" % max(check))


if __name__ == "__main__":
    main()
