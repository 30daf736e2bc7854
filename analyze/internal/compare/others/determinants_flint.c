/* det(G + s C) by FLINT: as a characteristic polynomial, and as the determinant
 * of a matrix of polynomials where that is small enough to wait for.
 * Usage: determinants_flint NAME PENCIL; writes "det NAME METHOD µs c0 c1 …". */
#include <flint/flint.h>
#include <flint/fmpq_mat.h>
#include <flint/fmpq_poly.h>
#include <flint/fmpz.h>
#include <flint/fmpz_mat.h>
#include <flint/fmpz_poly.h>
#include <flint/fmpz_poly_mat.h>

#include "clock.h"

static fmpq_mat_t a; /* -C^-1 G */
static fmpz_poly_mat_t m;
static fmpq_poly_t charpoly;
static fmpz_poly_t det;

static void by_charpoly(void *unused) {
  (void)unused;
  fmpq_mat_charpoly(charpoly, a);
}

static void by_polynomials(void *unused) {
  (void)unused;
  fmpz_poly_mat_det(det, m);
}

static void print_coefficients(const fmpq_poly_t p) {
  fmpq_t c;
  fmpq_init(c);
  for (long i = 0; i < fmpq_poly_length(p); i++) {
    fmpq_poly_get_coeff_fmpq(c, p, i);
    printf(" ");
    fmpq_print(c);
  }
  printf("\n");
}

int main(int argc, char **argv) {
  must(argc == 3, "usage: determinants_flint NAME PENCIL");
  FILE *f = open_or_stop(argv[2]);
  long n, count;
  must(fscanf(f, "%ld %ld", &n, &count) == 2, "no pencil");
  fmpz_mat_t g, c;
  fmpz_mat_init(g, n, n);
  fmpz_mat_init(c, n, n);
  fmpz_poly_mat_init(m, n, n);
  for (long k = 0; k < count; k++) {
    long row, col;
    must(fscanf(f, "%ld %ld", &row, &col) == 2, "no entry");
    must(fmpz_fread(f, fmpz_mat_entry(g, row, col)) > 0, "no G");
    must(fmpz_fread(f, fmpz_mat_entry(c, row, col)) > 0, "no C");
    fmpz_poly_set_coeff_fmpz(fmpz_poly_mat_entry(m, row, col), 0, fmpz_mat_entry(g, row, col));
    fmpz_poly_set_coeff_fmpz(fmpz_poly_mat_entry(m, row, col), 1, fmpz_mat_entry(c, row, col));
  }
  fmpq_mat_init(a, n, n);
  must(fmpq_mat_solve_fmpz_mat(a, c, g), "C is singular");
  fmpq_mat_neg(a, a);
  fmpq_poly_init(charpoly);
  double time = best(by_charpoly, NULL);
  fmpz_t factor;
  fmpz_init(factor);
  fmpz_mat_det(factor, c);
  fmpq_poly_scalar_mul_fmpz(charpoly, charpoly, factor);
  printf("det %s charpoly %.3f", argv[1], time);
  print_coefficients(charpoly);
  if (n <= 50) {
    fmpz_poly_init(det);
    time = best(by_polynomials, NULL);
    printf("det %s polynomial-matrix %.3f", argv[1], time);
    fmpq_poly_set_fmpz_poly(charpoly, det);
    print_coefficients(charpoly);
  }
  return 0;
}
