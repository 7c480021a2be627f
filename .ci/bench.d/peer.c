/* The workloads in plain C and, where it has them, with GSL. Reads the name of
   one workload a line and prints what it took, as the other sides do. */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <time.h>
#ifdef WITH_GSL
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

#ifdef WITH_GSL
static double debye(void) {
	static double out[1000000];
	double s = 0;
	for (int i = 0; i < 1000000; i++) {
		double x = 343 / (1 + 999e-6 * i);
		out[i] = 4 * gsl_sf_debye_3(x) - 3 * x / expm1(x);
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
	{"g C, loop", phonons, 1},
#ifdef WITH_GSL
	{"a GSL, gsl_sf_debye_3", debye, 1},
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
