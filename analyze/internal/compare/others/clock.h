/* Processor time, and the best of several batches of a piece of work. */
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

static double now(void) {
  struct timespec t;
  clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
  return t.tv_sec + 1e-9 * t.tv_nsec;
}

/* Microseconds that work takes, at the best of batches of about 20 ms; fewer
 * batches where one takes seconds. */
static double best(void (*work)(void *), void *argument) {
  double start = now(), least, spent = 0;
  long count, batch;
  work(argument);
  least = now() - start;
  count = least < 0.02 ? (long)(0.02 / (least + 1e-9)) + 1 : 1;
  for (batch = 0; batch < 40 && spent < 2; batch++) {
    double each;
    start = now();
    for (long k = 0; k < count; k++) work(argument);
    each = now() - start;
    spent += each;
    each /= count;
    if (each < least) least = each;
  }
  return least * 1e6;
}

static FILE *open_or_stop(const char *name) {
  FILE *f = fopen(name, "r");
  if (!f) {
    perror(name);
    exit(1);
  }
  return f;
}

static void must(int ok, const char *what) {
  if (!ok) {
    fprintf(stderr, "%s\n", what);
    exit(1);
  }
}
