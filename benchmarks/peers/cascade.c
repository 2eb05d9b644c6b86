/*
 * Photon counting of a ladder of three levels under one Gaussian tone: the same formulation as the kernel for more than two
 * levels (unitaries of order 8 in one table, Hermitian operators turned by one 9×9 matrix a step, flat kicks and
 * corrections, three runs on multiples of the step, extrapolation and its error estimate, and the table's), written as
 * straightforward scalar C. What does not depend on the pulse, and e^{hK} for the three steps, is read (cascade.mjs).
 * Answers lines "seconds" with the seconds per evaluation, figures and error.
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#define MOST 512
#define PLACES 160
#define ENTRIES 4096
typedef struct { int n, row[ENTRIES], col[ENTRIES]; double value[ENTRIES]; } Triples;
typedef struct { double re[9], im[9]; } Unitary;

static int length, blocks, offset[32], seeds, seed[8], figures, base, populations;
static double effect[16][PLACES], diagonal[3][PLACES];
static Triples kick[3], correction;
static double begin, end, peak, fall, delay, e01, e12;
static Unitary table[MOST], coarse[MOST];
static const double INNER = 0.16999052179242813, OUTER = 0.43056815579702629;

static void commute(const double *a, const double *b, double *o) {
  const double s01 = 2 * (a[3] * b[2] - a[2] * b[3]), s12 = 2 * (a[5] * b[4] - a[4] * b[5]), s02 = 2 * (a[7] * b[6] - a[6] * b[7]);
  const double a02 = a[0] + a[1], b02 = b[0] + b[1];
  o[0] = 2 * s01 + s02 - s12, o[1] = 2 * s12 + s02 - s01;
  o[2] = a[0] * b[3] - b[0] * a[3] + (a[7] * b[4] - a[6] * b[5]) - (b[7] * a[4] - b[6] * a[5]);
  o[3] = b[0] * a[2] - a[0] * b[2] - (a[6] * b[4] + a[7] * b[5]) + (b[6] * a[4] + b[7] * a[5]);
  o[4] = a[1] * b[5] - b[1] * a[5] + (a[2] * b[7] - a[3] * b[6]) - (b[2] * a[7] - b[3] * a[6]);
  o[5] = b[1] * a[4] - a[1] * b[4] - (a[2] * b[6] + a[3] * b[7]) + (b[2] * a[6] + b[3] * a[7]);
  o[6] = a02 * b[7] - b02 * a[7] + (a[2] * b[5] + a[3] * b[4]) - (b[2] * a[5] + b[3] * a[4]);
  o[7] = b02 * a[6] - a02 * b[6] - (a[2] * b[4] - a[3] * b[5]) + (b[2] * a[4] - b[3] * a[5]);
}

static void exponential(const double *m, Unitary *u) {
  const double d0 = (2 * m[0] + m[1]) / 3, d1 = (m[1] - m[0]) / 3, d2 = -d0 - d1;
  const double ar = m[2], ai = m[3], br = m[4], bi = m[5], cr = m[6], ci = m[7];
  const double aa = ar * ar + ai * ai, bb = br * br + bi * bi, cc = cr * cr + ci * ci;
  const double pr = ar * br - ai * bi, pi = ar * bi + ai * br;
  const double p = 0.5 * (d0 * d0 + d1 * d1 + d2 * d2) + aa + bb + cc;
  const double q = d0 * d1 * d2 + 2 * (pr * cr + pi * ci) - d0 * bb - d1 * cc - d2 * aa;
  const double last = fmin(75, 12 + 7 * sqrt(1.34 * p));
  double c0 = 0, c1 = 0, c2 = 0.5, even2 = -0.5, odd2 = 0, odd1 = -1, even1 = 0, odd0 = 1.0 / 6, even0 = 0;
  for (int j = 3; j < last; j += 4) {
    const double t3 = p * c1 / (j * (j - 1)) + q * c0 / (j * (j - 1) * (j - 2));
    const double t4 = p * c2 / (j * (j + 1)) + q * c1 / ((j + 1) * j * (j - 1));
    const double t5 = p * t3 / ((j + 2) * (j + 1)) + q * c2 / ((j + 2) * (j + 1) * j);
    const double t6 = p * t4 / ((j + 3) * (j + 2)) + q * t3 / ((j + 3) * (j + 2) * (j + 1));
    odd2 += t3 - t5, even2 += t4 - t6;
    even1 += (j + 2) * t5 - j * t3, odd1 += (j + 1) * t4 - (j + 3) * t6;
    even0 += t3 / (j + 1) - t5 / (j + 3), odd0 += t6 / (j + 4) - t4 / (j + 2);
    c0 = t4, c1 = t5, c2 = t6;
  }
  const double gr = 1 + q * even0, gi = q * odd0, hr = even1, hi = odd1, kr = even2, ki = odd2;
  const double d[3] = {d0, d1, d2}, s[3] = {d0 * d0 + aa + cc, d1 * d1 + aa + bb, d2 * d2 + bb + cc};
  for (int i = 0; i < 3; i++) u->re[4 * i] = gr + hr * d[i] + kr * s[i], u->im[4 * i] = gi + hi * d[i] + ki * s[i];
  const double er[3] = {ar, br, cr}, ei[3] = {ai, bi, ci};
  const double sr[3] = {-d2 * ar + cr * br + ci * bi, -d0 * br + ar * cr + ai * ci, -d1 * cr + pr};
  const double si[3] = {-d2 * ai + ci * br - cr * bi, -d0 * bi + ar * ci - ai * cr, -d1 * ci + pi};
  const int up[3] = {1, 5, 2}, down[3] = {3, 7, 6};
  for (int k = 0; k < 3; k++) {
    const double x = hr * er[k] + kr * sr[k], y = hi * ei[k] + ki * si[k], z = hr * ei[k] + kr * si[k], w = hi * er[k] + ki * sr[k];
    u->re[up[k]] = x - y, u->im[up[k]] = w + z, u->re[down[k]] = x + y, u->im[down[k]] = w - z;
  }
}

static double drive(double t) { return peak * exp(-fall * (t - delay) * (t - delay)); }

static void step(double middle, double h, Unitary *u) {
  const double f0 = 0.5 * h * drive(middle - OUTER * h), f1 = 0.5 * h * drive(middle - INNER * h);
  const double f2 = 0.5 * h * drive(middle + INNER * h), f3 = 0.5 * h * drive(middle + OUTER * h);
  const double spread = 1 / (OUTER * OUTER - INNER * INNER), even = 0.5 * (f1 + f2), odd = 0.5 / INNER * (f2 - f1);
  const double x3 = spread * (0.5 * (f0 + f3) - even), x4 = spread * (0.5 / OUTER * (f3 - f0) - odd);
  const double x1 = even - INNER * INNER * x3, x2 = odd - INNER * INNER * x4;
  double a1[8] = {h * e01, h * e12, x1, 0, x1}, a2[8] = {0, 0, x2, 0, x2}, a3[8] = {0, 0, x3, 0, x3}, a4[8] = {0, 0, x4, 0, x4};
  double l[8], r[8], s1[8], r1[8], s2[8], r2[8], s3[8], m[8];
  for (int k = 0; k < 8; k++) l[k] = a1[k] + a3[k] / 28, r[k] = a2[k] + a4[k] * 3 / 28;
  commute(l, r, s1);
  for (int k = 0; k < 8; k++) s1[k] *= -1.0 / 28, m[k] = (s1[k] - a3[k] / 14) / 3;
  commute(a1, m, r1);
  for (int k = 0; k < 8; k++) l[k] += s1[k], r[k] += r1[k];
  commute(l, r, s2), commute(a2, s1, m);
  for (int k = 0; k < 8; k++) l[k] = a1[k] + 1.25 * s1[k], r[k] = 2 * a3[k] + s2[k] + 0.5 * m[k];
  commute(l, r, r2);
  for (int k = 0; k < 8; k++) {
    const double sum = a1[k] + a3[k] / 12;
    l[k] = sum - 7.0 / 3 * s1[k] - s2[k] / 6, r[k] = 63 * r1[k] + r2[k] - 9 * a2[k] - 2.25 * a4[k], m[k] = sum - 7.0 / 120 * s2[k];
  }
  commute(l, r, s3);
  for (int k = 0; k < 8; k++) s3[k] = m[k] + s3[k] / 360;
  exponential(s3, u);
}

static void tabulate(int count, Unitary *t) {
  const double h = (end - begin) / count;
  const int half = (count + 1) / 2;
  for (int p = 0; p < half; p++) step(begin + (p + 0.5) * h, h, t + p);
  for (int p = half; p < count; p++)
    for (int i = 0; i < 3; i++)
      for (int j = 0; j < 3; j++) t[p].re[3 * i + j] = t[count - 1 - p].re[3 * j + i], t[p].im[3 * i + j] = t[count - 1 - p].im[3 * j + i];
}

static void multiply(const Unitary *a, Unitary *p) {
  Unitary o;
  for (int i = 0; i < 3; i++)
    for (int j = 0; j < 3; j++) {
      double x = 0, y = 0;
      for (int k = 0; k < 3; k++) {
        x += a->re[3 * i + k] * p->re[3 * k + j] - a->im[3 * i + k] * p->im[3 * k + j];
        y += a->re[3 * i + k] * p->im[3 * k + j] + a->im[3 * i + k] * p->re[3 * k + j];
      }
      o.re[3 * i + j] = x, o.im[3 * i + j] = y;
    }
  *p = o;
}

static void superoperator(const Unitary *u, double *m) {
  static const int I[6] = {0, 1, 2, 0, 0, 1}, J[6] = {0, 1, 2, 1, 2, 2};
  for (int r = 0; r < 6; r++) {
    const double *a = u->re + 3 * I[r], *b = u->im + 3 * I[r], *c = u->re + 3 * J[r], *d = u->im + 3 * J[r];
    double *x = m + 9 * (r < 3 ? r : 2 * r - 3), *y = x + 9;
    for (int k = 0; k < 3; k++) x[k] = a[k] * c[k] + b[k] * d[k];
    if (r > 2) for (int k = 0; k < 3; k++) y[k] = b[k] * c[k] - a[k] * d[k];
    for (int e = 0; e < 3; e++) {
      const int k = I[3 + e], l = J[3 + e];
      const double pr = a[k] * c[l] + b[k] * d[l], pi = b[k] * c[l] - a[k] * d[l], qr = a[l] * c[k] + b[l] * d[k], qi = b[l] * c[k] - a[l] * d[k];
      x[3 + 2 * e] = pr + qr, x[4 + 2 * e] = qi - pi;
      if (r > 2) y[3 + 2 * e] = pi + qi, y[4 + 2 * e] = pr - qr;
    }
  }
}

static void add(const Triples *t, double factor, const double *y, double *out) {
  for (int k = 0; k < t->n; k++) out[t->row[k]] += factor * t->value[k] * y[t->col[k]];
}

static void run(int which, double *out) {
  static const int parts[3] = {3, 2, 1}, every[3] = {2, 3, 4};
  const int count = 6 * base / parts[which];
  const double h = (end - begin) / count, factor = every[which] * h * h * h / 24;
  double a[PLACES] = {0}, b[PLACES], m[81], *y = a, *z = b;
  for (int k = 0; k < seeds; k++) y[seed[k]] = 1;
  Unitary lead = {{1, 0, 0, 0, 1, 0, 0, 0, 1}, {0}};
  int fresh = 1;
  for (int n = 0; n < count; n++) {
    Unitary u = table[n * parts[which]];
    for (int k = 1; k < parts[which]; k++) multiply(table + n * parts[which] + k, &u);
    if (fresh) {
      multiply(&u, &lead);
      if (lead.re[3] * lead.re[3] + lead.im[3] * lead.im[3] + lead.re[6] * lead.re[6] + lead.im[6] * lead.im[6] < 1e-13) continue;
      u = lead, fresh = 0;
    }
    superoperator(&u, m);
    for (int l = 0; l < blocks; l++) {
      double x[9], *o = y + offset[l];
      memcpy(x, o, sizeof x);
      for (int i = 0; i < 9; i++) {
        double sum = 0;
        for (int j = 0; j < 9; j++) sum += m[9 * i + j] * x[j];
        o[i] = sum;
      }
    }
    if (n + 1 == count) break;
    const int due = n % every[which] == 0, before = due && n % (2 * every[which]) == 0;
    const double omega = due ? factor * drive(begin + (n + 1) * h) : 0;
    for (int turn = 0; turn < 3; turn++) {
      if (turn == 1) {
        for (int i = 0; i < length; i++) z[i] = diagonal[which][i] * y[i];
        add(&kick[which], 1, y, z);
      } else if (due && (turn == 0) == before) {
        memcpy(z, y, sizeof a);
        add(&correction, omega, y, z);
      } else continue;
      double *t = y;
      y = z, z = t;
    }
  }
  for (int f = 0; f < figures; f++) {
    out[f] = 0;
    for (int i = 0; i < length; i++) out[f] += effect[f][i] * y[i];
  }
}

/* Figures in the order p0 p1 p2 p3 multiphoton mean factorial2, then populations. */
static double differ(const double *a, const double *b) {
  double worst = 0;
  for (int k = 0; k < 7; k++) {
    const double scale = k < 2 ? 1 : 1000 * fmax(fabs(b[k]), 1e-7) * (k == 3 ? 100 : 1);
    worst = fmax(worst, fabs(a[k] - b[k]) / scale);
  }
  for (int k = 7; k < figures; k++) worst = fmax(worst, 0.1 * fabs(a[k] - b[k]));
  const double x = a[6] / (a[5] * a[5]), z = b[6] / (b[5] * b[5]);
  return fmax(worst, fabs(x - z) / (1000 * fmax(z, 1e-7)));
}

static double evaluate(double *out) {
  double r[3][16], two[16];
  tabulate(6 * base, table), tabulate(3 * base, coarse);
  Unitary a = table[0], b = coarse[0];
  for (int p = 1; p < 6 * base; p++) multiply(table + p, &a);
  for (int p = 1; p < 3 * base; p++) multiply(coarse + p, &b);
  double worst = 0;
  for (int k = 0; k < 9; k++) worst = fmax(worst, fabs(a.re[k] * a.re[k] + a.im[k] * a.im[k] - b.re[k] * b.re[k] - b.im[k] * b.im[k]));
  for (int k = 0; k < 3; k++) run(k, r[k]);
  /* Weights of a + b h⁴ + c h⁶ through h = 3, 2, 1 and of a + b h⁴ through 2, 1. */
  const double x[3] = {9, 4, 1};
  double w[3];
  for (int i = 0; i < 3; i++) {
    const double u = x[(i + 1) % 3], v = x[(i + 2) % 3];
    w[i] = u * u * v * v * (v - u) / 1.0;
  }
  const double total = w[0] + w[1] + w[2];
  for (int f = 0; f < figures; f++) {
    out[f] = (w[0] * r[0][f] + w[1] * r[1][f] + w[2] * r[2][f]) / total;
    two[f] = (16 * r[2][f] - r[1][f]) / 15;
  }
  return fmax(differ(two, out) / 1.2, worst / 64);
}

static void read_triples(Triples *t) {
  if (scanf("%d", &t->n) != 1 || t->n > ENTRIES) exit(2);
  for (int k = 0; k < t->n; k++) if (scanf("%d %d %lf", t->row + k, t->col + k, t->value + k) != 3) exit(2);
}

static double now(void) {
  struct timespec t;
  clock_gettime(CLOCK_MONOTONIC, &t);
  return t.tv_sec + 1e-9 * t.tv_nsec;
}

int main(void) {
  setvbuf(stdout, NULL, _IOLBF, 0);
  if (scanf("%lf %lf %lf %lf %lf %lf %lf %d %d %d", &begin, &end, &peak, &fall, &delay, &e01, &e12, &base, &length, &blocks) != 10) return 2;
  if (6 * base > MOST || length > PLACES || blocks > 32) return 2;
  for (int k = 0; k < blocks; k++) if (scanf("%d", offset + k) != 1) return 2;
  if (scanf("%d", &seeds) != 1 || seeds > 8) return 2;
  for (int k = 0; k < seeds; k++) if (scanf("%d", seed + k) != 1) return 2;
  if (scanf("%d", &figures) != 1 || figures > 16) return 2;
  for (int f = 0; f < figures; f++) for (int i = 0; i < length; i++) if (scanf("%lf", &effect[f][i]) != 1) return 2;
  for (int k = 0; k < 3; k++) {
    for (int i = 0; i < length; i++) if (scanf("%lf", &diagonal[k][i]) != 1) return 2;
    read_triples(kick + k);
  }
  read_triples(&correction);
  double seconds;
  while (scanf("%lf", &seconds) == 1) {
    double out[16] = {0}, error = 0, elapsed, sum = 0, least = 1e9;
    const double began = now();
    do {
      const double from = now();
      error = evaluate(out);
      sum += out[5];
      least = fmin(least, now() - from);
      elapsed = now() - began;
    } while (elapsed < seconds);
    printf("%.9g %.3g %.12g %.12g %.12g %.12g\n", least, error, out[0], out[4], out[5], out[6]);
    if (sum == 0) return 1;
  }
  return 0;
}
