#!/usr/bin/env python3
"""Reference table for the engine with a drain that carries the square of its head, made with a general-purpose integrator.

Run:  /usr/bin/python3 testdata/ref/quadratic.py > testdata/ref/quadratic.csv     (half a minute; SciPy, NumPy, mpmath from Debian 12)

Nothing here shares code with the engine. The equations, S in mm, t in days, fluxes in mm/d:

    an outlet carries        q(S) = min(k*u + c*u^2, m), u = max(0, S - z)     k in 1/d, c in 1/(mm d), invert z in mm, ceiling m in mm/d
    cover                    dS1/dt = r - seepage(S1) - percolation(S1) - drains(S1)
    deep                     dS2/dt = percolation(S1) + lateral - seepage(S2) - drains(S2)

Every model has one drain of the cover with c > 0, without a ceiling. At its capacity with a positive balance a store is held and the
surplus counted (cover: overflow, deep: refused). At zero with a negative balance the cover is held and the unmet demand counted.

Method: scipy.integrate.solve_ivp (DOP853: Hairer, Norsett & Wanner 1993), restarted at every breakpoint by terminal events.
All integrated fluxes are extra unknowns of the same system. The event time that solve_ivp reads off its interpolant is
refined by integrating up to it and two Newton steps.

Cross-check: every row is computed again with the Taylor series of the solution at 30 digits (mpmath): its coefficients follow
from the equations one by one, and events are found by bracketing on the series. The largest difference is stated in the header
of the table. Plain Runge-Kutta in small steps, which locates no event, guards against one that both would miss.
"""
import datetime
import platform
import sys

import mpmath as mp
import numpy as np
import scipy
from scipy.integrate import solve_ivp

SEED = 40417
MODELS = 72
STEPS = 8
INF = float("inf")
mp.mp.dps = 30

# The unknowns of the system.
S1, S2, SEEP, PERC, DRAINS, OVER, UNMET, DSEEP, DDRAINS, REFUSED = range(10)


class Store:
    """Outlets are (rate, square, invert, ceiling, index of the unknown that collects their flow)."""

    def __init__(self, capacity, outlets):
        self.capacity, self.outlets = capacity, outlets
        edges = {0.0}
        for k, c, z, m, _ in outlets:
            if (k > 0 or c > 0) and m > 0:
                edges.add(z)
                if m < INF:
                    edges.add(z + m / k)
        self.edges = sorted(e for e in edges if e < capacity) + [capacity]

    def total(self, s):
        return sum(min(k * max(0.0, s - z) + c * max(0.0, s - z) ** 2, m) for k, c, z, m, _ in self.outlets)

    def segment(self, s, up):
        """The segment that holds s; at an edge the upper one if up, else the lower."""
        n = len(self.edges) - 1
        for i in range(n):
            if s < self.edges[i + 1] or (s == self.edges[i + 1] and not up) or i == n - 1:
                return i


class System:
    """y' = M y + c + q*(S1 - z)^2 while both stores stay in their segments."""

    def __init__(self):
        self.M, self.c, self.q, self.z = np.zeros((10, 10)), np.zeros(10), np.zeros(10), 0.0

    def slope(self, y):
        return self.M @ y + self.c + self.q * (y[S1] - self.z) ** 2

    def outlets(self, store, i, row, column):
        """Takes what leaves store in segment i from row and adds it to the collectors."""
        lo, hi = store.edges[i], store.edges[i + 1]
        mid = lo + 1 if hi == INF else (lo + hi) / 2
        for k, c, z, m, to in store.outlets:
            if m == 0 or mid < z:
                continue
            for sign, at in ((-1, row), (1, to)):
                if k * (mid - z) > m:
                    self.c[at] += sign * m
                    continue
                self.M[at, column] += sign * k
                self.c[at] -= sign * k * z
                if c > 0:
                    self.q[at] += sign * c
                    self.z = z


class Model:
    def __init__(self, cover, deep, lateral):
        self.cover, self.deep, self.lateral = cover, deep, lateral
        self.pk, _, _, self.pm, _ = cover.outlets[1]

    def inflow(self, s1):
        return min(self.pk * s1, self.pm) + self.lateral

    def system(self, r, a, b):
        """With the cover in state a and the deep store in state b: a segment number, 'full' or 'empty'. A held store stays where
        it is, and what it cannot take or give is collected."""
        s = System()
        if a == "empty":
            s.c[UNMET] = -r
        else:
            row = OVER if a == "full" else S1
            s.c[row] += r
            s.outlets(self.cover, len(self.cover.edges) - 2 if a == "full" else a, row, S1)
        row = REFUSED if b == "full" else S2
        s.c[row] += self.lateral + s.c[PERC]
        s.M[row, S1] += s.M[PERC, S1]
        s.outlets(self.deep, len(self.deep.edges) - 2 if b == "full" else b, row, S2)
        return s

    def start(self, r, s1, s2):
        """The states of both stores at the beginning of a step."""
        cap = self.cover.capacity
        d1 = r - self.cover.total(s1)
        if s1 == 0 and r < 0:
            a = "empty"
        elif s1 == cap and d1 > 0:
            a = "full"
        else:
            a = self.cover.segment(s1, d1 > 0)
        grows = 0.0 if a in ("empty", "full") or self.pk * s1 > self.pm else d1
        d2 = self.inflow(s1) - self.deep.total(s2)
        if d2 == 0:
            d2 = grows
        b = "full" if s2 == self.deep.capacity and d2 > 0 else self.deep.segment(s2, d2 > 0)
        return a, b


class Dense:
    """Advances the system with solve_ivp. Events are (weight of S1, weight of S2, threshold, direction)."""

    number = float

    def __init__(self, method="DOP853", rtol=2e-13, atol=1e-13):
        self.opt = dict(method=method, rtol=rtol, atol=atol)

    def advance(self, s, y, t):
        return solve_ivp(lambda _, v: s.slope(v), (0, t), y, **self.opt).y[:, -1]

    def first(self, s, y, t, events):
        """Time and number of the first event, or None."""
        fns = []
        for w1, w2, off, direction in events:
            def g(_, v, w1=w1, w2=w2, off=off):
                return w1 * v[S1] + w2 * v[S2] - off
            g.terminal, g.direction = True, direction
            fns.append(g)
        sol = solve_ivp(lambda _, v: s.slope(v), (0, t), y, events=fns, **self.opt)
        if sol.status != 1:
            return None
        i = next(i for i, e in enumerate(sol.t_events) if len(e))
        te = float(sol.t_events[i][0])
        w1, w2, off, _ = events[i]
        for _ in range(2):
            v = self.advance(s, y, te) if te > 0 else y
            d = s.slope(v)
            slope = w1 * d[S1] + w2 * d[S2]
            if slope == 0:
                break
            te = min(max(te - (w1 * v[S1] + w2 * v[S2] - off) / slope, 0.0), t)
        return te, i


class Taylor:
    """The same by the Taylor series of all unknowns at 30 digits, in steps over which 40 terms are enough. The caller sees to it
    that each event is passed at most once."""

    number = mp.mpf
    terms = 40

    def series(self, s, y, most):
        """Coefficients of the unknowns about y, and a time, at most most, for which they serve."""
        M = [[(j, mp.mpf(float(s.M[i, j]))) for j in (S1, S2) if s.M[i, j]] for i in range(10)]
        c, q, z = [mp.mpf(float(v)) for v in s.c], [mp.mpf(float(v)) for v in s.q], mp.mpf(float(s.z))
        out = [[mp.mpf(v)] for v in y]
        head = [out[S1][0] - z]
        for k in range(self.terms):
            square = mp.fsum(head[i] * head[k - i] for i in range(k + 1)) if any(q) else mp.mpf(0)
            for i in range(10):
                v = mp.fsum(m * out[j][k] for j, m in M[i]) + q[i] * square + (c[i] if k == 0 else 0)
                out[i].append(v / (k + 1))
            head.append(out[S1][k + 1])
        step = most
        for n in (self.terms, self.terms - 1):
            for i in range(10):
                if out[i][n]:
                    step = min(step, (mp.mpf(10) ** -26 / abs(out[i][n])) ** (mp.mpf(1) / n))
        return out, step

    def pieces(self, s, y, t):
        """The pieces of the way from y through the time t: start, series, length."""
        at = mp.mpf(0)
        while at < t:
            out, step = self.series(s, y, t - at)
            yield at, out, step
            y = [mp.polyval(o[::-1], step) for o in out]
            at += step

    def advance(self, s, y, t):
        for _, out, step in self.pieces(s, y, mp.mpf(t)):
            y = [mp.polyval(o[::-1], step) for o in out]
        return np.array(y, dtype=object)

    def first(self, s, y, t, events):
        t = mp.mpf(t)
        for at, out, step in self.pieces(s, y, t):
            best = None
            for n, (w1, w2, off, direction) in enumerate(events):
                p = [direction * (w1 * a + w2 * b) for a, b in zip(out[S1], out[S2])][::-1]
                p[-1] -= direction * mp.mpf(float(off))
                lo, hi = mp.mpf(0), step
                if mp.polyval(p, hi) <= 0 or (at == 0 and p[-1] >= 0):
                    continue
                for _ in range(110):
                    x = (lo + hi) / 2
                    if mp.polyval(p, x) > 0:
                        hi = x
                    else:
                        lo = x
                if best is None or hi < best[0]:
                    best = (hi, n)
            if best:
                return at + best[0], best[1]
        return None


def step(model, solver, r, days, s1, s2, count=None):
    """One step of constant net input r (mm/d) from the storages s1, s2: the ten unknowns at its end."""
    number = solver.number
    y = np.array([number(0)] * 10, dtype=object if number is mp.mpf else float)
    y[S1], y[S2] = number(s1), number(s2)
    a, b = model.start(r, s1, s2)
    left, log, heading = number(days), [], 0
    ce, de = model.cover.edges, model.deep.edges
    while left > 0:
        if len(log) > 200:
            raise RuntimeError("too many events: %s" % log[-6:])
        s = model.system(r, a, b)
        rate = s.slope(y)
        edges = []
        if a not in ("full", "empty"):
            if rate[S1] > 0 and ce[a + 1] < INF:
                edges.append(((1, 0, ce[a + 1], 1), "cover", a + 1))
            if rate[S1] < 0:
                edges.append(((1, 0, ce[a], -1), "cover", a))
        turn = None
        if b == "full":
            enough = model.deep.total(model.deep.capacity) - s.c[PERC] - model.lateral
            edges.append(((s.M[PERC, S1], 0, enough, -1), "let go", None))
        else:
            # The inflow is monotone over the whole step, so the deep store turns at most once in it, and after a turn or
            # after letting go it keeps its direction. Only the edge it is heading for can be reached.
            grows = s.M[S2, S1] * rate[S1]
            way = heading or np.sign(float(rate[S2])) or np.sign(float(grows))
            if way > 0 and de[b + 1] < INF:
                edges.append(((0, 1, de[b + 1], 1), "deep", b + 1))
            if way < 0 and b > 0:
                edges.append(((0, 1, de[b], -1), "deep", b))
            if not heading and rate[S2] * grows < 0:
                turn = (s.M[S2, S1], s.M[S2, S2], -s.c[S2], 1 if grows > 0 else -1)
        # Up to the turning point of the deep store first: on either side of it the store is monotone.
        t, hit = left, None
        if turn:
            found = solver.first(s, y, left, [turn])
            if found:
                t, hit = found[0], "turn"
        if t > 0:
            found = solver.first(s, y, t, [e[0] for e in edges])
            if found:
                t, hit = found[0], edges[found[1]]
            y = solver.advance(s, y, t) if t > 0 else y
        left = left - t
        if hit is None:
            break
        if hit == "turn":
            log.append("turn on the curve" if s.q.any() else "turn")
            heading = turn[3]
            continue
        (_, _, at, direction), store, edge = hit
        curve = " on the curve" if s.q.any() else ""
        if store == "let go":
            b, heading = len(de) - 2, -1
            log.append("deep lets go" + curve)
        elif store == "cover":
            y[S1] = number(at)
            bent = s.q.any()
            if direction > 0:
                a = "full" if edge == len(ce) - 1 else edge
            else:
                a = "empty" if edge == 0 else edge - 1
            bends = a not in ("full", "empty") and model.system(r, a, b).q.any()
            log.append("cover full" if a == "full" else "cover empty" if a == "empty" else "up through the invert of the square" if bends and
                       not bent else "down through the invert of the square" if bent and not bends else "cover edge" + curve)
        else:
            y[S2] = number(at)
            if direction > 0:
                b = "full" if edge == len(de) - 1 else edge
            else:
                b = max(edge - 1, 0)
            log.append("deep full" + curve if b == "full" else "deep edge" + curve)
    # Rounding must not leave a store outside the segment it is in.
    out = np.array([float(v) for v in y])
    out[S1] = min(max(out[S1], 0.0), model.cover.capacity)
    out[S2] = min(max(out[S2], 0.0), model.deep.capacity)
    if count is not None:
        count.append((log, a, b))
    return out


def random_model(rng, number):
    """A model in which the invert of the square, the other breakpoints, capacities and held states are met often."""
    def rate(lo, hi):
        return float(np.exp(rng.uniform(np.log(lo), np.log(hi))))

    fast = 20.0 if number % 5 == 0 else 0.5
    ccap = float(rng.uniform(40, 250)) if rng.random() < 0.5 else INF
    dcap = float(rng.uniform(5, 90)) if rng.random() < 0.6 else INF
    ctop, dtop = min(ccap, 150.0), min(dcap, 100.0)
    seep = rate(1e-4, fast) if rng.random() < 0.7 else 0.0
    perc = rate(1e-3, fast)
    pceil = float(rng.uniform(0.05, 0.8)) * perc * ctop if rng.random() < 0.35 else INF
    z = 0.0 if rng.random() < 0.2 else float(rng.uniform(0, 0.6)) * ctop
    k = 0.0 if rng.random() < 0.25 else rate(1e-2, fast)
    square = rate(1e-5, 1.0 if number % 5 == 0 else 0.05)
    drains = [(k, square, z, INF)]
    for low in (True, False):          # linear drains below and above the one with a square
        if rng.random() < 0.5:
            lk, lz = rate(1e-2, fast), float(rng.uniform(0, z) if low else rng.uniform(z, 0.9 * ctop))
            lm = float(rng.uniform(0.1, 0.9)) * lk * (ctop - lz) if rng.random() < 0.4 else INF
            drains.insert(int(rng.integers(0, len(drains) + 1)), (lk, 0.0, lz, lm))
    dseep = rate(1e-4, fast / 2) if rng.random() < 0.9 else 0.0
    if number % 6 == 0:                # the rate of the linear outlets of the cover that flow below the square
        dseep = seep + perc
    dd = []
    for _ in range(int(rng.integers(0, 3))):
        dk, dz = rate(5e-3, fast / 2), float(rng.uniform(0, 0.7)) * dtop
        m = float(rng.uniform(0.1, 0.9)) * dk * (dtop - dz) if rng.random() < 0.4 else INF
        dd.append((dk, 0.0, dz, m))
    if dseep == 0 and not dd and dcap == INF:
        dseep = 0.05
    lateral = float(rng.uniform(0, 3)) if rng.random() < 0.4 else 0.0
    cover = Store(ccap, [(seep, 0.0, 0.0, INF, SEEP), (perc, 0.0, 0.0, pceil, PERC)] + [d + (DRAINS,) for d in drains])
    deep = Store(dcap, [(dseep, 0.0, 0.0, INF, DSEEP)] + [d + (DDRAINS,) for d in dd])
    return Model(cover, deep, lateral), (ccap, seep, perc, pceil, drains, dcap, dseep, dd, lateral)


def upper_root(model, r, z, square):
    """The storage at which the cover rests on the curve when no edge is in the way, or None."""
    i = model.cover.segment(z, True)
    s = model.system(r, i, 0)
    # M*S + c + q*(S - z)^2 = 0 with S = z + u
    A, B, C = s.M[S1, S1] * z + s.c[S1], -s.M[S1, S1], -s.q[S1]
    disc = B * B / 4 + A * C
    return z + (np.sqrt(disc) - B / 2) / C if disc >= 0 else None


def rough(cases, parts=20000):
    """All steps again in many small ones (Runge-Kutta, stores cut off at zero and capacity after each), which knows nothing of
    segments or events: it would show an event that was missed."""
    n = len(cases)
    tables = []
    for pick in (lambda m: m.cover, lambda m: m.deep):
        w = max(len(pick(m).outlets) for m, *_ in cases)
        k, q, z, c = np.zeros((w, n)), np.zeros((w, n)), np.zeros((w, n)), np.full((w, n), INF)
        for i, (m, *_) in enumerate(cases):
            for o, (ok, oq, oz, om, _) in enumerate(pick(m).outlets):
                k[o, i], q[o, i], z[o, i], c[o, i] = ok, oq, oz, om
        tables.append((k, q, z, c))
    r, days = np.array([x[1] for x in cases]), np.array([x[2] for x in cases])
    lateral = np.array([m.lateral for m, *_ in cases])
    cap1, cap2 = np.array([m.cover.capacity for m, *_ in cases]), np.array([m.deep.capacity for m, *_ in cases])
    y = np.zeros((10, n))
    y[S1], y[S2] = [x[3] for x in cases], [x[4] for x in cases]
    h = days / parts

    def flows(table, s):
        k, q, z, c = table
        u = np.maximum(0, s - z)
        return np.minimum(k * u + q * u * u, c)

    def slope(v):
        q1, q2 = flows(tables[0], v[S1]), flows(tables[1], v[S2])
        d = np.zeros((10, n))
        d[S1], d[S2] = r - q1.sum(0), q1[1] + lateral - q2.sum(0)
        d[SEEP], d[PERC], d[DRAINS], d[DSEEP], d[DDRAINS] = q1[0], q1[1], q1[2:].sum(0), q2[0], q2[1:].sum(0)
        return d

    for _ in range(parts):
        a = slope(y)
        b = slope(y + h / 2 * a)
        c = slope(y + h / 2 * b)
        y = y + h / 6 * (a + 2 * b + 2 * c + slope(y + h * c))
        for amount, s, limit in ((OVER, S1, cap1), (REFUSED, S2, cap2)):
            y[amount] += np.maximum(0, y[s] - limit)
            y[s] = np.minimum(y[s], limit)
        y[UNMET] += np.maximum(0, -y[S1])
        y[S1] = np.maximum(0, y[S1])
    return y.T


def random_start(rng, store, which):
    top = store.capacity if store.capacity < INF else 150.0
    if which == 0:
        return 0.0
    if which == 1 and store.capacity < INF:
        return store.capacity
    if which == 2 and len(store.edges) > 2:
        return store.edges[int(rng.integers(1, len(store.edges) - 1))]
    return float(rng.uniform(0, 1)) * top


COLUMNS = [
    ("model", "number of the model"),
    ("step", "1 to %d; each step starts where the one before it ended" % STEPS),
    ("cover_capacity_mm", "mm; inf = none"),
    ("cover_seepage_per_day", "1/d"),
    ("percolation_per_day", "1/d, invert 0"),
    ("percolation_ceiling_mm_per_day", "mm/d; inf = none"),
    ("cover_drain_rates_per_day", "1/d, joined by ';'"),
    ("cover_drain_squares_per_mm_day", "1/(mm d), in the same order; above 0 for one of them"),
    ("cover_drain_inverts_mm", "mm, in the same order"),
    ("cover_drain_ceilings_mm_per_day", "mm/d, in the same order; inf = none"),
    ("deep_capacity_mm", "mm; inf = none"),
    ("deep_seepage_per_day", "1/d"),
    ("deep_drain_rates_per_day", "1/d, joined by ';', empty = no drain"),
    ("deep_drain_inverts_mm", "mm, in the same order"),
    ("deep_drain_ceilings_mm_per_day", "mm/d, in the same order; inf = none"),
    ("lateral_mm_per_day", "mm/d into the deep store"),
    ("start_cover_mm", "mm, storage at the start of the step"),
    ("start_deep_mm", "mm"),
    ("depth_mm", "mm of net input over the step at constant rate, may be negative"),
    ("days", "d, length of the step"),
    ("end_cover_mm", "mm, storage at the end of the step"),
    ("end_deep_mm", "mm"),
    ("seepage_mm", "mm, flux over the step: cover seepage"),
    ("percolation_mm", "mm, flux over the step: cover to deep"),
    ("drains_mm", "mm, flux over the step: all cover drains together"),
    ("overflow_mm", "mm, flux over the step: surplus of the full cover"),
    ("unmet_mm", "mm, demand over the step that the empty cover could not meet"),
    ("deep_seepage_mm", "mm, flux over the step: deep seepage"),
    ("deep_drains_mm", "mm, flux over the step: all deep drains together"),
    ("refused_mm", "mm, flux over the step: surplus of the full deep store"),
    ("events", "what happened within the step, in order, joined by ';' (for information)"),
]


def main():
    rng = np.random.default_rng(SEED)
    dense, exact = Dense(), Taylor()
    rows, tally, cases, ends = [], {}, [], []
    worst = {"storages": 0.0, "fluxes": 0.0, "balance": 0.0}
    kinds = {}
    lengths = [1 / 1440, 1 / 24, 0.25, 1.0, 1.0, 3.0, 7.0, 31.0]

    def add(key, n=1):
        tally[key] = tally.get(key, 0) + int(n)

    def kind(key, yes):
        kinds[key] = kinds.get(key, 0) + int(yes)

    for number in range(1, MODELS + 1):
        model, p = random_model(rng, number)
        ccap, seep, perc, pceil, cd, dcap, dseep, dd, lateral = p
        z, square = next((d[2], d[1]) for d in cd if d[1] > 0)
        kind("capacity of the cover", ccap < INF)
        kind("capacity of the deep store", dcap < INF)
        kind("percolation ceiling", pceil < INF)
        kind("ceiling of a linear drain", any(d[3] < INF for d in cd + dd))
        kind("linear drain of the cover below the square", any(d[1] == 0 and d[2] < z for d in cd))
        kind("linear drain of the cover above the square", any(d[1] == 0 and d[2] > z for d in cd))
        kind("no linear part of the square", any(d[1] > 0 and d[0] == 0 for d in cd))
        kind("square at the bottom", z == 0)
        kind("deep drains", bool(dd))
        kind("equal linear rates", dseep == seep + perc)
        kind("lateral", lateral > 0)
        s1 = random_start(rng, model.cover, int(rng.integers(0, 5)))
        s2 = random_start(rng, model.deep, int(rng.integers(0, 5)))
        one = lengths[number % len(lengths)] if number % 3 == 0 else None
        for n in range(1, STEPS + 1):
            days = one or (lengths[int(rng.integers(0, len(lengths)))] if rng.random() < 0.6 else float(rng.uniform(0.5, 31)))
            u = rng.random()
            r = 0.0 if u < 0.15 else float(rng.uniform(-15, 0)) if u < 0.4 else float(rng.uniform(0, 8)) if u < 0.7 else float(rng.uniform(8, 80))
            depth = r * days
            r = depth / days
            log = []
            y = step(model, dense, r, days, s1, s2, log)
            x = step(model, exact, r, days, s1, s2)
            cases.append((model, r, days, s1, s2))
            ends.append(y)
            events, a, b = log[0]
            for e in events:
                add(e)
            add("steps without any event", not events)
            add("steps without any event on the curve", not events and s1 > z)
            root = upper_root(model, r, z, square)
            add("steps that start above the upper root of the curve", s1 > z and root is not None and s1 > root)
            add("steps that start on the curve below its upper root", s1 > z and root is not None and s1 < root)
            add("steps that start on a curve without a root", s1 > z and root is None)
            add("steps that end with the cover full", a == "full")
            add("steps that end with the cover empty", a == "empty")
            add("steps that end with the deep store full", b == "full")
            for i, v in enumerate(y):
                e = abs(v - x[i]) / max(abs(x[i]), 1.0)
                worst["storages" if i < 2 else "fluxes"] = max(worst["storages" if i < 2 else "fluxes"], e)
                if e > 1e-9:
                    print("model", number, "step", n, "unknown", i, "differs:", v, x[i], events, file=sys.stderr)
            into = depth + y[UNMET]
            bal1 = into - y[SEEP] - y[PERC] - y[DRAINS] - y[OVER] - (y[S1] - s1)
            bal2 = y[PERC] + lateral * days - y[DSEEP] - y[DDRAINS] - y[REFUSED] - (y[S2] - s2)
            worst["balance"] = max(worst["balance"], abs(bal1) / max(abs(depth), s1, 1), abs(bal2) / max(y[PERC] + lateral * days, s2, 1))
            f = lambda x: repr(float(x))
            j = lambda xs: ";".join(f(x) for x in xs)
            rows.append([str(number), str(n), f(ccap), f(seep), f(perc), f(pceil), j(d[0] for d in cd), j(d[1] for d in cd), j(d[2] for d in cd),
                         j(d[3] for d in cd), f(dcap), f(dseep), j(d[0] for d in dd), j(d[2] for d in dd), j(d[3] for d in dd), f(lateral),
                         f(s1), f(s2), f(depth), f(days), f(y[S1]), f(y[S2]), f(y[SEEP]), f(y[PERC]), f(y[DRAINS]), f(y[OVER]), f(y[UNMET]),
                         f(y[DSEEP]), f(y[DDRAINS]), f(y[REFUSED]), ";".join(events)])
            s1, s2 = y[S1], y[S2]
    worst["rough"] = float(np.max(np.abs(rough(cases) - ends) / np.maximum(np.abs(ends), 1)))
    print("# Reference for the engine with a drain that carries the square of its head: %d random models of %d steps each." % (MODELS, STEPS))
    print("# Source: testdata/ref/quadratic.py, its own right-hand side integrated by scipy.integrate.solve_ivp, DOP853, rtol 2e-13, atol 1e-13,")
    print("# restarted at every breakpoint; held states are explicit. Nothing is shared with the engine under test.")
    print("# Made on %s with Python %s, NumPy %s, SciPy %s, mpmath %s." % (datetime.date.today().isoformat(), platform.python_version(),
                                                                  np.__version__, scipy.__version__, mp.__version__))
    print("# Command: /usr/bin/python3 testdata/ref/quadratic.py > testdata/ref/quadratic.csv")
    print("# Digits: every number is the shortest text that reads back to the same double; seed %d." % SEED)
    print("# Cross-check: all rows again by Taylor series at 30 digits (mpmath). Largest difference relative to max(|value|, 1 mm):")
    print("#   storages %.1e, fluxes %.1e. Largest error of the water balance of a step %.1e." % (worst["storages"], worst["fluxes"], worst["balance"]))
    print("# Against plain Runge-Kutta with cut-off in 20000 parts per step, which knows no events: %.0e, its own" % worst["rough"])
    print("# error, of first order where a store is held.")
    print("# Models with: " + ", ".join("%s %d" % (k, v) for k, v in kinds.items()) + ".")
    print("# Met in the %d steps (edge = an invert or the storage at which a ceiling begins; turn = turning point of the deep store; on the" % len(rows))
    print("# curve = while the drain with a square runs):")
    for k in sorted(tally):
        print("#   %s: %d" % (k, tally[k]))
    print("# Columns:")
    for name, what in COLUMNS:
        print("#   %s: %s" % (name, what))
    print(",".join(name for name, _ in COLUMNS))
    for row in rows:
        print(",".join(row))


if __name__ == "__main__":
    main()
