/*
 * The recurrence of the engine's fast path in a plain C loop, to measure the engine against.
 *
 *     gcc -O3 -march=x86-64 -o /tmp/loop testdata/speed/loop.c -lm && /tmp/loop
 *
 * -march=x86-64 is what Go builds for by default. No -ffast-math: it would remove the compensated sums.
 *
 * Two linear stores in series while neither leaves its linear piece, t the step in days, r the net input in mm/d:
 *
 *     du1/dt = r + a0 - lambda u1          u1, u2: storage above the lower end of the piece, mm
 *     du2/dt = b0 + q u1 - mu u2
 *
 * Each step: new storages and integrals of both by coefficients worked out once; both stores tested to be inside their
 * pieces at the end of the step, and the slope of the deep store to have the same sign at both ends, so that it did not turn
 * in between; both integrals added up with compensation (Kahan 1965; Neumaier's variant, 1974); both storages kept.
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

enum { N = 350640, ROUNDS = 40 };

static double now(void)
{
	struct timespec t;
	clock_gettime(CLOCK_MONOTONIC, &t);
	return t.tv_sec + 1e-9 * t.tv_nsec;
}

static inline void add(double *sum, double *carry, double x)
{
	double t = *sum + x;
	if (fabs(*sum) >= fabs(x))
		*carry += (*sum - t) + x;
	else
		*carry += (x - t) + *sum;
	*sum = t;
}

int main(void)
{
	const double t = 1.0 / 24, lambda = 0.011 + 0.0045 + 0.03, q = 0.0045, mu = 0.007, a0 = -0.4, b0 = 0.05;
	const double width1 = 250, width2 = 120;

	/* Exact coefficients; the rates are apart and the step is long enough for the plain formulas to serve here. */
	const double ex = exp(-lambda * t), ey = exp(-mu * t);
	const double f1 = -expm1(-lambda * t) / lambda;      /* integral of exp(-lambda s) over the step */
	const double f2 = -expm1(-mu * t) / mu;
	const double g1 = (t - f1) / lambda, g2 = (t - f2) / mu; /* twice integrated */
	const double c = (ex - ey) / (mu - lambda);          /* response of u2 to u1 = 1 at the start, per unit of q */
	const double ci = (f1 - f2) / (mu - lambda);         /* its integral */
	const double d = (f2 - c) / lambda;                  /* response of u2 to a = 1, per unit of q */
	const double di = (g2 - ci) / lambda;

	double *depth = malloc(N * sizeof *depth), *s1 = malloc(N * sizeof *s1), *s2 = malloc(N * sizeof *s2);
	if (!depth || !s1 || !s2)
		return 1;
	unsigned long long x = 88172645463325252ULL; /* xorshift64 (Marsaglia 2003) */
	for (int i = 0; i < N; i++) {
		x ^= x << 13;
		x ^= x >> 7;
		x ^= x << 17;
		double u = (x >> 11) * 0x1p-53;
		depth[i] = u < 0.8 ? 0.02 : 0.8 * (u - 0.8);
	}

	double best = 1e9, i1 = 0, i2 = 0, k1 = 0, k2 = 0;
	long left = 0;
	for (int round = 0; round < ROUNDS; round++) {
		double u1 = 40, u2 = 30, start = now();
		i1 = i2 = k1 = k2 = 0;
		for (int i = 0; i < N; i++) {
			double a = depth[i] / t + a0;
			double v1 = ex * u1 + f1 * a;
			double v2 = ey * u2 + f2 * b0 + q * (c * u1 + d * a);
			double slope = b0 + q * u1 - mu * u2, end = b0 + q * v1 - mu * v2;
			if (!(v1 >= 0 && v1 <= width1 && v2 >= 0 && v2 <= width2 && slope * end >= 0))
				left++; /* the engine would look closer here */
			add(&i1, &k1, f1 * u1 + g1 * a);
			add(&i2, &k2, f2 * u2 + g2 * b0 + q * (ci * u1 + di * a));
			u1 = v1;
			u2 = v2;
			s1[i] = u1;
			s2[i] = u2;
		}
		double took = now() - start;
		if (took < best)
			best = took;
	}

	/* The integrals must close the balance, or the coefficients above are wrong. */
	double in = 0;
	for (int i = 0; i < N; i++)
		in += depth[i] + a0 * t;
	double error1 = in - lambda * (i1 + k1) - (s1[N - 1] - 40);
	double error2 = b0 * t * N + q * (i1 + k1) - mu * (i2 + k2) - (s2[N - 1] - 30);
	printf("%.2f ns per step (best of %d rounds of %d steps)\n", best / N * 1e9, ROUNDS, N);
	printf("end %.6f %.6f mm, balance errors %.1e %.1e mm, steps to look at closer: %ld in a round\n", s1[N - 1], s2[N - 1], error1, error2, left / ROUNDS);
	return 0;
}
