#!/usr/bin/env python3
"""Reference levels, states of drains and sums of money for the studies testdata/seattle/works.yaml and works-bare.yaml.

Run from the repository's root:  /usr/bin/python3 testdata/ref/seattle-works.py --check
Takes about four minutes, without --check one and a half. Writes testdata/ref/seattle-works-*.csv.

The numbers of the studies are set down here a second time, by hand; nothing reads a study file and nothing is shared with
the program under test. Levels: Taylor series of the storages in time, of a degree that leaves nothing of a double's digits
behind, begun anew at every event (an invert, a ceiling or a capacity reached, a store that empties or lets go), which is
found on the series by bisection. With --check each replay of compare again by solve_ivp (SciPy, DOP853) with terminal events.
Counts, losses, cash flows, resampling and intervals: NumPy, SciPy and pandas, written apart.
"""
import copy
import datetime
import math
import os
import platform
import sys

import numpy as np
import pandas as pd
import scipy
from scipy import optimize, special, stats
from scipy.integrate import solve_ivp

HERE = os.path.dirname(os.path.abspath(__file__))
SEATTLE = os.path.join(HERE, "..", "seattle")
INF = float("inf")
NAN = float("nan")
CHECK = "--check" in sys.argv

# ---- Two stores ------------------------------------------------------------------------------------------------------


class Outlet:
    """q(S) = min(rate*u + square*u^2, ceiling) with u = max(0, S - invert); mm and days."""

    def __init__(self, rate, invert=0.0, ceiling=INF, square=0.0):
        self.rate, self.invert, self.ceiling, self.square = rate, invert, ceiling, square

    def flow(self, s):
        u = max(0.0, s - self.invert)
        return min(self.rate * u + self.square * u * u, self.ceiling)

    def edges(self):
        """Storages at which the law of outflow changes."""
        out = [self.invert]
        if self.ceiling < INF and self.rate > 0:
            assert self.square == 0
            out.append(self.invert + self.ceiling / self.rate)
        return out

    def polynomial(self, inside):
        """Coefficients of 1, S and S^2 of the flow near the storage inside."""
        u = inside - self.invert
        if u < 0:
            return np.zeros(3)
        if self.rate * u > self.ceiling:
            return np.array([self.ceiling, 0.0, 0.0])
        k, c, z = self.rate, self.square, self.invert
        return np.array([-k * z + c * z * z, k - 2 * c * z, c])


class Store:
    def __init__(self, capacity, outlets):
        self.capacity, self.outlets = capacity, outlets
        inner = sorted({e for o in outlets for e in o.edges() if 0 < e < capacity})
        self.edges = [0.0] + inner + [capacity]
        self.laws = []
        for lo, hi in zip(self.edges, self.edges[1:]):
            inside = lo + 1.0 if hi == INF else (lo + hi) / 2
            self.laws.append([o.polynomial(inside) for o in outlets])
        self.sums = [sum(law) for law in self.laws]

    def out(self, s):
        return sum(o.flow(s) for o in self.outlets)

    def segment(self, s, rising):
        for i in range(len(self.edges) - 2):
            if s < self.edges[i + 1] or (s == self.edges[i + 1] and not rising):
                return i
        return len(self.edges) - 2


class Model:
    """The second outlet of the cover is the percolation."""

    def __init__(self, cover, deep, lateral):
        self.cover, self.deep, self.lateral = cover, deep, lateral
        self.percolation = cover.outlets[1]
        self.deep_full = deep.out(deep.capacity) if deep.capacity < INF else INF

    def state(self, net, s1, s2):
        """Segment of each store, or None where it is held; coefficients of dS1/dt and of the deep inflow in S1, and of dS2/dt in S2."""
        cover, deep = self.cover, self.deep
        d1 = net - cover.out(s1)
        if (s1 >= cover.capacity and d1 >= 0) or (s1 <= 0 and d1 <= 0):
            i = None
            own = np.zeros(3)
            inflow = np.array([self.percolation.flow(s1) + self.lateral, 0.0, 0.0])
            grows = 0.0
        else:
            i = cover.segment(s1, d1 > 0)
            own = np.array([net, 0.0, 0.0]) - cover.sums[i]
            inflow = cover.laws[i][1] + np.array([self.lateral, 0.0, 0.0])
            grows = inflow[1] * d1
        d2 = self.percolation.flow(s1) + self.lateral - deep.out(s2)
        up = d2 > 0 or (d2 == 0 and grows > 0)
        if s2 >= deep.capacity and (up or (d2 == 0 and grows == 0)):
            return i, None, own, inflow, np.zeros(3)
        j = deep.segment(s2, up)
        return i, j, own, inflow, -deep.sums[j]


DEGREE = 22


def series(own, inflow, deep, s1, s2):
    """Taylor coefficients of both storages: S1' = a + b S1 + c S1^2, S2' = p + q S1 - m S2, by recurrence."""
    a, b, c = own
    p, q = inflow[0] + deep[0], inflow[1]
    m = deep[1]
    x, y = [s1], [s2]
    for k in range(DEGREE):
        if c == 0.0:
            square = 0.0
        else:
            square = c * sum(x[i] * x[k - i] for i in range(k + 1))
        x.append((b * x[k] + square + (a if k == 0 else 0.0)) / (k + 1))
        y.append((q * x[k] + m * y[k] + (p if k == 0 else 0.0)) / (k + 1))
    return x, y


def horner(c, t):
    v = 0.0
    for x in reversed(c):
        v = v * t + x
    return v


def derivative(c):
    return [k * x for k, x in enumerate(c)][1:]


def bisect(f, lo, hi):
    """A root of f, which is positive at hi and not at lo, or the other way round; the end of the last interval past it."""
    flo, fhi = f(lo), f(hi)
    for _ in range(200):
        x = (lo + hi) / 2
        if x <= lo or x >= hi:
            break
        v = f(x)
        if (v > 0) == (fhi > 0):
            hi = x
        else:
            lo = x
    return hi


def within(c, span):
    """The part of the span in which the series c is good to the last digit: halved until its last three terms say so."""
    scale = max(abs(c[0]), 1.0)
    while max(abs(c[k]) * span ** k for k in (DEGREE - 2, DEGREE - 1, DEGREE)) > 1e-18 * scale:
        span /= 2
    return span


def step(model, net, days, s1, s2):
    """Storages after a step of constant net input, mm/d."""
    left = days
    for _ in range(1000):
        if left <= 0:
            return s1, s2
        i, j, own, inflow, deep = model.state(net, s1, s2)
        x, y = series(own, inflow, deep, s1, s2)
        if j is None:
            y = [s2] + [0.0] * DEGREE
        h = min(left, within(x, left), within(y, left))
        hit = None
        if i is not None:
            # Constant coefficients: S1 is monotone in a segment.
            for edge in (model.cover.edges[i], model.cover.edges[i + 1]):
                end = horner(x, h)
                if edge < INF and ((end < edge < s1) or (end > edge > s1) or (s1 != edge and end == edge)):
                    h = bisect(lambda t: horner(x, t) - edge, 0.0, h)
                    hit = ("cover", edge)
        if j is None:
            # Held: it lets go once the inflow is less than what leaves at capacity.
            surplus = lambda t: inflow[0] + inflow[1] * horner(x, t) - model.deep_full  # noqa: E731
            if surplus(h) < 0:
                h, hit = bisect(surplus, 0.0, h), ("deep", s2)
        else:
            slope = derivative(y)
            stops = [h]
            if slope[0] * horner(slope, h) < 0:
                stops = [bisect(lambda t: horner(slope, t), 0.0, h), h]
            start, before = 0.0, s2
            for stop in stops:
                value = horner(y, stop)
                for edge in (model.deep.edges[j], model.deep.edges[j + 1]):
                    if edge < INF and ((value < edge < before) or (value > edge > before)):
                        h, hit = bisect(lambda t: horner(y, t) - edge, start, stop), ("deep", edge)
                        break
                if hit and hit[0] == "deep":
                    break
                start, before = stop, value
        s1, s2 = horner(x, h), horner(y, h)
        left -= h
        if hit and hit[0] == "cover":
            s1 = hit[1]
        elif hit:
            s2 = hit[1]
        s1, s2 = min(max(s1, 0.0), model.cover.capacity), min(max(s2, 0.0), model.deep.capacity)
    raise RuntimeError("too many events")


def integrated(model, net, days, s1, s2):
    """The same by a general-purpose integrator with terminal events."""
    left = days
    for _ in range(200):
        if left <= 0:
            return s1, s2
        i, j, own, inflow, deep = model.state(net, s1, s2)

        def rhs(_, v):
            return [own[0] + own[1] * v[0] + own[2] * v[0] ** 2, 0.0 if j is None else inflow[0] + inflow[1] * v[0] + deep[0] + deep[1] * v[1]]

        events = []
        if i is not None:
            for edge, way in ((model.cover.edges[i], -1), (model.cover.edges[i + 1], 1)):
                if edge < INF and s1 != edge:
                    events.append((lambda _, v, edge=edge: v[0] - edge, way, ("cover", edge)))
        if j is None:
            events.append((lambda _, v: inflow[0] + inflow[1] * v[0] - model.deep_full, -1, ("deep", s2)))
        else:
            for edge, way in ((model.deep.edges[j], -1), (model.deep.edges[j + 1], 1)):
                # Just left, it may come back to the same edge: from 1e-9 mm further on it is watched again.
                if edge < INF:
                    near = s2 == edge
                    events.append((lambda t, v, edge=edge, near=near, way=way: v[1] - edge - (way * 1e-9 if near else 0), way, ("deep", edge)))
        functions = []
        for f, way, _ in events:
            g = lambda t, v, f=f: f(t, v)  # noqa: E731
            g.terminal, g.direction = True, way
            functions.append(g)
        sol = solve_ivp(rhs, (0, left), [s1, s2], method="DOP853", rtol=2e-13, atol=1e-12, events=functions or None)
        s1, s2 = sol.y[:, -1]
        if sol.status != 1:
            return s1, s2
        k = next(k for k, e in enumerate(sol.t_events) if len(e))
        left -= sol.t_events[k][0]
        store, edge = events[k][2]
        if store == "cover":
            s1 = edge
        else:
            s2 = edge
        s1, s2 = min(max(s1, 0.0), model.cover.capacity), min(max(s2, 0.0), model.deep.capacity)
    raise RuntimeError("too many events")


# ---- Parallel drains ---------------------------------------------------------------------------------------------------


def equivalent_depth(below, radius, spacing):
    """Equivalent depth, m: van der Molen & Wesseling 1991, Agric. Water Manage. 19:1-16, the series; not above the true depth."""
    if below <= 0:
        return 0.0
    x = 2 * math.pi * below / spacing
    f, n = 0.0, 1
    while True:
        e = math.exp(-2 * n * x)
        term = 4 * e / (n * -math.expm1(-2 * n * x))
        f += term
        if term < 1e-18 * f or n > 20000:
            break
        n += 2
    bottom = math.log(spacing / (math.pi * radius)) + f
    return below if bottom <= 0 else min(below, math.pi * spacing / 8 / bottom)


class Trench:
    """Trenches by spacing (m, m/d) or by rate (1/d). decline: (half-life, years between flushes or None, share restored)."""

    def __init__(self, depth, spacing=None, above=None, below=None, radius=0.1, head=None, law="linear", efficiency=1.0, rate=None, decline=None):
        self.depth, self.spacing, self.above, self.below, self.radius = depth, spacing, above, below if below is not None else above, radius
        self.head, self.law, self.efficiency, self.rate, self.decline = depth / 2 if head is None else head, law, efficiency, rate, decline
        self.renewed = INF  # or not within the horizon

    def outlet(self, g, share=1.0, stretch=1.0):
        """share multiplies the outflow, stretch the spacing; a rate without a spacing goes with 1/stretch."""
        z = 1000 * g["n1"] * (g["cover"] - self.depth)
        if self.rate is not None:
            return Outlet(self.efficiency * self.rate * share / stretch, z)
        spacing, n = self.spacing * stretch, g["n1"]
        d = equivalent_depth(g["cover"] - self.depth, self.radius, spacing)
        if self.law == "linear":
            # Reaction factor (De Zeeuw & Hellinga 1958) with conductivities above and below the drains.
            k = math.pi ** 2 * (self.below * d + self.above * self.head / 2) / (n * spacing ** 2)
            return Outlet(self.efficiency * share * k, z)
        # Hooghoudt 1940 with h midway = pi^2/8 of the mean height u/(1000 n): 1000 (8 Kb d h + 4 Ka h^2)/L^2, mm/d.
        to_h = math.pi ** 2 / 8 / (1000 * n)
        scale = 1000 * self.efficiency * share / spacing ** 2
        return Outlet(scale * 8 * self.below * d * to_h, z, INF, scale * 4 * self.above * to_h ** 2)

    def running_rate(self, g, stretch=1.0):
        """Rate of the linear law, whatever the law is."""
        if self.rate is not None:
            return self.efficiency * self.rate / stretch
        other = Trench(self.depth, self.spacing, self.above, self.below, self.radius, self.head, "linear", self.efficiency)
        return other.outlet(g, 1.0, stretch).rate

    def half(self, g):
        """What is left of the rate of the linear law at twice the spacing."""
        return self.running_rate(g, 2.0) / self.running_rate(g)


class Bored:
    """Drains of the deep layer; of every second that is stopped both the rate and the ceiling (mm/d) are halved."""

    def __init__(self, rate, level, efficiency=1.0, ceiling=INF, metres=0.0, decline=None, renewed=INF):
        self.rate, self.level, self.efficiency, self.ceiling, self.metres, self.decline, self.renewed = rate, level, efficiency, ceiling, metres, decline, renewed

    def outlet(self, g, share=1.0, stretch=1.0):
        return Outlet(self.rate * self.efficiency * share / stretch, 1000 * g["n2"] * self.level, self.ceiling / stretch)


# ---- Options -------------------------------------------------------------------------------------------------------------


class Cost:
    """One part of the works: what is paid at the start and for each metre, each year, each flush; life in years; of which drain."""

    def __init__(self, capital=0.0, metre=0.0, year=0.0, flush=0.0, life=INF, of=""):
        self.capital, self.metre, self.year, self.flush, self.life, self.of = capital, metre, year, flush, life, of


class Option:
    def __init__(self, name, trench=None, bored=None, kept_out=0.0, cut_off=0.0, costs=None):
        self.name, self.trench, self.bored, self.kept_out, self.cut_off, self.costs = name, trench, bored, kept_out, cut_off, costs

    def drains(self):
        return [d for d in (self.trench, self.bored) if d]

    def metres(self, study):
        """Of trench and of bore."""
        trench = study.area / self.trench.spacing if self.trench and self.trench.spacing and study.area else 0.0
        return trench, self.bored.metres if self.bored else 0.0


def share_at(drain, horizon, x):
    """Share of the outflow as new at the age x, 0 to 1, of the interval between flushes, or of the horizon where none is flushed, or of
    the life after which the drain is paid for anew if that is shorter."""
    if not drain.decline:
        return 1.0
    half, every, restored = drain.decline
    if every is None:
        return 2.0 ** (-x * min(horizon, drain.renewed) / half)
    return restored * 2.0 ** (-x * every / half)


def states(option, horizon):
    """Name and what is left of each drain: (name, [(share of trench, stretch), (share of bored, stretch)], share of the cut-off, weight)
    with one entry, or as many as there are ages, per state. The second value is the state of the option's own figures."""
    drains = option.drains()
    if not drains and not option.cut_off:
        return [("", [(1.0, 1.0, 1.0, 1.0, 1.0)])], ""
    ages = [d for d in drains if d.decline]
    flushed = [d for d in ages if d.decline[1] is not None]

    def left(trench, bored, cut_off=1.0, stretch=1.0, weight=1.0):
        return (trench, bored, cut_off, stretch, weight)

    def each(f):
        return left(*[f(d) if d else 1.0 for d in (option.trench, option.bored)])

    out, own = [("as_new", [left(1.0, 1.0)])], "as_new"
    if ages:
        own = "mean_between_flushes" if flushed else "mean_over_horizon"
        nodes, weights = np.polynomial.legendre.leggauss(4)
        mean = []
        for x, w in zip(nodes, weights):
            a = each(lambda d: share_at(d, horizon, (x + 1) / 2))
            mean.append(a[:4] + (w / 2,))
        out.append((own, mean))
    if flushed:
        out.append(("before_flush", [each(lambda d: share_at(d, horizon, 1.0))]))
    if ages:
        out.append(("never_flushed", [each(lambda d: 2.0 ** (-horizon / d.decline[0]) if d.decline else 1.0)]))
    out.append(("half_stopped", [left(1.0, 1.0, 0.5, 2.0)]))
    out.append(("all_stopped", [left(0.0, 0.0, 0.0)]))
    return out, own


class Study:
    def __init__(self, name, ground, options, bands, **other):
        self.name, self.ground, self.options, self.bands = name, ground, options, bands
        self.area, self.conditions, self.money, self.losses = None, [("as built", 1.0, 1.0)], None, {}
        for k, v in other.items():
            setattr(self, k, v)


def recharge(study, option, surface):
    """Net input of each step of the record, after those of the warm-up, mm."""
    g, soil = study.ground, study.ground["soil"]
    kept = option.kept_out * surface
    out, deficit = [], 0.0
    order = list(range(study.warm)) + list(range(len(study.rain)))
    for i in order:
        enters = (1 - kept) * min(g["infiltration"] * study.rain[i], g["limit"] * 24)
        if soil is None:
            out.append(enters - study.pet[i])
            continue
        a, p = soil["available"], soil["readily"]
        demand = soil["crop"] * study.pet[i]
        assert demand <= (1 - p) * a
        # Water stress coefficient: Allen et al. 1998, FAO Irrigation and Drainage Paper 56, eq. 84.
        ks = 1.0 if deficit <= p * a else (a - deficit) / ((1 - p) * a)
        deficit = deficit + ks * demand - enters
        out.append(max(0.0, -deficit))
        deficit = max(0.0, deficit)
    return out


DONE = {}
WORST = {"taylor": 0.0, "replays": 0, "check": CHECK}


def replay(study, option, left, condition):
    """End-of-step levels of cover and deep layer over the record, m."""
    g = study.ground
    trench, bored, cut_off, stretch, _ = left
    _, drains, surface = condition
    cover = [Outlet(g["seepage"]), Outlet(g["percolation"], 0.0, g["ceiling"])]
    deep = [Outlet(g["deep_seepage"])]
    if option.trench:
        cover.append(option.trench.outlet(g, trench * drains, stretch))
    if option.bored:
        deep.append(option.bored.outlet(g, bored * drains, stretch))
    lateral = g["lateral"] * (1 - option.cut_off * cut_off * drains)
    kept = option.kept_out * surface
    key = (study.name, kept, lateral) + tuple(tuple((o.rate, o.invert, o.ceiling, o.square) for o in x if o.rate > 0 or o.square > 0) for x in (cover, deep))
    if key in DONE:
        return DONE[key]
    model = Model(Store(1000 * g["n1"] * g["cover_full"], cover), Store(1000 * g["n2"] * g["deep_full"], deep), lateral)
    net = recharge(study, option, surface)

    def run(advance):
        s1, s2 = 1000 * g["n1"] * g["start"][0], 1000 * g["n2"] * g["start"][1]
        levels = np.empty((len(net), 2))
        for i, depth in enumerate(net):
            s1, s2 = advance(model, depth, 1.0, s1, s2)
            levels[i] = s1 / (1000 * g["n1"]), s2 / (1000 * g["n2"])
        return levels[study.warm:]

    levels = run(step)
    WORST["replays"] += 1
    if WORST["check"]:
        d = np.abs(run(integrated) - levels).max()
        WORST["taylor"] = max(WORST["taylor"], d)
    DONE[key] = levels, net[study.warm:], model
    return DONE[key]


# ---- Counting ---------------------------------------------------------------------------------------------------------------


class Count:
    """How a series of deep levels passes a band, by counted year."""

    def __init__(self, study, h, onset, arrest, above_next=None):
        c = study.calendar
        runs = []
        for i in np.flatnonzero(h > onset):
            last = runs[-1][-1] if runs else None
            if runs and (i - last == 1 or i - last <= study.apart or (arrest < onset and (h[last + 1:i] > arrest).all())):
                runs[-1].append(i)
            else:
                runs.append([i])
        self.counted = []
        for run in runs:
            peak = run[int(np.argmax(h[run]))]
            if c.counted[peak]:
                self.counted.append((peak, run))
        self.h = h
        over = c.counted & (h > onset)
        self.days = np.array([float((over & (c.year == y)).sum()) for y in c.years])
        self.load = np.array([(h - onset)[over & (c.year == y)].sum() for y in c.years])
        self.events = np.array([float(sum(c.year[p] == y for p, _ in self.counted)) for y in c.years])
        self.any = (self.days > 0).astype(float)
        self.in_band = float((over & ~(h > above_next)).sum() if above_next is not None else over.sum())
        self.longest = float(max((len(r) for _, r in self.counted), default=0))
        self.near = min(abs(h - onset).min(), abs(h - arrest).min())
        self.by_month = np.array([float((over & (c.month == m)).sum()) for m in range(1, 13)])


class Calendar:
    def __init__(self, dates, starts):
        self.month = dates.month.to_numpy()
        self.year = np.asarray(dates.year - (dates.month < starts))
        end = dates[-1] + pd.Timedelta(days=1)
        self.years = [y for y in sorted(set(self.year)) if pd.Timestamp(y, starts, 1) >= dates[0] and pd.Timestamp(y + 1, starts, 1) <= end]
        self.counted = np.isin(self.year, self.years)


MEASURES = ("load", "days", "events", "annual_probability")
YEARLY = {"load": "load", "days": "days", "events": "events", "annual_probability": "any"}


class Figures:
    """All that is counted of one option in one state and condition: means over the replays of a state."""

    def __init__(self, study, option, lefts, condition):
        self.weights = [left[4] for left in lefts]
        self.replays = [replay(study, option, left, condition) for left in lefts]
        onsets = [b[1] for b in study.bands] + [None]
        self.counts = [[Count(study, r[0][:, 1], b[1], b[2], onsets[j + 1]) for j, b in enumerate(study.bands)] for r in self.replays]

    def near(self):
        return min(c.near for cs in self.counts for c in cs)

    def mean(self, f):
        return sum(w * f(i) for i, w in enumerate(self.weights))

    def yearly(self, band, what):
        return self.mean(lambda i: getattr(self.counts[i][band], what))

    def losses(self, study):
        """Loss of each counted year."""
        c = study.calendar

        def of(i):
            out = np.zeros(len(c.years))
            h = self.counts[i][0].h
            for j, b in enumerate(study.bands):
                per_event, per_day = study.losses.get(b[0], (0, 0))
                if per_event:
                    # The lowest level of a higher band that has a loss per event of its own.
                    higher = min([x[1] for x in study.bands[j + 1:] if study.losses.get(x[0], (0, 0))[0]], default=INF)
                    for peak, run in self.counts[i][j].counted:
                        if not (h[run] > higher).any():
                            out[c.years.index(c.year[peak])] += per_event
            for k in np.flatnonzero(c.counted):
                best = 0
                for b in study.bands:
                    per_day = study.losses.get(b[0], (0, 0))[1]
                    if h[k] > b[1] and per_day:
                        best = per_day
                out[c.years.index(c.year[k])] += best
            return out

        return self.mean(of)


# ---- Resampling ---------------------------------------------------------------------------------------------------------------


class Generator:
    """PCG with DXSM output, 128-bit state of the two seeds, as published by its author (O'Neill 2014, HMC-CS-2014-0905, and the
    pcg-cpp sources) and as the standard library of Go takes it: the state is advanced first, with the full multiplier."""

    WORD, FULL = (1 << 64) - 1, (1 << 128) - 1

    def __init__(self, hi, lo):
        self.state = hi << 64 | lo

    def word(self):
        self.state = (self.state * (2549297995355413924 << 64 | 4865540595714422341) + (6364136223846793005 << 64 | 1442695040888963407)) & self.FULL
        hi, lo = self.state >> 64, self.state & self.WORD
        hi ^= hi >> 32
        hi = hi * 0xda942042e4dd58b5 & self.WORD
        hi ^= hi >> 48
        return hi * (lo | 1) & self.WORD

    def share(self):
        return (self.word() & ((1 << 53) - 1)) / (1 << 53)

    def below(self, n):
        if n & (n - 1) == 0:
            return self.word() & (n - 1)
        while True:  # Lemire 2019, ACM Trans. Model. Comput. Simul. 29(1):3
            x = self.word() * n
            if x & self.WORD >= (1 << 64) % n:
                return x >> 64


class Resamples:
    """Stationary bootstrap of whole years: Politis & Romano 1994, J. Am. Stat. Assoc. 89:1303-1313."""

    def __init__(self, years, n, block, seed, confidence):
        self.index = np.empty((n, years), int)
        for i in range(n):
            rng, y = Generator(seed, i), 0
            for k in range(years):
                if k == 0 or rng.share() < 1 / block:
                    y = rng.below(years)
                else:
                    y = (y + 1) % years
                self.index[i, k] = y
        self.years, self.confidence = years, confidence
        # Expanded percentiles: Hesterberg 2015, Am. Stat. 69:371-386.
        # Student's t through the incomplete beta function, since stats.t.ppf of SciPy 1.10 is right to 4e-9 only.
        x = special.betaincinv((years - 1) / 2, 0.5, 1 - confidence)
        self.p = stats.norm.cdf(-math.sqrt(years / (years - 1)) * math.sqrt((years - 1) * (1 - x) / x))

    def means(self, yearly):
        return np.asarray(yearly)[self.index].mean(axis=1)

    def ends(self, values):
        return tuple(np.quantile(values, [self.p, 1 - self.p]))

    def interval(self, yearly):
        yearly = np.asarray(yearly)
        if not (yearly != 0).any():
            return NAN, NAN
        return self.ends(self.means(yearly))

    def difference(self, option, baseline):
        """Years that differ by rounding only are equal: 1e-9 of the largest figure."""
        d = np.asarray(option) - np.asarray(baseline)
        d[np.abs(d) <= 1e-9 * max(np.abs(option).max(), np.abs(baseline).max())] = 0.0
        return d

    def told_apart(self, option, baseline):
        d = self.difference(option, baseline)
        lo, hi = self.interval(d)
        if not (lo > 0 or hi < 0):
            return False
        better, worse = int((d < 0).sum()), int((d > 0).sum())
        p = min(1.0, 2 * stats.binom.cdf(min(better, worse), better + worse, 0.5))
        return p <= 1 - self.confidence + 1e-12


def poisson(events, years, c):
    """Garwood 1936, Biometrika 28:437-442, for a real count."""
    a = (1 - c) / 2
    return (0.0 if events == 0 else stats.chi2.ppf(a, 2 * events) / 2 / years), stats.chi2.ppf(1 - a, 2 * events + 2) / 2 / years


def binomial(k, n, c):
    """Clopper & Pearson 1934, Biometrika 26:404-413, for a real k."""
    a = (1 - c) / 2
    if abs(k - n) < 1e-12:
        k = n
    return (0.0 if k == 0 else stats.beta.ppf(a, k, n - k + 1)), (1.0 if k == n else stats.beta.ppf(1 - a, k + 1, n - k))


def figure(study, figures, band, measure):
    """A figure per year and its interval."""
    n = len(study.calendar.years)
    by_year = figures.yearly(band, YEARLY[measure])
    if measure == "events":
        ci = poisson(by_year.sum(), n, study.confidence)
    elif measure == "annual_probability":
        ci = binomial(by_year.sum(), n, study.confidence)
    else:
        ci = study.resamples.interval(by_year)
    return by_year.mean(), ci


def meets(value, ci, target):
    if value > target:
        return "no"
    return "not_shown" if ci[1] > target else "yes"


# ---- Money ---------------------------------------------------------------------------------------------------------------------


def flushes(drain, horizon):
    """Years in which a drain is flushed, before the horizon: each multiple of the time between flushes."""
    if not drain or not drain.decline or drain.decline[1] is None:
        return []
    return [j * drain.decline[1] for j in range(1, 10000) if j * drain.decline[1] < horizon - 1e-9]


def money(study, option):
    """Capital with contingency, present value, equal annual cost, renewals."""
    m = study.money
    h, i = m["horizon"], m["rate"]
    trench, bore = option.metres(study)
    capital = present = 0.0
    renewals = 0
    for part in option.costs:
        # The metres and flushes of a part are those of the drains that it prices.
        metres, drain = {"trench": (trench, option.trench), "bore": (bore, option.bored), "": (0.0, None)}[part.of]
        c = (part.capital + part.metre * metres) * (1 + m["contingency"])
        capital += c
        present += c
        for t in range(1, h + 1):
            present += part.year / (1 + i) ** t
        j = 1
        while j * part.life < h - 1e-9:
            if c > 0:
                present += c / (1 + i) ** (j * part.life)
                renewals += 1
            j += 1
        for t in flushes(drain, h):
            present += part.flush / (1 + i) ** t
    return capital, present, present * i / (1 - (1 + i) ** -h), renewals


def time_to_effect(study, option, condition):
    """Days until 90 % of a step change, of the two stores with what the condition leaves of new drains, and of the clay between trenches."""
    g, left = study.ground, condition[1]
    deep = g["deep_seepage"] + (left * option.bored.outlet(g).rate if option.bored else 0.0)
    cover = g["seepage"] + g["percolation"] + (left * option.trench.running_rate(g) if option.trench else 0.0)
    if not option.drains() and not option.kept_out and not option.cut_off:
        return NAN, NAN, NAN
    if not option.trench and not option.kept_out:
        store = math.log(10) / deep
    else:
        rest = lambda t: ((1 + deep * t) * math.exp(-deep * t) if cover == deep else  # noqa: E731
                          (cover * math.exp(-deep * t) - deep * math.exp(-cover * t)) / (cover - deep)) - 0.1
        store = optimize.brentq(rest, 0, 1e6, xtol=1e-10)
    clay = NAN
    if option.trench and option.trench.spacing and g.get("consolidation"):
        clay = 0.85 * (option.trench.spacing / 2) ** 2 / g["consolidation"] * 365.25  # Terzaghi 1943
    return store, clay, max(store, clay) if clay == clay else store


def benefit_factor(m, days):
    return sum(max(0.0, min(1.0, t - days / 365.25)) / (1 + m["rate"]) ** t for t in range(1, m["horizon"] + 1))


def frontier(costs, figures):
    """For each option whether nothing is at least as cheap and as good and better in one."""
    keys = list(costs)
    out = {}
    for a in keys:
        by = [b for b in keys if b != a and costs[b] <= costs[a] * (1 + 1e-9) and figures[b] <= figures[a] * (1 + 1e-9) and
              (costs[b] < costs[a] * (1 - 1e-9) or figures[b] < figures[a] * (1 - 1e-9))]
        out[a] = by
    front = [a for a in keys if not out[a]]
    dominated = {}
    for a in keys:
        # Of several, the best figure, then the cheapest, then the first.
        by = sorted((b for b in out[a] if b in front), key=lambda b: (round(figures[b], 9), costs[b], keys.index(b)))
        dominated[a] = by[0] if by else ""
    return dominated


# ---- The studies ---------------------------------------------------------------------------------------------------------------


def studies():
    weather = pd.read_csv(os.path.join(SEATTLE, "seattle-pet.csv"))
    dates = pd.DatetimeIndex(pd.to_datetime(weather["date"]))
    assert (np.diff(dates) == np.timedelta64(1, "D")).all()
    rain, pet = weather["precipitation"].to_numpy(), weather["pet"].to_numpy()

    g = dict(infiltration=0.75, limit=0.9, soil=dict(available=90.0, readily=0.45, crop=0.95), cover=3.0, n1=0.05, seepage=0.020,
             percolation=0.030, ceiling=1.6, cover_full=1.8, deep=8.0, n2=0.008, deep_seepage=0.05, lateral=0.10, deep_full=4.15,
             consolidation=60.0, start=(0.5, 1.0))  # the start is forgotten by the end of the warm-up
    flushed = (12.0, 5.0, 0.95)

    def trenches(spacing=9.0, law="linear"):
        return Trench(2.3, spacing, 0.06, 0.15, head=0.9 if law == "linear" else None, law=law, efficiency=0.8, decline=flushed)

    def other(law):
        return Trench(2.4, 12.0, 0.09, 0.04, radius=0.3, law=law, efficiency=0.9)

    def bored(rate=0.03):
        return Bored(rate, 2.4, 0.8, 0.15, 10 * 42.0, (20.0, None, None), renewed=25.0)

    def rhythm():
        return Bored(0.015, 1.8, 1.0, INF, 6 * 50.0, (6.0, 7.0, 1.0))

    trench_cost, other_cost = Cost(8000, 60, 500, 3000, 30, "trench"), Cost(8000, 75, 500, 0, 30, "trench")
    bored_cost, rhythm_cost = Cost(20000, 110, 900, 0, 25, "bore"), Cost(15000, 120, 700, 2500, 20, "bore")
    channels, cut = Cost(30000, 0, 1500, 0, 25), Cost(45000, 0, 300, 0, 50)
    options = [
        Option("as it stands", costs=[Cost(year=400)]),
        Option("trenches", trenches(), costs=[trench_cost]),
        Option("trenches of another radius", other("linear"), costs=[other_cost]),
        Option("quadratic trenches", trenches(law="quadratic"), costs=[trench_cost]),
        Option("quadratic trenches of another radius", other("quadratic"), costs=[other_cost]),
        Option("quadratic trenches to the contact", Trench(3.0, 16.0, 0.06, law="quadratic", efficiency=0.85, decline=(25.0, None, None)),
               costs=[Cost(12000, 85, 650, 0, 40, "trench")]),
        Option("bored drains", bored=bored(), costs=[bored_cost]),
        Option("trenches with bored drains", trenches(12.0), bored(0.02), costs=[trench_cost, bored_cost]),
        Option("lined channels", kept_out=0.18, costs=[channels]),
        Option("cut-off drain", cut_off=0.7, costs=[cut]),
        Option("channels with cut-off and bored drains", bored=bored(), kept_out=0.18, cut_off=0.7, costs=[channels, cut, bored_cost]),
        Option("trenches at a measured rate", Trench(2.3, rate=0.04, decline=(8.0, 3.0, 0.9))),
        Option("flushed bores", bored=rhythm(), costs=[rhythm_cost]),
        Option("drains flushed in two rhythms", Trench(2.3, 11.0, 0.06, 0.15, law="quadratic", efficiency=0.8, decline=(10.0, 4.0, 0.85)), rhythm(), cut_off=0.5,
               costs=[trench_cost, rhythm_cost]),
        Option("small ditch", kept_out=0.004, costs=[Cost(6000, 0, 400, 0, 10)]),
    ]
    bands = [("watch", 2.6, 2.6), ("slow movement", 3.3, 3.1), ("fast movement", 3.9, 3.9)]
    works = Study("works", g, options, bands, area=9000.0, conditions=[("as built", 1.0, 1.0), ("neglected", 0.45, 0.60)], warm=365 * 3 + 1,
                  apart=6, calendar=Calendar(dates, 1), confidence=0.8, decide=1, measure="days", target=("days", 20.0), horizon=40, seed=1, block=2.0,
                  money=dict(horizon=40, rate=0.035, contingency=0.15),
                  losses={"slow movement": (18000, 350), "fast movement": (70000, 1400)}, rain=rain, pet=pet, dates=dates)

    g = dict(infiltration=0.75, limit=INF, soil=None, cover=3.2, n1=0.06, seepage=0.012, percolation=0.025, ceiling=INF, cover_full=2.6,
             deep=8.0, n2=0.008, deep_seepage=0.04, lateral=0.10, deep_full=6.5, start=(1.0, 3.5))
    options = [
        Option("as it stands"),
        Option("quadratic", Trench(2.0, 10.0, 0.5, 0.2, law="quadratic", efficiency=0.8)),
        Option("linear", Trench(2.0, 10.0, 0.5, 0.2, head=0.6, efficiency=0.8)),
        Option("fast quadratic", Trench(2.6, 3.0, 0.5, radius=0.05, law="quadratic", decline=(10.0, None, None))),
        Option("quadratic on the contact", Trench(3.2, 14.0, 0.5, law="quadratic", decline=(9.0, 18.0, 0.8))),
    ]
    bare = Study("works-bare", g, options, [("watch", 3.0, 3.0), ("movement", 3.5, 3.3)], warm=0, apart=6, calendar=Calendar(dates, 9),
                 confidence=0.7, decide=1, measure="load", target=("load", 15.0), horizon=30, seed=7, block=1.5, rain=rain, pet=pet, dates=dates)
    # The same with rates that were fitted with backward steps of five days, Q' = beta Q + (1 - beta) I with beta = 1/(1 + 5 k).
    c = copy.deepcopy(bare)
    c.name = "works-bare, implicit"
    for rates, porosity in ((("seepage", "percolation"), "n1"), (("deep_seepage",), "n2")):
        total = sum(g[k] for k in rates)
        exact = math.log(1 + 5 * total) / 5
        for k in rates:
            c.ground[k] *= exact / total
        c.ground[porosity] *= total / exact
    for s in (works, bare, c):
        s.resamples = Resamples(len(s.calendar.years), 2000, s.block, s.seed, s.confidence)
    return works, bare, c


IMPLICIT = "works-bare, implicit is works-bare.yaml with rates_from: {scheme: implicit, step: 5 d}."
EVERY = 8  # each eighth step is written; all steps go into the counts
APART = 1e-7  # m; no level of any replay may be closer to a band, or a count could hang on rounding


def in_use(study, option, layer):
    """Of the steps counted, the share that ends with water above the drain's level, a mean over its ages, and the largest flow at
    the end of one at any of them or as new, mm/d."""
    g, (listed, own) = study.ground, states(option, study.horizon)
    share = peak = 0.0
    fresh = listed[0][1][0]
    for left in dict(listed)[own] + [fresh[:4] + (0.0,)]:
        levels = replay(study, option, left, study.conditions[0])[0][study.calendar.counted, layer]
        out = [option.trench, option.bored][layer].outlet(g, left[layer], left[3])
        s = levels * 1000 * g[("n1", "n2")[layer]]
        share += left[4] * (s > out.invert).mean()
        peak = max(peak, max(out.flow(x) for x in s))
    return share, peak


def run(study, tables):
    print("== %s: counted years %s" % (study.name, study.calendar.years))
    levels = {"time": study.dates.strftime("%Y-%m-%d")}
    g = study.ground
    n = len(study.calendar.years)
    own_states = {}
    for o in study.options:
        row = {"study": study.name, "option": o.name, "spacing_m": NAN, "equivalent_depth_m": NAN, "trench_rate_per_day": NAN, "trench_square_per_mm_day": NAN,
               "trench_invert_m": NAN, "bored_rate_per_day": NAN}
        if o.trench:
            out = o.trench.outlet(g)
            row.update(trench_rate_per_day=out.rate, trench_square_per_mm_day=out.square, trench_invert_m=out.invert / (1000 * g["n1"]))
            if o.trench.spacing:
                row.update(spacing_m=o.trench.spacing, equivalent_depth_m=equivalent_depth(g["cover"] - o.trench.depth, o.trench.radius, o.trench.spacing))
            # With the option's own figures: how often water stands above the drain at the end of a counted step, and the largest flow then.
            use = in_use(study, o, 0)
            row.update(trench_running_share=use[0], trench_peak_mm_per_day=use[1])
        if o.bored:
            use = in_use(study, o, 1)
            row.update(bored_rate_per_day=o.bored.outlet(g).rate, bored_running_share=use[0], bored_peak_mm_per_day=use[1])
        tables["drains"].append(row)

    for number, condition in enumerate(study.conditions):
        figs = {}
        for o in study.options:
            listed, own = states(o, study.horizon)
            own_states[o.name] = own
            new = replay(study, o, listed[0][1][0], condition)[0]
            levels["%s/%s/cover_m" % (condition[0], o.name)], levels["%s/%s/deep_m" % (condition[0], o.name)] = new[:, 0], new[:, 1]
            for state, lefts in listed:
                f = Figures(study, o, lefts, condition)
                if state == own:
                    figs[o.name] = f
                if number > 0 or not state:
                    continue
                assert f.near() > APART, (study.name, o.name, state, f.near())
                kinds = ([o.trench] if o.trench else []) + ([o.bored] if o.bored else []) + (["cut-off"] if o.cut_off else [])
                shares = []
                for kind in kinds:
                    for left in lefts:
                        s = {True: left[2]}.get(kind == "cut-off")
                        if s is None:
                            s = left[0] if kind is o.trench else left[1]
                            if left[3] == 2.0:
                                s = o.trench.half(g) if kind is o.trench else 0.5
                        shares.append(s * left[4])
                for measure in MEASURES:
                    value, ci = figure(study, f, study.decide, measure)
                    t = meets(value, ci, study.target[1]) if study.target[0] == measure else ""
                    tables["states"].append({"study": study.name, "option": o.name, "state": state, "measure": measure,
                                             "effect_share": sum(shares) / len(kinds), "value": value, "lower": ci[0], "upper": ci[1], "meets_target": t})
        # The options' own figures.
        base = figs[study.options[0].name]
        for o in study.options:
            f = figs[o.name]
            for j, b in enumerate(study.bands):
                row = {"study": study.name, "condition": condition[0], "option": o.name, "drains_as": own_states[o.name], "band": b[0],
                       "nearest_band_m": f.near(), "events_counted": f.yearly(j, "events").sum(), "days_in_band_per_year": f.yearly(j, "in_band") / n,
                       "longest_days": max(c[j].longest for c in f.counts)}
                for measure in MEASURES:
                    value, ci = figure(study, f, j, measure)
                    row.update({measure: value, measure + "_lower": ci[0], measure + "_upper": ci[1]})
                    if o is not study.options[0]:
                        d = study.resamples.difference(f.yearly(j, YEARLY[measure]), base.yearly(j, YEARLY[measure]))
                        lo, hi = study.resamples.interval(d)
                        row.update({measure + "_difference": d.mean(), measure + "_difference_lower": lo, measure + "_difference_upper": hi})
                row["told_apart"] = "" if o is study.options[0] else str(study.resamples.told_apart(
                    f.yearly(j, YEARLY[study.measure]), base.yearly(j, YEARLY[study.measure]))).lower()
                tables["counts"].append(row)
        # Money.
        j = study.decide
        value = {o.name: figure(study, figs[o.name], j, study.measure) for o in study.options}
        if not study.money:
            for o in study.options:
                v, ci = value[o.name]
                store, clay, days = time_to_effect(study, o, condition)
                tables["money"].append({"study": study.name, "condition": condition[0], "option": o.name, "meets_target": meets(v, ci, study.target[1]),
                                        "store_days": store, "clay_days": clay, "effect_days": days})
            continue
        priced = [o for o in study.options if o.costs]
        cost = {o.name: money(study, o) for o in priced}
        dominated = frontier({o.name: cost[o.name][1] for o in priced}, {o.name: value[o.name][0] for o in priced})
        front = sorted((o for o in priced if not dominated[o.name]), key=lambda o: cost[o.name][1])
        losses = {o.name: figs[o.name].losses(study) for o in study.options}
        zero = study.options[0].name
        decide = {o.name: figs[o.name].yearly(j, YEARLY[study.measure]) for o in study.options}
        benefit = {}
        for o in study.options:
            days = time_to_effect(study, o, condition)[2]
            factor = benefit_factor(study.money, 0.0 if days != days else days)
            benefit[o.name] = factor, factor * study.resamples.difference(losses[o.name], losses[zero]) * -1.0
        # Each dearer one on the frontier against the last before it that brought at least as much more as it cost more: the
        # incremental benefit-cost ratio of mutually exclusive alternatives, of engineering economics.
        steps, held = {}, front[0]
        for o in front[1:]:
            ratio = None
            if study.resamples.told_apart(decide[o.name], decide[held.name]):
                gain = benefit[o.name][1].mean() - benefit[held.name][1].mean()
                ratio = gain / (cost[o.name][1] - cost[held.name][1])
            steps[o.name] = held.name, ratio
            if ratio is not None and ratio >= 1:
                held = o
        for o in study.options:
            v, ci = value[o.name]
            store, clay, days = time_to_effect(study, o, condition)
            row = {"study": study.name, "condition": condition[0], "option": o.name, "meets_target": meets(v, ci, study.target[1]),
                   "store_days": store, "clay_days": clay, "effect_days": days, "annual_loss": losses[o.name].mean()}
            row.update({"loss_%d" % y: x for y, x in zip(study.calendar.years, losses[o.name])})
            row["annual_loss_lower"], row["annual_loss_upper"] = study.resamples.interval(losses[o.name])
            if o.costs:
                capital, present, annual, renewals = cost[o.name]
                row.update(capital=capital, present_value=present, annual_equivalent=annual, metres=sum(o.metres(study)),
                           flushes=sum(len(flushes(d, study.horizon)) for d in o.drains()), renewals=renewals, on_frontier=str(not dominated[o.name]).lower(),
                           dominated_by=dominated[o.name])
                if o.name != zero:
                    factor, by_year = benefit[o.name]
                    extra, extra_annual = present - cost[zero][1], annual - cost[zero][2]
                    row["net_benefit"] = by_year.mean() - extra
                    lo, hi = study.resamples.interval(by_year)
                    row["net_benefit_lower"], row["net_benefit_upper"] = lo - extra, hi - extra
                    apart = study.resamples.told_apart(decide[o.name], decide[zero])
                    row["told_apart"] = str(apart).lower()
                    row["benefit_factor"] = factor
                    if apart and extra > 0:
                        row["benefit_cost"] = by_year.mean() / extra
                        events = study.resamples.difference(figs[zero].yearly(j, "events"), figs[o.name].yearly(j, "events"))
                        days = study.resamples.difference(figs[zero].yearly(j, "days"), figs[o.name].yearly(j, "days"))
                        # Not where the record leaves open whether any are avoided.
                        lo, hi = study.resamples.interval(events)
                        if lo > 0:
                            row["per_event_avoided"] = extra_annual / events.mean()
                            row["per_event_avoided_lower"], row["per_event_avoided_upper"] = extra_annual / hi, extra_annual / lo
                            row["break_even_loss_per_event"] = extra / (factor * events.mean())
                        lo, hi = study.resamples.interval(days)
                        if lo > 0:
                            row["per_day_avoided"] = extra_annual / days.mean()
                            row["per_day_avoided_lower"], row["per_day_avoided_upper"] = extra_annual / hi, extra_annual / lo
                    if o.name in steps:
                        row["step_from"], ratio = steps[o.name]
                        if ratio is not None:
                            row["step_benefit_cost"] = ratio
            tables["money"].append(row)
    return pd.DataFrame(levels)


def scan(study, option, spacings, measure, target, rows):
    """The deciding figure against the spacing of the trenches, and the last spacing from the close end before the first miss."""
    def at(spacing):
        o = copy.deepcopy(option)
        o.trench.spacing = spacing
        listed, own = states(o, study.horizon)
        f = Figures(study, o, dict(listed)[own], study.conditions[0])
        return figure(study, f, study.decide, measure)

    found = []
    for s in spacings:
        value, ci = at(s)
        found.append((s, value, ci))
        rows.append({"study": study.name, "option": option.name, "measure": measure, "target": target, "what": "curve", "spacing_m": s, "value": value,
                     "lower": ci[0], "upper": ci[1], "meets_target": meets(value, ci, target)})
    limits = []
    for meeting, beyond, kept in (("limit", "missed", ("yes", "not_shown")), ("shown", "not shown", ("yes",))):
        k = next(k for k, f in enumerate(found) if meets(f[1], f[2], target) not in kept)
        lo, hi = found[k - 1][0], found[k][0]
        while hi - lo > 0.0002 * lo:
            x = (lo + hi) / 2
            if meets(*at(x), target) in kept:
                lo = x
            else:
                hi = x
        limits += [(meeting, lo), (beyond, hi)]
    limits.append(("1 % wider", 1.01 * limits[0][1]))
    for what, s in limits:
        value, ci = at(s)
        rows.append({"study": study.name, "option": option.name, "measure": measure, "target": target, "what": what, "spacing_m": s, "value": value,
                     "lower": ci[0], "upper": ci[1], "meets_target": meets(value, ci, target)})


def save(frame, name, about, digits=None):
    with open(os.path.join(HERE, "seattle-works-%s.csv" % name), "w", newline="\n") as f:
        checked = ["Cross-check of levels: SciPy's DOP853 with terminal events instead of Taylor series gives %.1e m at most." % WORST["taylor"]] if CHECK else []
        for line in list(about) + checked + [
                "Source: testdata/ref/seattle-works.py on the data of testdata/seattle (ORIGIN.md there); nothing is shared with the program under test.",
                "Made on %s with Python %s, NumPy %s, SciPy %s, pandas %s." % (
                    datetime.date.today().isoformat(), platform.python_version(), np.__version__, scipy.__version__, pd.__version__),
                "Command: /usr/bin/python3 testdata/ref/seattle-works.py%s" % (" --check" if CHECK else ""),
                "Digits: %s." % ("%d after the point" % digits if digits else "the shortest text that reads back to the same double")]:
            f.write("# %s\n" % line)
        frame.to_csv(f, index=False, lineterminator="\n", float_format="%%.%df" % digits if digits else None)


def main():
    works, bare, converted = studies()
    tables = {"drains": [], "states": [], "counts": [], "money": []}
    frames = {study.name: run(study, tables) for study in (works, bare, converted)}
    for study, name in (("works", "levels"), ("works-bare", "bare-levels")):
        save(frames[study].iloc[::EVERY], name, [
            "testdata/seattle/%s.yaml, every drain as new." % study,
            "Levels, m at the ends of steps, above the contact (cover_m) and above the base of the deep layer (deep_m); columns condition/option/layer.",
            "Each %dth step of the record from the first." % EVERY], 9)
    WORST["check"] = False  # the replays so far stand for those of other spacings
    sizes = []
    option = {o.name: o for o in works.options}
    spacings = [float("%.4g" % (6.0 * (30 / 6.0) ** (k / 24))) for k in range(25)]
    scan(works, option["trenches"], spacings, "days", 20.0, sizes)
    scan(works, option["trenches"], spacings, "events", 1.6, sizes)
    scan(works, option["quadratic trenches"], spacings, "load", 6.0, sizes)
    scan(bare, {o.name: o for o in bare.options}["quadratic on the contact"], spacings, "load", 15.0, sizes)
    for name, about in (
            ("drains", ["Drains as new of testdata/seattle/works.yaml and works-bare.yaml: q = rate*u + square*u^2, mm/d, u mm above the invert.", IMPLICIT,
                        "running_share: of the counted steps that end with water above the drain, a mean over its ages; peak: the largest flow at such an end, at any age or as new.",
                        "Units: m, 1/d, 1/(mm d), mm/d."]),
            ("states", ["Figures of the deciding band of testdata/seattle/works.yaml and works-bare.yaml with the drains in each state, works as built, per year:",
                        IMPLICIT,
                        "load m d, days, events, share of years; their intervals; meets_target of the target's own measure."]),
            ("counts", ["Figures of every band of testdata/seattle/works.yaml and works-bare.yaml, the mean over the ages of drains where they age, per year:",
                        IMPLICIT,
                        "load m d, days, events, share of years; their intervals and the differences from the baseline; events of all counted years; longest event d, the longest at any age."]),
            ("money", ["Costs and losses of testdata/seattle/works.yaml, EUR of 2026, over 40 years; its targets and times to effect, d, and those of works-bare.yaml.",
                       IMPLICIT, "A blank cell has no value."])):
        save(pd.DataFrame(tables[name]), name, about)
    save(pd.DataFrame(sizes), "size", ["The deciding figure per year against the spacing of trenches, and the widest spacing that meets the target before the first miss:",
                                       "limit meets it, missed does not, and they are 0.02 % or less apart; shown and not shown likewise for the upper end of the interval.",
                                       "Spacing m; load m d, days."])
    print("%d replays" % WORST["replays"])
    if CHECK:
        print("Taylor series against DOP853: %.1e m" % WORST["taylor"])


if __name__ == "__main__":
    main()
