/* Roots of an integer polynomial by MPSolve (secular equation) to 53 bits.
 * Usage: roots_mpsolve NAME POLYNOMIAL; writes "roots NAME METHOD µs re im …". */
#include <gmp.h>
#include <mps/mps.h>

#include "clock.h"

static long degree;
static mpq_t *coefficient;
static mpq_t zero;
static cplx_t *roots;

static void solve(void *unused) {
  (void)unused;
  mps_context *s = mps_context_new();
  mps_monomial_poly *p = mps_monomial_poly_new(s, degree);
  double *radius = NULL;
  for (long i = 0; i <= degree; i++) mps_monomial_poly_set_coefficient_q(s, p, i, coefficient[i], zero);
  mps_context_set_input_poly(s, MPS_POLYNOMIAL(p));
  mps_context_select_algorithm(s, MPS_ALGORITHM_SECULAR_GA);
  mps_context_set_output_goal(s, MPS_OUTPUT_GOAL_APPROXIMATE);
  mps_context_set_output_prec(s, 53);
  mps_mpsolve(s);
  must(!mps_context_has_errors(s), "MPSolve failed");
  free(roots);
  roots = NULL;
  mps_context_get_roots_d(s, &roots, &radius);
  free(radius);
  mps_monomial_poly_free(s, MPS_POLYNOMIAL(p));
  mps_context_free(s);
}

int main(int argc, char **argv) {
  must(argc == 3, "usage: roots_mpsolve NAME POLYNOMIAL");
  FILE *f = open_or_stop(argv[2]);
  must(fscanf(f, "%ld", &degree) == 1, "no polynomial");
  coefficient = malloc((degree + 1) * sizeof *coefficient);
  mpq_init(zero);
  for (long i = 0; i <= degree; i++) {
    mpq_init(coefficient[i]);
    must(mpq_inp_str(coefficient[i], f, 10) > 0, "no coefficient");
  }
  double time = best(solve, NULL);
  printf("roots %s secular %.3f", argv[1], time);
  for (long i = 0; i < degree; i++) printf(" %.17g %.17g", cplx_Re(roots[i]), cplx_Im(roots[i]));
  printf("\n");
  return 0;
}
