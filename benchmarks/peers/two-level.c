/*
 * Photon counting of a two-level emitter under Gaussian tones: the same formulation as the fast kernel (frame of the
 * tones, nodes by recurrence, rotations by a Magnus expansion of order 8, kicks along the axis seen from the picture that
 * rotates with the drive, second-order corrections, growing steps until two runs agree), written as straightforward scalar
 * C, one step after another. Reads one line of numbers, answers lines "least seconds" with seconds per evaluation and figures.
 *
 *   decay dephasing energy start end steps peak time resonant origin rate chirp tones {amplitude fall phase rate chirp delay}…
 *
 * energy, rate and chirp are those of the frame, the tones as seen from it.
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#define MOST_TONES 4
#define BLOCK 64
#define INNER 0.16999052179242813
#define OUTER 0.43056815579702629
#define INNER_WEIGHT 0.32607257743127307
#define OUTER_WEIGHT 0.17392742256872693

typedef struct {
  double amplitude, fall, phase, rate, chirp, delay;
} Tone;
typedef struct {
  double e[8], r[8], c, s;
} Recurrence;
typedef struct {
  double x[2], y[2], z[2], t[2], more, own, feed, rest;
} Chain;
typedef struct {
  double fade, loss;
} Kick;

static double decay, dephasing, energy, begin, end, peak, time_scale, origin, frame_rate, frame_chirp;
static int first_steps, resonant, tones;
static Tone tone[MOST_TONES];
static const double place[4] = {-OUTER, -INNER, INNER, OUTER};

static void restart(const Tone *k, double scale, double middle, double h, Recurrence *out) {
  for (int j = 0; j < 4; j++) {
    const double s = middle + place[j] * h - k->delay;
    const double field = scale * k->amplitude * exp(-k->fall * s * s), shrink = exp(-k->fall * h * (2 * s + h));
    if (tones == 1) {
      out->e[2 * j] = field, out->r[2 * j] = shrink;
      continue;
    }
    const double angle = k->phase - (k->rate - k->chirp * s) * s, turn = -(k->rate - k->chirp * (2 * s + h)) * h;
    out->e[2 * j] = field * cos(angle), out->e[2 * j + 1] = field * sin(angle);
    out->r[2 * j] = shrink * cos(turn), out->r[2 * j + 1] = shrink * sin(turn);
  }
  const double shrink = exp(-2 * k->fall * h * h);
  out->c = shrink * cos(2 * k->chirp * h * h), out->s = shrink * sin(2 * k->chirp * h * h);
}

static inline void advance(Recurrence *k) {
  for (int j = 0; j < 8; j += 2) {
    const double e = k->e[j] * k->r[j] - k->e[j + 1] * k->r[j + 1];
    k->e[j + 1] = k->e[j] * k->r[j + 1] + k->e[j + 1] * k->r[j], k->e[j] = e;
    const double r = k->r[j] * k->c - k->r[j + 1] * k->s;
    k->r[j + 1] = k->r[j] * k->s + k->r[j + 1] * k->c, k->r[j] = r;
  }
}

static inline void advance_real(Recurrence *k) {
  for (int j = 0; j < 8; j += 2) k->e[j] *= k->r[j], k->r[j] *= k->c;
}

#define CROSS(a, b, out)                      \
  const double out##x = a##y * b##z - a##z * b##y; \
  const double out##y = a##z * b##x - a##x * b##z; \
  const double out##z = a##x * b##y - a##y * b##x

/* Taylor coefficients from four nodes. */
static inline void taylor(double f0, double f1, double f2, double f3, double *a) {
  const double spread = 1 / (OUTER * OUTER - INNER * INNER), even = 0.5 * (f1 + f2), odd = 0.5 / INNER * (f2 - f1);
  a[2] = spread * (0.5 * (f0 + f3) - even), a[0] = even - INNER * INNER * a[2];
  a[3] = spread * (0.5 / OUTER * (f3 - f0) - odd), a[1] = odd - INNER * INNER * a[3];
}

/* Rotation vector of a step from a + ib at four nodes, and a + ib at its end. */
static inline void magnus(const double *f, double z, double slope, double axial, double *p, double *edge) {
  double x[4], y[4] = {0};
  taylor(-f[0], -f[2], -f[4], -f[6], x);
  if (tones > 1) taylor(f[1], f[3], f[5], f[7], y);
  edge[0] = -(x[0] + x[1] / 2 + x[2] / 4 + x[3] / 8), edge[1] = y[0] + y[1] / 2 + y[2] / 4 + y[3] / 8;
  const double ax = x[0], ay = y[0], az = z * (1 - axial * (x[0] * x[0] + y[0] * y[0]));
  const double bx = x[1], by = y[1], bz = slope;
  const double ux = ax + x[2] / 28, uy = ay + y[2] / 28, uz = az;
  const double wx = bx + x[3] * (3.0 / 28), wy = by + y[3] * (3.0 / 28), wz = slope;
  CROSS(w, u, t);
  const double sx = tx / 28, sy = ty / 28, sz = tz / 28;
  const double hx = (sx - x[2] / 14) / 3, hy = (sy - y[2] / 14) / 3, hz = sz / 3;
  CROSS(a, h, r);
  const double ex = ux + sx, ey = uy + sy, ez = uz + sz, gx = wx + rx, gy = wy + ry, gz = wz + rz;
  CROSS(e, g, v);
  CROSS(b, s, k);
  const double mx = ax + 1.25 * sx, my = ay + 1.25 * sy, mz = az + 1.25 * sz;
  const double qx = 2 * x[2] + vx + 0.5 * kx, qy = 2 * y[2] + vy + 0.5 * ky, qz = vz + 0.5 * kz;
  CROSS(m, q, n);
  const double ox = ax + x[2] / 12, oy = ay + y[2] / 12;
  const double cx = ox - sx * (7.0 / 3) - vx / 6, cy = oy - sy * (7.0 / 3) - vy / 6, cz = az - sz * (7.0 / 3) - vz / 6;
  const double dx = -9 * bx - 2.25 * x[3] + 63 * rx + nx, dy = -9 * by - 2.25 * y[3] + 63 * ry + ny;
  const double dz = -9 * bz + 63 * rz + nz;
  CROSS(c, d, l);
  p[0] = ox - vx * (7.0 / 120) + lx / 360, p[1] = oy - vy * (7.0 / 120) + ly / 360;
  p[2] = az - vz * (7.0 / 120) + lz / 360;
}

/* cos √u and sin √u/(2√u) on [0, 1]. */
static inline void spin(double u, double *w, double *s) {
  const double u2 = u * u, u4 = u2 * u2;
  *w = 1 - 0.49999999999999983 * u + (0.0416666666666628 - 0.0013888888888579183 * u) * u2 +
       (2.4801587179865645e-5 - 2.7557293238470703e-7 * u + (2.087368217362566e-9 - 1.128104316059591e-11 * u) * u2) * u4;
  *s = 0.5 - 0.08333333333332882 * u + (0.0041666666665944 - 9.920634877258376e-5 * u) * u2 +
       (1.3778647210317656e-6 - 1.2524233053905736e-8 * u + 7.89673695596672e-11 * u2) * u4;
}

static inline void turn(double *q, const double *p) {
  double u = 0.25 * (p[0] * p[0] + p[1] * p[1] + p[2] * p[2]), w, s;
  if (u <= 1) {
    spin(u, &w, &s);
  } else if (u <= 16) {
    spin(u / 16, &w, &s);
    for (int k = 0; k < 2; k++) s *= w, w = 2 * w * w - 1;
  } else {
    const double half = sqrt(u);
    w = cos(half), s = 0.5 * sin(half) / half;
  }
  const double x = s * p[0], y = s * p[1], z = s * p[2];
  const double aw = w * q[0] - x * q[1] - y * q[2] - z * q[3], ax = w * q[1] + x * q[0] + y * q[3] - z * q[2];
  const double ay = w * q[2] - x * q[3] + y * q[0] + z * q[1], az = w * q[3] + x * q[2] - y * q[1] + z * q[0];
  q[0] = aw, q[1] = ax, q[2] = ay, q[3] = az;
}

static inline void kick(Chain *c, Kick k, const double *v) {
  const double p0 = v[0] * c->x[0] + v[1] * c->y[0] + v[2] * c->z[0], p1 = v[0] * c->x[1] + v[1] * c->y[1] + v[2] * c->z[1];
  const double e0 = 0.5 * c->t[0] - p0, e1 = 0.5 * c->t[1] - p1, lift = 0.5 * (1 + c->own) * k.loss;
  const double d0 = (1 - k.fade) * p0 + lift * e0, d1 = (1 - k.fade) * p1 + lift * e1 + 0.5 * c->feed * k.loss * e0;
  c->x[0] = k.fade * c->x[0] + v[0] * d0, c->y[0] = k.fade * c->y[0] + v[1] * d0, c->z[0] = k.fade * c->z[0] + v[2] * d0;
  c->x[1] = k.fade * c->x[1] + v[0] * d1, c->y[1] = k.fade * c->y[1] + v[1] * d1, c->z[1] = k.fade * c->z[1] + v[2] * d1;
  c->t[0] -= (1 - c->own) * k.loss * e0;
  c->t[1] += c->feed * k.loss * e0 - (1 - c->own) * k.loss * e1;
  c->more += c->rest * k.loss * e1;
}

static inline void correct(Chain *c, const double *v, const double *u, double quadratic, double beta, double ratio) {
  const double base = quadratic - beta * ratio, linear = 8.0 / 3 * beta * ratio - quadratic, o = c->own, f = c->feed;
  double p[2], g[2];
  for (int l = 0; l < 2; l++) {
    p[l] = v[0] * c->x[l] + v[1] * c->y[l] + v[2] * c->z[l];
    g[l] = u[0] * c->x[l] + u[1] * c->y[l] + u[2] * c->z[l];
  }
  const double fp = o * p[1] + f * p[0], ft = o * c->t[1] + f * c->t[0], fg = o * g[1] + f * g[0];
  const double twice = o * fg + f * o * g[0];
  const double in0 = o * (linear - beta * o) * p[0] + 0.5 * (base + (base + beta) * o + beta * o * o) * c->t[0];
  const double in1 = linear * fp - beta * (o * fp + f * o * p[0]) +
                     0.5 * (base * c->t[1] + (base + beta) * ft + beta * (o * ft + f * o * c->t[0]));
  const double in[2] = {in0, in1}, back[2] = {o * (beta * o - linear) * g[0], beta * twice - linear * fg};
  for (int l = 0; l < 2; l++)
    c->x[l] += u[0] * in[l] + v[0] * back[l], c->y[l] += u[1] * in[l] + v[1] * back[l],
        c->z[l] += u[2] * in[l] + v[2] * back[l];
  c->t[0] += 2 * ((base - beta) * o + beta * o * o - base) * g[0];
  c->t[1] += 2 * ((base - beta) * fg - base * g[1] + beta * twice);
  c->more += 2 * c->rest * (base * g[1] + beta * fg);
}

/* p0, p1, P(n≥2), <n>, <n(n-1)>, population at the end */
static void run(int count, double *out) {
  const double h = (end - begin) / count, small = h * h * decay * decay, ratio = dephasing / decay, square = ratio * ratio;
  const double rabi = h * peak, per_area = small * rabi * rabi / 1920 + h * h * decay * dephasing / 48;
  const int corrected =
      per_area * 2.5 * peak * time_scale >= 5e-10 || h * decay * rabi * rabi * rabi / 1920 + h * dephasing * rabi / 48 >= 1e-7;
  const double scale = h * (1 - small / 96 * (1 + square));
  const double quartic = corrected ? small / 5760 * (1 + 4 * square) : 0, axial = corrected ? small / 5760 * (1 + square) : 0;
  const double coherence = 0.5 * (decay + dephasing), slope = 2 * frame_chirp * h * h;
  const Kick full = {exp(-coherence * h), -expm1(-decay * h)}, half = {exp(-0.5 * coherence * h), -expm1(-0.5 * decay * h)};
  Chain counted = {{0}, {0}, {0.5}, {1}, 0, 0, 1, 1}, moments = {{0}, {0}, {0.5}, {1}, 0, 1, 1, 2};
  double q[4] = {1, 0, 0, 0}, v[3] = {0, 0, 1};
  Recurrence k[MOST_TONES];
  kick(&counted, half, v), kick(&moments, half, v);
  for (int n = 0; n < count; n++) {
    const double middle = begin + (n + 0.5) * h;
    if (n % BLOCK == 0)
      for (int i = 0; i < tones; i++) restart(&tone[i], scale, middle, h, &k[i]);
    double f[8], edge[2] = {0}, p[3];
    for (int j = 0; j < 8; j++) f[j] = k[0].e[j];
    for (int i = 1; i < tones; i++)
      for (int j = 0; j < 8; j++) f[j] += k[i].e[j];
    for (int i = 0; i < tones; i++) tones == 1 ? advance_real(&k[i]) : advance(&k[i]);
    if (quartic > 0)
      for (int j = 0; j < 8; j += 2) {
        const double b = tones == 1 ? 0 : f[j + 1], factor = 1 - quartic * (f[j] * f[j] + b * b);
        f[j] *= factor, f[j + 1] *= factor;
      }
    if (resonant) {
      const double theta = -(OUTER_WEIGHT * (f[0] + f[6]) + INNER_WEIGHT * (f[2] + f[4]));
      double w, s;
      if (0.25 * theta * theta <= 1) spin(0.25 * theta * theta, &w, &s);
      else w = cos(0.5 * theta), s = sin(0.5 * theta) / theta;
      const double aw = w * q[0] - s * theta * q[1];
      q[1] = w * q[1] + s * theta * q[0], q[0] = aw;
      if (corrected && n % 2 == 0) {
        double x[4];
        taylor(f[0], f[2], f[4], f[6], x);
        edge[0] = x[0] + x[1] / 2 + x[2] / 4 + x[3] / 8;
      }
    } else {
      magnus(f, (energy + frame_rate + 2 * frame_chirp * (middle - origin)) * h, slope, axial, p, edge);
      turn(q, p);
    }
    const double w = q[0], x = q[1], y = q[2], z = q[3];
    v[0] = 2 * (x * z - w * y), v[1] = 2 * (y * z + w * x), v[2] = 1 - 2 * (x * x + y * y);
    if (n + 1 == count) break;
    if (corrected && n % 2 == 0) {
      const double a = edge[0], b = edge[1];
      const double u[3] = {b * (1 - 2 * (y * y + z * z)) + 2 * a * (x * y + w * z),
                           2 * b * (x * y - w * z) + a * (1 - 2 * (x * x + z * z)), 2 * (b * (x * z + w * y) + a * (y * z - w * x))};
      const double beta = small / 960 * (a * a + b * b), quadratic = -small * ratio / 24;
      kick(&counted, half, v), kick(&moments, half, v);
      correct(&counted, v, u, quadratic, beta, ratio), correct(&moments, v, u, quadratic, beta, ratio);
      kick(&counted, half, v), kick(&moments, half, v);
    } else {
      kick(&counted, full, v), kick(&moments, full, v);
    }
  }
  kick(&counted, half, v), kick(&moments, half, v);
  const double excited = 0.5 * moments.t[0] - (v[0] * moments.x[0] + v[1] * moments.y[0] + v[2] * moments.z[0]);
  const Kick last = {0, 1};
  kick(&counted, last, v), kick(&moments, last, v);
  const double found[6] = {counted.t[0], counted.t[1], counted.more, moments.t[1], moments.more, excited};
  memcpy(out, found, sizeof found);
}

static double differ(const double *a, const double *b) {
  double worst = 0.1 * fabs(a[5] - b[5]);
  for (int k = 0; k < 5; k++) {
    const double scale = k < 2 ? 1 : 1000 * fmax(fabs(b[k]), 1e-7);
    worst = fmax(worst, fabs(a[k] - b[k]) / scale);
  }
  const double x = a[4] / (a[3] * a[3]), z = b[4] / (b[3] * b[3]);
  return fmax(worst, fabs(x - z) / (1000 * fmax(z, 1e-7)));
}

static int evaluate(double *out) {
  double coarse[6], fine[6], factor = 1.4;
  int count = first_steps, total = count;
  run(count, coarse);
  for (int k = 1; k < 8; k++) {
    const int finer = (int)ceil(count * factor);
    run(finer, fine);
    total += finer;
    const double share = 0.5 / (pow((double)finer / count, 4) - 1), error = share * differ(coarse, fine);
    count = finer;
    if (error <= 8e-10) {
      for (int j = 0; j < 6; j++) out[j] = fine[j] + share * (fine[j] - coarse[j]);
      return total;
    }
    factor = fmin(2, fmax(1.2, 1.05 * pow(error / 8e-10, 1.0 / 7)));
    memcpy(coarse, fine, sizeof coarse);
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
  if (scanf("%lf %lf %lf %lf %lf %d %lf %lf %d %lf %lf %lf %d", &decay, &dephasing, &energy, &begin, &end, &first_steps,
            &peak, &time_scale, &resonant, &origin, &frame_rate, &frame_chirp, &tones) != 13)
    return 2;
  if (tones < 1 || tones > MOST_TONES) return 2;
  for (int k = 0; k < tones; k++) {
    Tone *t = &tone[k];
    if (scanf("%lf %lf %lf %lf %lf %lf", &t->amplitude, &t->fall, &t->phase, &t->rate, &t->chirp, &t->delay) != 6) return 2;
  }
  double seconds;
  while (scanf("%lf", &seconds) == 1) {
    double out[6] = {0}, sum = 0;
    int total = 0;
    long calls = 0;
    const double began = now();
    double elapsed;
    do {
      total = evaluate(out);
      sum += out[3];
      calls++;
      elapsed = now() - began;
    } while (elapsed < seconds);
    printf("%.9g %d %.15g %.15g %.15g %.15g\n", elapsed / calls, total, out[0], out[1], out[4] / (out[3] * out[3]), sum);
  }
  return 0;
}
