#!/usr/bin/env python3
"""Reference table for the two-store engine, made with a general-purpose ODE integrator.

Run:  /usr/bin/python3 testdata/ref/engine.py > testdata/ref/engine.csv     (about a minute; SciPy, NumPy and mpmath from Debian 12)

Nothing here shares code with the engine. The equations, S in mm, t in days, rates k in 1/d, fluxes in mm/d:

    an outlet carries        q(S) = min(k*max(0, S - z), m)         z: invert, mm; m: ceiling, mm/d
    cover                    dS1/dt = r - seepage(S1) - percolation(S1) - drains(S1)
    deep                     dS2/dt = percolation(S1) + lateral - seepage(S2) - drains(S2)

At its capacity with a positive balance a store is held and the surplus counted (cover: overflow, deep: refused). At zero
with a negative balance the cover is held and the unmet demand counted.

Method: scipy.integrate.solve_ivp (DOP853: Hairer, Norsett & Wanner 1993), restarted at every breakpoint by terminal events,
because a clipped right-hand side ruins the error control. All integrated fluxes are extra unknowns of the same system. The
event time that solve_ivp reads off its interpolant is refined by integrating up to it and two Newton steps.

Cross-check: every row is computed again from the matrix exponential of the linear system between breakpoints, with mpmath
at 30 digits and bracketed roots. The largest difference found is stated in the header of the table. Plain
Runge-Kutta in small steps, which locates no event, guards against one that both would miss.
"""
import datetime
import platform
import sys

import mpmath as mp
import numpy as np
import scipy
from scipy.integrate import solve_ivp

SEED = 20241
MODELS = 64
STEPS = 8
INF = float("inf")
mp.mp.dps = 30

# The unknowns of the system.
S1, S2, SEEP, PERC, DRAINS, OVER, UNMET, DSEEP, DDRAINS, REFUSED = range(10)


class Store:
    """Outlets are (rate, invert, ceiling, index of the unknown that collects their flow)."""

    def __init__(self, capacity, outlets):
        self.capacity = capacity
        self.outlets = outlets
        edges = {0.0}
        for k, z, m, _ in outlets:
            if k > 0 and m > 0:
                edges.add(z)
                if m < INF:
                    edges.add(z + m / k)
        edges = sorted(e for e in edges if e < capacity)
        self.edges = edges + [capacity]

    def flows(self, i):
        """Each outlet in segment i as (constant, slope, collector): q = constant + slope*S."""
        lo, hi = self.edges[i], self.edges[i + 1]
        mid = lo + 1 if hi == INF else (lo + hi) / 2
        out = []
        for k, z, m, to in self.outlets:
            if k == 0 or m == 0 or mid < z:
                out.append((0.0, 0.0, to))
            elif k * (mid - z) > m:
                out.append((m, 0.0, to))
            else:
                out.append((-k * z, k, to))
        return out

    def total(self, s):
        return sum(min(k * max(0.0, s - z), m) for k, z, m, _ in self.outlets)

    def segment(self, s, up):
        """The segment that holds s; at an edge the upper one if up, else the lower."""
        n = len(self.edges) - 1
        for i in range(n):
            if s < self.edges[i + 1] or (s == self.edges[i + 1] and not up) or i == n - 1:
                return i


class Model:
    def __init__(self, cover, deep, lateral):
        self.cover, self.deep, self.lateral = cover, deep, lateral
        self.pk, _, self.pm, _ = cover.outlets[1]

    def inflow(self, s1):
        return min(self.pk * s1, self.pm) + self.lateral

    def system(self, r, a, b):
        """y' = M y + c with the cover in state a and the deep store in state b: a segment number, 'full' or 'empty'."""
        M, c = np.zeros((10, 10)), np.zeros(10)
        n = len(self.cover.edges) - 2
        if a == "empty":
            c[UNMET] = -r
        else:
            row = S1 if a != "full" else OVER
            c[row] += r
            for const, slope, to in self.cover.flows(n if a == "full" else a):
                c[row] -= const
                M[row, S1] -= slope
                c[to] += const
                M[to, S1] += slope
        row = S2 if b != "full" else REFUSED
        c[row] += self.lateral + c[PERC]
        M[row, S1] += M[PERC, S1]
        for const, slope, to in self.deep.flows(len(self.deep.edges) - 2 if b == "full" else b):
            c[row] -= const
            M[row, S2] -= slope
            c[to] += const
            M[to, S2] += slope
        return M, c

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
    """Advances the linear system with solve_ivp."""

    def __init__(self, method="DOP853", rtol=2e-13, atol=1e-13):
        self.opt = dict(method=method, rtol=rtol, atol=atol)

    def advance(self, M, c, y, t):
        return solve_ivp(lambda _, v: M @ v + c, (0, t), y, **self.opt).y[:, -1]

    def first(self, M, c, y, t, events):
        """Time and number of the first event, or None. An event is (row vector, offset, direction)."""
        fns = []
        for w, off, direction in events:
            def g(_, v, w=w, off=off):
                return w @ v - off
            g.terminal, g.direction = True, direction
            fns.append(g)
        sol = solve_ivp(lambda _, v: M @ v + c, (0, t), y, events=fns, **self.opt)
        if sol.status != 1:
            return None
        i = next(i for i, e in enumerate(sol.t_events) if len(e))
        te = float(sol.t_events[i][0])
        for _ in range(2):
            v = self.advance(M, c, y, te) if te > 0 else y
            w, off, _ = events[i]
            slope = w @ (M @ v + c)
            if slope == 0:
                break
            te = min(max(te - (w @ v - off) / slope, 0.0), t)
        return te, i


class Exponential:
    """The same by the matrix exponential at 30 digits. The caller sees to it that each event is passed at most once."""

    def advance(self, M, c, y, t):
        A = mp.zeros(11, 11)
        for i in range(10):
            for j in (S1, S2):
                A[i, j] = mp.mpf(float(M[i, j])) * t
            A[i, 10] = mp.mpf(float(c[i])) * t
        E = mp.expm(A)
        v = [sum(E[i, j] * y[j] for j in range(10)) + E[i, 10] for i in range(10)]
        return np.array(v, dtype=object)

    def small(self, M, c, y, t):
        A = mp.zeros(3, 3)
        for i in range(2):
            for j in range(2):
                A[i, j] = mp.mpf(float(M[i, j])) * t
            A[i, 2] = mp.mpf(float(c[i])) * t
        E = mp.expm(A)
        z = [y[S1], y[S2], mp.mpf(1)]
        return [sum(E[i, j] * z[j] for j in range(3)) for i in range(2)]

    def first(self, M, c, y, t, events):
        t = mp.mpf(t)
        best = None
        for i, (w, off, direction) in enumerate(events):
            w0, w1, off = mp.mpf(float(w[S1])), mp.mpf(float(w[S2])), mp.mpf(float(off))

            def g(x):
                v = self.small(M, c, y, x)
                return w0 * v[0] + w1 * v[1] - off

            end = g(t)
            if end * direction <= 0:
                continue
            lo, hi = mp.mpf(0), t
            flo, fhi = w0 * y[S1] + w1 * y[S2] - off, end
            if flo * direction >= 0:
                continue
            for n in range(200):     # Illinois variant of false position, with a bisection every third turn
                x = (lo + hi) / 2 if n % 3 == 2 else hi - fhi * (hi - lo) / (fhi - flo)
                f = g(x)
                if f * direction > 0:
                    if n % 3 != 2:
                        flo /= 2
                    hi, fhi = x, f
                else:
                    if n % 3 != 2:
                        fhi /= 2
                    lo, flo = x, f
                if hi - lo < mp.mpf(10) ** -24 * t or f == 0:
                    break
            if best is None or x < best[0]:
                best = (x, i)
        return best


def step(model, solver, r, days, s1, s2, count=None):
    """One step of constant net input r (mm/d) from the storages s1, s2: the ten unknowns at its end."""
    kind = object if isinstance(solver, Exponential) else float
    y = np.array([0.0] * 10, dtype=float)
    y[S1], y[S2] = s1, s2
    if kind is object:
        y = np.array([mp.mpf(float(v)) for v in y], dtype=object)
        days = mp.mpf(days)
    a, b = model.start(r, s1, s2)
    left, log, heading = days, [], 0
    ce, de = model.cover.edges, model.deep.edges
    while left > 0:
        if len(log) > 200:
            raise RuntimeError("too many events: %s" % log[-6:])
        M, c = model.system(r, a, b)
        v1, v2 = np.zeros(10), np.zeros(10)
        v1[S1], v2[S2] = 1, 1
        edge_events = []
        rate = M @ y + c
        if a not in ("full", "empty"):
            if rate[S1] > 0 and ce[a + 1] < INF:
                edge_events.append((v1, ce[a + 1], 1, "cover", a + 1))
            if rate[S1] < 0:
                edge_events.append((v1, ce[a], -1, "cover", a))
        turn = None
        if b == "full":
            q = np.zeros(10)
            q[S1] = M[PERC, S1]
            edge_events.append((q, model.deep.total(model.deep.capacity) - c[PERC] - model.lateral, -1, "let go", None))
        else:
            # The inflow is monotone over the whole step, so the deep store turns at most once in it, and after a turn or
            # after letting go it keeps its direction. Only the edge it is heading for can be reached.
            grows = M[S2, S1] * rate[S1]
            way = heading or np.sign(float(rate[S2])) or np.sign(float(grows))
            if way > 0 and de[b + 1] < INF:
                edge_events.append((v2, de[b + 1], 1, "deep", b + 1))
            if way < 0 and b > 0:
                edge_events.append((v2, de[b], -1, "deep", b))
            if not heading and rate[S2] * grows < 0:
                turn = (np.array([M[S2, j] for j in range(10)]), -c[S2], 1 if grows > 0 else -1)
        # Up to the turning point of the deep store first: on either side of it the store is monotone.
        t, hit = left, None
        if turn:
            found = solver.first(M, c, y, left, [turn])
            if found:
                t, hit = found[0], "turn"
        if t > 0:
            found = solver.first(M, c, y, t, [e[:3] for e in edge_events])
            if found:
                t, hit = found[0], edge_events[found[1]]
            y = solver.advance(M, c, y, t) if t > 0 else y
        left = left - t
        if hit is None:
            break
        if hit == "turn":
            log.append("turn")
            heading = turn[2]
            continue
        _, at, direction, store, edge = hit
        if store == "let go":
            b, heading = len(de) - 2, -1
            log.append("deep lets go")
        elif store == "cover":
            y[S1] = type(y[S1])(at)
            if direction > 0:
                a = "full" if edge == len(ce) - 1 else edge
            else:
                a = "empty" if edge == 0 else edge - 1
            log.append("cover full" if a == "full" else "cover empty" if a == "empty" else "cover edge")
        else:
            y[S2] = type(y[S2])(at)
            if direction > 0:
                b = "full" if edge == len(de) - 1 else edge
            else:
                b = max(edge - 1, 0)
            log.append("deep full" if b == "full" else "deep edge")
    # Rounding must not leave a store outside the segment it is in.
    out = np.array([float(v) for v in y])
    out[S1] = min(max(out[S1], 0.0), model.cover.capacity)
    out[S2] = min(max(out[S2], 0.0), model.deep.capacity)
    if count is not None:
        count.append((log, a, b))
    return out


def random_model(rng, number):
    """A model in which breakpoints, capacities and held states are met often."""
    def rate(lo=1e-4, hi=20.0):
        return float(np.exp(rng.uniform(np.log(lo), np.log(hi))))

    ccap = float(rng.uniform(15, 250)) if rng.random() < 0.7 else INF
    dcap = float(rng.uniform(5, 90)) if rng.random() < 0.75 else INF
    ctop = ccap if ccap < INF else 150.0
    dtop = dcap if dcap < INF else 100.0
    fast = 20.0 if number % 5 == 0 else 0.5
    seep = rate(1e-4, fast) if rng.random() < 0.85 else 0.0
    perc = rate(1e-3, fast)
    pceil = float(rng.uniform(0.05, 0.8)) * perc * ctop if rng.random() < 0.4 else INF
    cd = []
    for _ in range(int(rng.integers(0, 4))):
        k, z = rate(1e-2, fast), float(rng.uniform(0, 0.8)) * ctop
        m = float(rng.uniform(0.1, 0.9)) * k * (ctop - z) if rng.random() < 0.4 else INF
        cd.append((k, z, m))
    dseep = rate(1e-4, fast / 2) if rng.random() < 0.9 else 0.0
    dd = []
    for _ in range(int(rng.integers(0, 3))):
        k, z = rate(5e-3, fast / 2), float(rng.uniform(0, 0.7)) * dtop
        m = float(rng.uniform(0.1, 0.9)) * k * (dtop - z) if rng.random() < 0.4 else INF
        dd.append((k, z, m))
    if dseep == 0 and not dd and dcap == INF:
        dseep = 0.05
    lateral = float(rng.uniform(0, 3)) if rng.random() < 0.4 else 0.0
    cover = Store(ccap, [(seep, 0.0, INF, SEEP), (perc, 0.0, pceil, PERC)] + [d + (DRAINS,) for d in cd])
    deep = Store(dcap, [(dseep, 0.0, INF, DSEEP)] + [d + (DDRAINS,) for d in dd])
    return Model(cover, deep, lateral), (ccap, seep, perc, pceil, cd, dcap, dseep, dd, lateral)


def rough(cases, parts=20000):
    """All steps again in many small ones (Runge-Kutta, stores cut off at zero and capacity after each), which knows nothing of
    segments or events: accurate to about one part in the number of parts, it would show an event that was missed."""
    n = len(cases)
    most = lambda pick: max(len(pick(m).outlets) for m, *_ in cases)
    tables = []
    for pick in (lambda m: m.cover, lambda m: m.deep):
        w = most(pick)
        k, z, c, to = np.zeros((w, n)), np.zeros((w, n)), np.full((w, n), INF), np.zeros((w, n), int)
        for i, (m, *_) in enumerate(cases):
            for o, (ok, oz, om, ot) in enumerate(pick(m).outlets):
                k[o, i], z[o, i], c[o, i], to[o, i] = ok, oz, om, ot
        tables.append((k, z, c, to))
    (k1, z1, c1, _), (k2, z2, c2, _) = tables
    r, days = np.array([x[1] for x in cases]), np.array([x[2] for x in cases])
    lateral = np.array([m.lateral for m, *_ in cases])
    cap1, cap2 = np.array([m.cover.capacity for m, *_ in cases]), np.array([m.deep.capacity for m, *_ in cases])
    y = np.zeros((10, n))
    y[S1], y[S2] = [x[3] for x in cases], [x[4] for x in cases]
    h = days / parts

    def slope(v):
        q1, q2 = np.minimum(k1 * np.maximum(0, v[S1] - z1), c1), np.minimum(k2 * np.maximum(0, v[S2] - z2), c2)
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
    ("cover_drain_rates_per_day", "1/d, joined by ';', empty = no drain"),
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
    dense, exact = Dense(), Exponential()
    rows, tally, cases, ends = [], {}, [], []
    worst = {"storages": 0.0, "fluxes": 0.0, "balance": 0.0}
    kinds = dict(capacity_cover=0, capacity_deep=0, percolation_ceiling=0, drain_ceiling=0, lateral=0, deep_drains=0, cover_drains=0)
    lengths = [1 / 1440, 1 / 24, 0.25, 1.0, 1.0, 3.0, 7.0, 31.0]

    def add(key, n=1):
        tally[key] = tally.get(key, 0) + n

    for number in range(1, MODELS + 1):
        model, p = random_model(rng, number)
        ccap, seep, perc, pceil, cd, dcap, dseep, dd, lateral = p
        kinds["capacity_cover"] += ccap < INF
        kinds["capacity_deep"] += dcap < INF
        kinds["percolation_ceiling"] += pceil < INF
        kinds["drain_ceiling"] += any(d[2] < INF for d in cd + dd)
        kinds["lateral"] += lateral > 0
        kinds["cover_drains"] += bool(cd)
        kinds["deep_drains"] += bool(dd)
        s1 = random_start(rng, model.cover, int(rng.integers(0, 5)))
        s2 = random_start(rng, model.deep, int(rng.integers(0, 5)))
        one = lengths[number % len(lengths)] if number % 3 == 0 else None
        for n in range(1, STEPS + 1):
            days = one or (lengths[int(rng.integers(0, len(lengths)))] if rng.random() < 0.6 else float(rng.uniform(0.5, 31)))
            u = rng.random()
            r = 0.0 if u < 0.2 else float(rng.uniform(-15, 0)) if u < 0.45 else float(rng.uniform(0, 8)) if u < 0.7 else float(rng.uniform(8, 80))
            depth = r * days
            r = depth / days
            log = []
            y = step(model, dense, r, days, s1, s2, log)
            z = step(model, exact, r, days, s1, s2)
            cases.append((model, r, days, s1, s2))
            ends.append(y)
            events, a, b = log[0]
            for e in events:
                add(e)
            add("steps without any event", not events)
            add("steps that end with the cover full", a == "full")
            add("steps that end with the cover empty", a == "empty")
            add("steps that end with the deep store full", b == "full")
            a0, b0 = model.start(r, s1, s2)
            add("steps that start with a full cover let go", s1 == ccap and a0 != "full")
            add("steps that start with a full deep store let go", s2 == dcap and b0 != "full")
            add("steps that start at an inner breakpoint", s1 in model.cover.edges[1:-1] or s2 in model.deep.edges[1:-1])
            add("steps in which a store leaves a segment and comes back",
                any(events.count(k) > 1 for k in ("deep edge",)) or ("deep full" in events and "deep lets go" in events))
            for i, v in enumerate(y):
                e = abs(v - z[i]) / max(abs(z[i]), 1.0)
                worst["storages" if i < 2 else "fluxes"] = max(worst["storages" if i < 2 else "fluxes"], e)
                if e > 1e-9:
                    print("model", number, "step", n, "unknown", i, "differs:", v, z[i], events, file=sys.stderr)
            into = depth + y[UNMET]
            bal1 = into - y[SEEP] - y[PERC] - y[DRAINS] - y[OVER] - (y[S1] - s1)
            bal2 = y[PERC] + lateral * days - y[DSEEP] - y[DDRAINS] - y[REFUSED] - (y[S2] - s2)
            worst["balance"] = max(worst["balance"], abs(bal1) / max(abs(depth), s1, 1), abs(bal2) / max(y[PERC] + lateral * days, s2, 1))
            f = lambda x: repr(float(x))
            j = lambda xs: ";".join(f(x) for x in xs)
            rows.append([str(number), str(n), f(ccap), f(seep), f(perc), f(pceil), j(d[0] for d in cd), j(d[1] for d in cd),
                         j(d[2] for d in cd), f(dcap), f(dseep), j(d[0] for d in dd), j(d[1] for d in dd), j(d[2] for d in dd), f(lateral),
                         f(s1), f(s2), f(depth), f(days), f(y[S1]), f(y[S2]), f(y[SEEP]), f(y[PERC]), f(y[DRAINS]), f(y[OVER]), f(y[UNMET]),
                         f(y[DSEEP]), f(y[DDRAINS]), f(y[REFUSED]), ";".join(events)])
            s1, s2 = y[S1], y[S2]
    worst["rough"] = float(np.max(np.abs(rough(cases) - ends) / np.maximum(np.abs(ends), 1)))
    print("# Reference for the two-store engine: %d random models of %d steps each." % (MODELS, STEPS))
    print("# Source: testdata/ref/engine.py, its own right-hand side integrated by scipy.integrate.solve_ivp, DOP853, rtol 2e-13, atol 1e-13,")
    print("# restarted at every breakpoint; held states are explicit. Nothing is shared with the engine under test.")
    print("# Made on %s with Python %s, NumPy %s, SciPy %s, mpmath %s." % (datetime.date.today().isoformat(), platform.python_version(),
                                                                  np.__version__, scipy.__version__, mp.__version__))
    print("# Command: /usr/bin/python3 testdata/ref/engine.py > testdata/ref/engine.csv")
    print("# Digits: every number is the shortest text that reads back to the same double; seed %d." % SEED)
    print("# Cross-check: all rows again by the matrix exponential at 30 digits (mpmath). Largest difference relative to max(|value|, 1 mm):")
    print("#   storages %.1e, fluxes %.1e. Largest error of the water balance of a step %.1e." % (worst["storages"], worst["fluxes"], worst["balance"]))
    print("# Against plain Runge-Kutta with cut-off in 20000 parts per step, which knows no events: %.0e, its own" % worst["rough"])
    print("# error, of first order where a store is held: 4e-04 was seen with 80000 parts.")
    print("# Models with: " + ", ".join("%s %d" % (k.replace("_", " "), v) for k, v in kinds.items()) + ".")
    print("# Met in the %d steps (edge = an invert or the storage at which a ceiling begins; turn = turning point of the deep store):" % len(rows))
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
