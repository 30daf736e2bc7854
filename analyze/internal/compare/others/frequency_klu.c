/* One frequency of a sweep by SuiteSparse KLU: new values, factors on the pivots
 * found before, one solution; and the same with pivots chosen anew.
 * Usage: frequency_klu NAME SYSTEM; writes "frequency NAME METHOD µs re im". */
#include <string.h>
#include <suitesparse/klu.h>

#include "clock.h"

static int n, entries, *start, *row;
static double *g, *c, *value, *rhs, *b, omega;
static klu_common common;
static klu_symbolic *symbolic;
static klu_numeric *numeric;

static void values(double w) {
  for (int k = 0; k < entries; k++) {
    value[2 * k] = g[k];
    value[2 * k + 1] = w * c[k];
  }
}

static void solve(void) {
  memcpy(b, rhs, 2 * n * sizeof *b);
  must(klu_z_solve(symbolic, numeric, n, 1, b, &common), "KLU could not solve");
}

static void refactor(void *w) {
  *(double *)w *= 1.0001;
  values(*(double *)w);
  must(klu_z_refactor(start, row, value, symbolic, numeric, &common), "KLU could not factor again");
  solve();
}

static void factor(void *w) {
  *(double *)w *= 1.0001;
  values(*(double *)w);
  klu_z_free_numeric(&numeric, &common);
  must((numeric = klu_z_factor(start, row, value, symbolic, &common)) != NULL, "KLU could not factor");
  solve();
}

int main(int argc, char **argv) {
  must(argc == 3, "usage: frequency_klu NAME SYSTEM");
  FILE *f = open_or_stop(argv[2]);
  int inputs, outputs;
  must(fscanf(f, "%d %d %lf %d %d", &n, &entries, &omega, &inputs, &outputs) == 5, "no system");
  int *r = malloc(entries * sizeof *r), *col = malloc(entries * sizeof *col);
  double *g0 = malloc(entries * sizeof *g0), *c0 = malloc(entries * sizeof *c0);
  start = calloc(n + 2, sizeof *start);
  for (int k = 0; k < entries; k++) {
    must(fscanf(f, "%d %d %lf %lf", &r[k], &col[k], &g0[k], &c0[k]) == 4, "no entry");
    start[col[k] + 1]++;
  }
  for (int j = 0; j < n; j++) start[j + 1] += start[j];
  row = malloc(entries * sizeof *row);
  g = malloc(entries * sizeof *g);
  c = malloc(entries * sizeof *c);
  value = malloc(2 * entries * sizeof *value);
  int *next = malloc((n + 1) * sizeof *next);
  memcpy(next, start, (n + 1) * sizeof *next);
  for (int k = 0; k < entries; k++) {
    int at = next[col[k]]++;
    row[at] = r[k];
    g[at] = g0[k];
    c[at] = c0[k];
  }
  rhs = calloc(2 * n, sizeof *rhs);
  b = calloc(2 * n, sizeof *b);
  double *out = calloc(n, sizeof *out);
  for (int k = 0; k < inputs + outputs; k++) {
    int index;
    double x;
    must(fscanf(f, "%d %lf", &index, &x) == 2, "no vector");
    if (k < inputs) rhs[2 * index] += x;
    else out[index] += x;
  }
  klu_defaults(&common);
  must((symbolic = klu_analyze(n, start, row, &common)) != NULL, "KLU could not analyse");
  double w = omega;
  for (int method = 0; method < 2; method++) {
    w = omega / 1.0001;
    factor(&w);
    double re = 0, im = 0;
    for (int i = 0; i < n; i++) {
      re += out[i] * b[2 * i];
      im += out[i] * b[2 * i + 1];
    }
    double time = best(method ? factor : refactor, &w);
    printf("frequency %s %s %.3f %.17g %.17g\n", argv[1], method ? "factor" : "refactor", time, re, im);
  }
  return 0;
}
