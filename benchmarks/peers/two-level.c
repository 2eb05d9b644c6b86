/*
 * Photon counting of a two-level emitter under Gaussian tones: the same formulation as the fast kernel (rotations by a
 * Magnus expansion of order 6, exact kicks, second-order corrections, growing steps until two runs agree), written as
 * straightforward scalar C. Reads one line of numbers, answers lines "count" with the least seconds per evaluation and figures.
 *
 *   decay dephasing energy start end steps follow tones {area sigma gdd rate delay phase}…
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#define LANES 8
#define NODE 0.3872983346207417
#define ALPHA2 1.2909944487358056
#define MOST_TONES 4

typedef struct {
  double peak, fall, chirp, phase, rate, delay;
} Tone;

static double decay, dephasing, energy, begin, end;
static int first_steps, follow, tones;
static Tone tone[MOST_TONES];

static inline void drive(double t, double *a, double *b) {
  double re = 0, im = 0;
  for (int k = 0; k < tones; k++) {
    const double s = t - tone[k].delay;
    const double field = tone[k].peak * exp(-tone[k].fall * s * s);
    if (tone[k].rate == 0 && tone[k].chirp == 0 && tone[k].phase == 0) {
      re += field;
    } else {
      const double angle = tone[k].phase - (tone[k].rate - tone[k].chirp * s) * s;
      re += field * cos(angle);
      im += field * sin(angle);
    }
  }
  *a = re;
  *b = im;
}

static void rotation(double t, double h, double coupling, double quartic, double axial, double *m) {
  double a1, b1, a2, b2, a3, b3;
  drive(t - NODE * h, &a1, &b1);
  drive(t, &a2, &b2);
  drive(t + NODE * h, &a3, &b3);
  a1 *= coupling, b1 *= coupling, a2 *= coupling, b2 *= coupling, a3 *= coupling, b3 *= coupling;
  const double square = a2 * a2 + b2 * b2;
  const double s1 = 1 - quartic * (a1 * a1 + b1 * b1), s2 = 1 - quartic * square;
  const double s3 = 1 - quartic * (a3 * a3 + b3 * b3);
  a1 *= s1, b1 *= s1, a2 *= s2, b2 *= s2, a3 *= s3, b3 *= s3;
  double turn = 0;
  if (follow) {
    const double re = a3 * a1 + b3 * b1, im = b3 * a1 - a3 * b1;
    if (im != 0) {
      turn = atan2(im, re);
      const double c = cos(0.5 * turn), s = sin(0.5 * turn);
      const double a = a1 * c - b1 * s, d = a3 * c + b3 * s;
      b1 = a1 * s + b1 * c, a1 = a;
      b3 = b3 * c - a3 * s, a3 = d;
    }
  }
  const double gained = turn / (2 * NODE);
  const double z = (energy * h + gained) * (1 - axial * square);
  const double x1 = -a2, y1 = b2, x2 = -ALPHA2 * (a3 - a1), y2 = ALPHA2 * (b3 - b1);
  const double x3 = (-10.0 / 3) * (a3 - 2 * a2 + a1), y3 = (10.0 / 3) * (b3 - 2 * b2 + b1);
  const double c1x = -z * y2, c1y = z * x2, c1z = x1 * y2 - y1 * x2;
  const double ex = 2 * x3 + c1x, ey = 2 * y3 + c1y;
  const double c2x = -(y1 * c1z - z * ey) / 60, c2y = -(z * ex - x1 * c1z) / 60, c2z = -(x1 * ey - y1 * ex) / 60;
  const double fx = -20 * x1 - x3 + c1x, fy = -20 * y1 - y3 + c1y, fz = -20 * z + c1z;
  const double gx = x2 + c2x, gy = y2 + c2y;
  const double px = x1 + x3 / 12 + (fy * c2z - fz * gy) / 240;
  const double py = y1 + y3 / 12 + (fz * gx - fx * c2z) / 240;
  const double pz = z + (fx * gy - fy * gx) / 240;
  const double half = 0.5 * sqrt(px * px + py * py + pz * pz);
  double q0 = cos(half);
  const double s = half > 0 ? 0.5 * sin(half) / half : 0.5;
  double q1 = s * px, q2 = s * py, q3 = s * pz;
  if (gained != 0) {
    const double cc = cos(0.5 * gained), cs = -sin(0.5 * gained);
    const double w = q0 * cc - q3 * cs;
    q3 = q3 * cc + q0 * cs, q0 = w;
  }
  m[0] = 1 - 2 * (q2 * q2 + q3 * q3), m[1] = 2 * (q1 * q2 - q0 * q3), m[2] = 2 * (q1 * q3 + q0 * q2);
  m[3] = 2 * (q1 * q2 + q0 * q3), m[4] = 1 - 2 * (q1 * q1 + q3 * q3), m[5] = 2 * (q2 * q3 - q0 * q1);
  m[6] = 2 * (q1 * q3 - q0 * q2), m[7] = 2 * (q2 * q3 + q0 * q1), m[8] = 1 - 2 * (q1 * q1 + q2 * q2);
}

static const int feeds[LANES] = {0, 0, 1, 2, 3, 2, 0, 6};
static const double share[LANES] = {0, 0, 1, 1, 1, 1, 1, 2};
static const double own[LANES] = {1, 0, 0, 0, 0, 1, 1, 1};

static void kick(double (*y)[4], double fade, double loss) {
  double d[LANES];
  for (int l = 0; l < LANES; l++) d[l] = loss * (0.5 * y[l][3] - y[l][2]);
  for (int l = 0; l < LANES; l++) {
    const double into = own[l] * d[l] + share[l] * d[feeds[l]];
    y[l][0] *= fade, y[l][1] *= fade;
    y[l][2] += 0.5 * (d[l] + into), y[l][3] += into - d[l];
  }
}

static void correct(double (*y)[4], double t, double h) {
  double a, b, x[LANES][3], f[LANES][3], g[LANES][3];
  drive(t, &a, &b);
  const double br = h * b, bm = h * a, delta = dephasing / decay;
  const double beta = h * h * h * h * decay * decay / 1920 * (a * a + b * b);
  const double quadratic = -h * h * decay * dephasing / 48, base = quadratic - beta * delta;
  const double linear = -quadratic + 8.0 / 3 * beta * delta;
  for (int l = 0; l < LANES; l++) x[l][0] = y[l][2], x[l][1] = y[l][3], x[l][2] = br * y[l][0] + bm * y[l][1];
  for (int l = 0; l < LANES; l++)
    for (int c = 0; c < 3; c++) f[l][c] = own[l] * x[l][c] + share[l] * x[feeds[l]][c];
  for (int l = 0; l < LANES; l++)
    for (int c = 0; c < 3; c++) g[l][c] = own[l] * f[l][c] + share[l] * f[feeds[l]][c];
  for (int l = 0; l < LANES; l++) {
    const double into =
        linear * f[l][0] - beta * g[l][0] + 0.5 * (base * x[l][1] + (base + beta) * f[l][1] + beta * g[l][1]);
    y[l][0] += br * into, y[l][1] += bm * into;
    y[l][2] -= linear * f[l][2] - beta * g[l][2];
    y[l][3] += 2 * (-base * x[l][2] + (base - beta) * f[l][2] + beta * g[l][2]);
  }
}

/* p0 … p3, P(n≥2), <n>, <n(n-1)> */
static void run(int count, double *out) {
  double y[LANES][4] = {{0}}, m[9];
  y[0][2] = y[1][2] = 0.5, y[0][3] = y[1][3] = 1;
  const double h = (end - begin) / count, small = h * h * decay * decay, r = dephasing / decay;
  const double coupling = h * (1 - small / 96 * (1 + r * r));
  const double coherence = 0.5 * (decay + dephasing), fade = exp(-coherence * h), loss = -expm1(-decay * h);
  for (int n = 0; n < count; n++) {
    const double t = begin + (n + 0.5) * h;
    rotation(t, h, coupling, small / 5760 * (1 + 4 * r * r), small / 5760 * (1 + r * r), m);
    for (int l = 0; l < LANES; l++) {
      const double u = y[l][0], v = y[l][1], w = y[l][2];
      y[l][0] = m[0] * u + m[1] * v + m[2] * w;
      y[l][1] = m[3] * u + m[4] * v + m[5] * w;
      y[l][2] = m[6] * u + m[7] * v + m[8] * w;
    }
    if (n + 1 == count) break;
    correct(y, t + 0.5 * h, h);
    kick(y, fade, loss);
  }
  kick(y, exp(-0.5 * coherence * h), -expm1(-0.5 * decay * h));
  kick(y, 0, 1);
  for (int l = 1; l < LANES; l++) out[l - 1] = y[l][3];
}

static double differ(const double *a, const double *b) {
  double worst = 0;
  for (int k = 0; k < 7; k++) {
    const double scale = k < 2 ? 1 : 1000 * fmax(fabs(b[k]), 1e-7) * (k == 3 ? 100 : 1);
    worst = fmax(worst, fabs(a[k] - b[k]) / scale);
  }
  const double x = a[6] / (a[5] * a[5]), z = b[6] / (b[5] * b[5]);
  return fmax(worst, fabs(x - z) / (1000 * fmax(z, 1e-7)));
}

static int evaluate(double *out) {
  double coarse[7], factor = 1.3, before = NAN;
  int count = first_steps, total = count;
  run(count, coarse);
  for (int k = 1; k < 7; k++) {
    count = (int)ceil(count * factor);
    run(count, out);
    total += count;
    const double difference = differ(coarse, out);
    const double order = difference < 0.6 * before * (1 - pow(factor, -4)) ? 6 : 4;
    const double error = difference / (pow(factor, order) - 1);
    if (error <= 1e-9) return total;
    before = error;
    factor = fmin(2, fmax(1.3, 1.05 * pow(error / 1e-9, 1.0 / 6)));
    memcpy(coarse, out, sizeof coarse);
  }
  return -total;
}

static double now(void) {
  struct timespec t;
  clock_gettime(CLOCK_MONOTONIC, &t);
  return t.tv_sec + 1e-9 * t.tv_nsec;
}

int main(void) {
  setvbuf(stdout, NULL, _IOLBF, 0);
  if (scanf("%lf %lf %lf %lf %lf %d %d %d", &decay, &dephasing, &energy, &begin, &end, &first_steps, &follow, &tones) != 8)
    return 2;
  if (tones > MOST_TONES) return 2;
  for (int k = 0; k < tones; k++) {
    double area, sigma, gdd, rate, delay, phase;
    if (scanf("%lf %lf %lf %lf %lf %lf", &area, &sigma, &gdd, &rate, &delay, &phase) != 6) return 2;
    const double variance = sigma * sigma, modulus = hypot(variance, gdd);
    tone[k].peak = area / sqrt(2 * M_PI * modulus);
    tone[k].fall = 0.5 * variance / (modulus * modulus);
    tone[k].chirp = -0.5 * gdd / (modulus * modulus);
    tone[k].phase = phase + 0.5 * atan2(gdd, variance) - rate * delay;
    tone[k].rate = rate;
    tone[k].delay = delay;
  }
  double seconds;
  while (scanf("%lf", &seconds) == 1) {
    double out[7] = {0}, sum = 0;
    int total = 0;
    long calls = 0;
    const double began = now();
    double elapsed;
    do {
      total = evaluate(out);
      sum += out[5];
      calls++;
      elapsed = now() - began;
    } while (elapsed < seconds);
    printf("%.9g %d %.15g %.15g %.15g %.15g\n", elapsed / calls, total, out[0], out[1], out[6] / (out[5] * out[5]), sum);
  }
  return 0;
}
