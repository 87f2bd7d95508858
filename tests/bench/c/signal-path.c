/*
 * The reference for the signal path: int16 codes -> volts -> Butterworth low pass of 4th order (two sections, direct
 * form II transposed) -> hysteresis band -> rising edges, timed at the middle by a straight line -> speed per tooth.
 * Usage: signal-path FILE RATE CUTOFF VOLTS_PER_CODE OPERATE RELEASE TEETH PASSES
 * Prints: ns of CPU per sample of the fastest pass (the first is not counted), edges and sum of speeds of one pass.
 */
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

typedef struct { double b0, b1, b2, a1, a2; } section;

/* Bilinear transform of one section of the Butterworth prototype, edge pre-warped. */
static section design(double rate, double cutoff, double q) {
  double k = tan(M_PI * cutoff / rate), norm = 1 / (1 + k / q + k * k);
  section s;
  s.b0 = k * k * norm; s.b1 = 2 * s.b0; s.b2 = s.b0;
  s.a1 = 2 * (k * k - 1) * norm; s.a2 = (1 - k / q + k * k) * norm;
  return s;
}

static double cpu_seconds(void) {
  struct timespec t;
  clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
  return t.tv_sec + 1e-9 * t.tv_nsec;
}

int main(int argc, char **argv) {
  if (argc != 9) return 2;
  FILE *file = fopen(argv[1], "rb");
  if (!file) return 3;
  fseek(file, 0, SEEK_END);
  long count = ftell(file) / 2;
  rewind(file);
  int16_t *codes = malloc(count * 2);
  if (!codes || fread(codes, 2, count, file) != (size_t)count) return 4;
  fclose(file);
  double rate = atof(argv[2]), cutoff = atof(argv[3]), scale = atof(argv[4]);
  double operate = atof(argv[5]), release = atof(argv[6]), teeth = atof(argv[7]);
  int passes = atoi(argv[8]);
  double mid = (operate + release) / 2;
  section p = design(rate, cutoff, 1 / (2 * sin(M_PI / 8)));
  section q = design(rate, cutoff, 1 / (2 * sin(3 * M_PI / 8)));
  long edges = 0;
  double sum = 0, fastest = INFINITY;
  for (int pass = 0; pass <= passes; pass++) {
    double begin = cpu_seconds();
    double first = codes[0] * scale;
    /* Primed with the steady state of the first sample. */
    double p2 = (p.b2 - p.a2) * first, p1 = (p.b1 - p.a1) * first + p2;
    double q2 = (q.b2 - q.a2) * first, q1 = (q.b1 - q.a1) * first + q2;
    double before = first, middle = 0, last = -1;
    int high = first > mid;
    edges = 0;
    sum = 0;
    for (long i = 0; i < count; i++) {
      double v = codes[i] * scale;
      double y = p.b0 * v + p1;
      p1 = (p.b1 * v + p2) - p.a1 * y;
      p2 = p.b2 * v - p.a2 * y;
      double z = q.b0 * y + q1;
      q1 = (q.b1 * y + q2) - q.a1 * z;
      q2 = q.b2 * y - q.a2 * z;
      if (before < mid && z >= mid) middle = (i - 1) + (mid - before) / (z - before);
      if (!high && z >= operate) {
        high = 1;
        edges++;
        if (last >= 0) sum += 60 * rate / (teeth * (middle - last));
        last = middle;
      } else if (high && z <= release) high = 0;
      before = z;
    }
    double spent = cpu_seconds() - begin;
    if (pass > 0 && spent < fastest) fastest = spent;
  }
  printf("{\"nsPerSample\":%.6f,\"edges\":%ld,\"speedSum\":%.9g}\n", fastest * 1e9 / (double)count, edges, sum);
  return 0;
}
