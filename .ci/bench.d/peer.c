/* The workloads in plain C and, where it has them, with GSL. Reads the name of
   one workload a line and prints what it took, as the other sides do. */
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <time.h>
#ifdef WITH_GSL
#include <gsl/gsl_matrix.h>
#include <gsl/gsl_multifit_nlinear.h>
#include <gsl/gsl_randist.h>
#include <gsl/gsl_rng.h>
#include <gsl/gsl_sf_debye.h>
#include <gsl/gsl_sf_fermi_dirac.h>
#endif

static const double R = 8.31446261815324;

/* Every tenth temperature; the driver is told by PART. */
static double levels(void) {
	enum { n = 10000000 };
	static double *e, *g;
	if (!e) {
		e = malloc(n * sizeof *e);
		g = malloc(n * sizeof *g);
		for (int i = 0; i < n; i++) {
			double whole;
			e[i] = 5000 * modf(i * 0.6180339887498949, &whole);
			g[i] = 1 + i % 7;
		}
	}
	double s = 0;
	for (int k = 0; k < 100; k += 10) {
		double b = 1 / (100 + 7.0 * k), z = 0, z1 = 0, z2 = 0;
		for (int i = 0; i < n; i++) {
			double y = e[i] * b, w = g[i] * exp(-y);
			z += w;
			z1 += w * y;
			z2 += w * y * y;
		}
		double u = z1 / z;
		s += log(z) + u + z2 / z - u * u;
	}
	return s;
}

static double phonons(void) {
	enum { n = 20000 };
	static double x1[n], gw[n];
	for (int i = 0; i < n; i++) {
		x1[i] = 400.0 * i / (n - 1);
		gw[i] = 3 * x1[i] * x1[i] / 64e6 * 400 / (n - 1) / (i == n - 1 ? 2 : 1);
	}
	double s = 0;
	for (int k = 0; k < 500; k++) {
		double b = 1 / (5 + 2.0 * k), c = 0;
		for (int i = 1; i < n; i++) {
			double x = x1[i] * b, e = exp(-x), d = 1 - e;
			c += gw[i] * x * x * e / (d * d);
		}
		s += c;
	}
	return 3 * R * s;
}

/* The Ising model, 512 spins at once: sites coloured like a chessboard, the
   spins of one colour in the bits of words, eight words in a vector, random
   numbers of xoshiro256++ in eight lanes. */
typedef uint64_t lanes __attribute__((vector_size(64)));
enum { L = 256, groups = L * L / 2 / 512 };
static lanes ra, rb, rc, rd, colour[2][groups], beside[groups];
static uint64_t first[64], second[64]; /* binary digits of p and p^2 */

static inline lanes random512(void) {
	lanes sum = ra + rd, result = (sum << 23 | sum >> 41) + ra, t = rb << 17;
	rc ^= ra;
	rd ^= rb;
	rb ^= rc;
	ra ^= rd;
	rc ^= t;
	rd = rd << 45 | rd >> 19;
	return result;
}

/* The second neighbours in the row: a row is two words. */
static void shift(const lanes *other, int odd) {
	const uint64_t *o = (const uint64_t *)other;
	uint64_t *s = (uint64_t *)beside;
	for (int r = 0; r < L; r++, o += 2, s += 2) {
		if ((r & 1) != odd) {
			s[0] = o[0] >> 1 | o[1] << 63;
			s[1] = o[1] >> 1 | o[0] << 63;
		} else {
			s[0] = o[0] << 1 | o[1] >> 63;
			s[1] = o[1] << 1 | o[0] >> 63;
		}
	}
}

static void half(int odd) {
	lanes *own = colour[odd], *other = colour[!odd];
	shift(other, odd);
	for (int i = 0; i < groups; i++) {
		lanes x = own[i], here = other[i];
		lanes a = x ^ __builtin_shuffle(other[(i + groups - 1) % groups], here, (lanes){6, 7, 8, 9, 10, 11, 12, 13});
		lanes b = x ^ __builtin_shuffle(here, other[(i + 1) % groups], (lanes){2, 3, 4, 5, 6, 7, 8, 9});
		lanes c = x ^ here, d = x ^ beside[i];
		lanes flip = (a & b) | (c & d) | ((a ^ b) & (c ^ d)), one = (a ^ b ^ c ^ d) & ~flip, open = ~flip;
		for (int k = 0; k < 64; k++) {
			if (k > 8) {
				uint64_t any = 0;
				for (int j = 0; j < 8; j++) any |= open[j];
				if (!any) break;
			}
			lanes u = random512(), t = (one & first[k]) | (~one & second[k]);
			flip |= open & t & ~u;
			open &= ~(t ^ u);
		}
		own[i] = x ^ flip;
	}
}

static double ising(void) {
	double p = 3 - sqrt(8), q = p * p; /* exp(-4 J/kT) at Tc */
	for (int k = 0; k < 64; k++) {
		p *= 2;
		q *= 2;
		first[k] = p >= 1 ? -1 : 0;
		second[k] = q >= 1 ? -1 : 0;
		p -= p >= 1;
		q -= q >= 1;
	}
	uint64_t z = 1, *seed[] = {(uint64_t *)&ra, (uint64_t *)&rb, (uint64_t *)&rc, (uint64_t *)&rd};
	for (int i = 0; i < 32; i++) { /* SplitMix64 */
		uint64_t y = z += 0x9e3779b97f4a7c15;
		y = (y ^ y >> 30) * 0xbf58476d1ce4e5b9;
		y = (y ^ y >> 27) * 0x94d049bb133111eb;
		seed[i / 8][i % 8] = y ^ y >> 31;
	}
	memset(colour, 255, sizeof colour);
	for (int i = 0; i < 1000; i++) {
		half(0);
		half(1);
	}
	shift(colour[1], 0);
	const uint64_t *x = (uint64_t *)colour[0], *o = (uint64_t *)colour[1], *s = (uint64_t *)beside;
	int disagree = 0, n = L * 2;
	for (int i = 0; i < n; i++)
		disagree += __builtin_popcountll(x[i] ^ o[i]) + __builtin_popcountll(x[i] ^ s[i]) +
			__builtin_popcountll(x[i] ^ o[(i + 2) % n]) + __builtin_popcountll(x[i] ^ o[(i + n - 2) % n]);
	return 2.0 * disagree / (L * L) - 2;
}

#ifdef WITH_GSL
static double debye_of(double x) { return 4 * gsl_sf_debye_3(x) - 3 * x / expm1(x); }

enum { points = 500, parameters = 5 };
static double fit_t[points], fit_c[points], fit_u[points];

static double crystal(double T, double gamma, double theta, double n, double thetaE, double nE) {
	double x = thetaE / T, e = exp(-x);
	return gamma * T + n * R * debye_of(theta / T) + nE * R * x * x * e / ((1 - e) * (1 - e));
}

static int residuals(const gsl_vector *p, void *data, gsl_vector *f) {
	for (int i = 0; i < points; i++)
		gsl_vector_set(f, i, (crystal(fit_t[i], gsl_vector_get(p, 0), gsl_vector_get(p, 1), gsl_vector_get(p, 2), gsl_vector_get(p, 3), gsl_vector_get(p, 4)) - fit_c[i]) / fit_u[i]);
	return GSL_SUCCESS;
}

static double fit(void) {
	for (int i = 0; i < points; i++) {
		fit_t[i] = 2 + 0.6 * i;
		double c = crystal(fit_t[i], 7e-4, 250, 3, 550, 3);
		fit_u[i] = 0.005 * c;
		fit_c[i] = c + fit_u[i] * sqrt(2) * sin(12.9898 * i);
	}
	double start[parameters] = {5e-4, 230, 2.7, 500, 3.2};
	gsl_vector_view p = gsl_vector_view_array(start, parameters);
	gsl_multifit_nlinear_fdf fdf = {.f = residuals, .n = points, .p = parameters};
	gsl_multifit_nlinear_parameters how = gsl_multifit_nlinear_default_parameters();
	gsl_multifit_nlinear_workspace *w = gsl_multifit_nlinear_alloc(gsl_multifit_nlinear_trust, &how, points, parameters);
	int info;
	gsl_multifit_nlinear_init(&p.vector, &fdf, w);
	gsl_multifit_nlinear_driver(100, 1e-10, 1e-10, 0, NULL, NULL, &info, w);
	gsl_matrix *cov = gsl_matrix_alloc(parameters, parameters);
	gsl_multifit_nlinear_covar(gsl_multifit_nlinear_jac(w), 0, cov);
	double theta = gsl_vector_get(w->x, 1);
	gsl_matrix_free(cov);
	gsl_multifit_nlinear_free(w);
	return theta;
}

static double debye(void) {
	static double out[1000000];
	double s = 0;
	for (int i = 0; i < 1000000; i++) {
		double x = 343 / (1 + 999e-6 * i);
		out[i] = debye_of(x);
		s += out[i];
	}
	return 3 * R * s;
}

static int ascending(const void *a, const void *b) {
	double x = *(const double *)a, y = *(const double *)b;
	return (x > y) - (x < y);
}

static double propagation(void) {
	enum { n = 1000000 };
	static double y[n];
	static gsl_rng *r;
	if (!r) r = gsl_rng_alloc(gsl_rng_mt19937);
	for (int i = 0; i < n; i++) {
		double p = 1, s = 0;
		for (int k = 0; k < 6; k++) p *= 1 + 0.1 * k + gsl_ran_gaussian_ziggurat(r, 0.01);
		for (int k = 6; k < 11; k++) {
			double x = 1 + 0.1 * k + gsl_ran_gaussian_ziggurat(r, 0.01);
			s += x / expm1(x);
		}
		y[i] = R * log(p) + s;
	}
	qsort(y, n, sizeof *y, ascending);
	return y[(int)(0.975 * n)] - y[(int)(0.025 * n)];
}

static double fermi(void) {
	double s = 0;
	for (int i = 0; i < 100000; i++) s += gsl_sf_fermi_dirac_half(-10 + 60 * (i + 0.5) / 100000);
	return s;
}
#endif

static struct { const char *name; double (*run)(void); double part; } ready[] = {
	{"b C, loop", levels, 10},
	{"f C, 512 spins at once", ising, 1},
	{"g C, loop", phonons, 1},
#ifdef WITH_GSL
	{"a GSL, gsl_sf_debye_3", debye, 1},
	{"c GSL, gsl_multifit_nlinear", fit, 1},
	{"h GSL, ziggurat and qsort", propagation, 1},
	{"i1 GSL, gsl_sf_fermi_dirac_half", fermi, 1},
#endif
};

static double now(void) {
	struct timespec t;
	clock_gettime(CLOCK_MONOTONIC, &t);
	return t.tv_sec + 1e-9 * t.tv_nsec;
}

static double cpu(void) {
	struct rusage r;
	getrusage(RUSAGE_SELF, &r);
	return r.ru_utime.tv_sec + r.ru_stime.tv_sec + 1e-6 * (r.ru_utime.tv_usec + r.ru_stime.tv_usec);
}

int main(int argc, char **argv) {
	int count = sizeof ready / sizeof *ready;
	if (argc > 1 && !strcmp(argv[1], "list")) {
		for (int i = 0; i < count; i++) puts(ready[i].name);
		return 0;
	}
	char line[100];
	while (fgets(line, sizeof line, stdin)) {
		line[strcspn(line, "\n")] = 0;
		for (int i = 0; i < count; i++) {
			if (strcmp(ready[i].name, line)) continue;
			if (ready[i].part == 1) ready[i].run(); /* warm */
			double value = 0, c = cpu(), start = now();
			int n = 0;
			while (n == 0 || now() - start < 0.05) {
				value = ready[i].run();
				n++;
			}
			double k = ready[i].part / n;
			printf("{\"name\": \"%s\", \"wall\": %g, \"cpu\": %g, \"value\": %.17g}\n", line, (now() - start) * k, (cpu() - c) * k, value);
			fflush(stdout);
		}
	}
}
