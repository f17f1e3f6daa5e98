/*
 * A yardstick for the season kernel: the method of the bench in plain scalar C, one parcel after another.
 *
 * Weather of 8 stations interpolated to every parcel, FAO-56 reference ET per parcel and day, dual crop coefficient with a surface layer, growing roots in
 * two stores, stress, curve-number runoff, irrigation to requirement, ten rows stored as 16-bit hundredths. Invented data from a seed. Left out, though the
 * kernel does them: checks of the input, quality flags, salt, ponds, snow, capillary rise, rules other than refill, stage sums, closing profiles, and
 * six of the rows.
 *
 *   gcc -O3 -march=native season-yardstick.c -lm -o yardstick && ./yardstick [parcels] [grid]
 *
 * With "grid" the weather is placed once for 25 parcels. Prints million parcel-days per second of processor time.
 */
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#define DAYS 366
#define SITES 8
#define ROWS 10
#define SLICE 2000

static double tmax[SITES][DAYS], tmin[SITES][DAYS], ea[SITES][DAYS], rs[SITES][DAYS], wind[SITES][DAYS], rain[SITES][DAYS], level[SITES];
static double et[DAYS], climate[DAYS], u2[DAYS], dry[DAYS], wet[DAYS], ra[DAYS];
static double kcb[DAYS], height[DAYS], factor[DAYS], root[DAYS];
static uint16_t stored[SLICE][ROWS][DAYS];

static uint64_t state = 1;
static double chance(void) {
  state = state * 6364136223846793005ULL + 1442695040888963407ULL;
  return (double)(state >> 11) / 9007199254740992.0;
}
static double between(double low, double high) { return low + (high - low) * chance(); }
static double clamp(double x, double low, double high) { return x < low ? low : x > high ? high : x; }
static double saturation(double t) { return 0.6108 * exp(17.27 * t / (t + 237.3)); }

static void make_weather(void) {
  for (int s = 0; s < SITES; s++) {
    level[s] = between(50, 900);
    for (int d = 0; d < DAYS; d++) {
      double season = sin(2 * M_PI * (d - 100) / 366);
      tmax[s][d] = 20 + 12 * season + between(-5, 5);
      tmin[s][d] = tmax[s][d] - between(4, 18);
      ea[s][d] = fmax(0.2, 1.2 + 0.5 * season + between(-0.5, 0.5));
      rs[s][d] = fmax(1, 17 + 9 * season + between(-6, 6));
      wind[s][d] = between(0.2, 7);
      rain[s][d] = chance() < 0.15 ? pow(chance(), 3) * 90 : 0;
    }
  }
}

static void place_weather(double latitude, double elevation, const double *weight) {
  double gamma = 0.665e-3 * 101.3 * pow((293 - 0.0065 * elevation) / 293, 5.26), phi = latitude * M_PI / 180;
  for (int d = 0; d < DAYS; d++) {
    double dr = 1 + 0.033 * cos(2 * M_PI * (d + 1) / 365), dec = 0.409 * sin(2 * M_PI * (d + 1) / 365 - 1.39);
    double ws = acos(clamp(-tan(phi) * tan(dec), -1, 1));
    ra[d] = 24 * 60 / M_PI * 0.082 * dr * (ws * sin(phi) * sin(dec) + cos(phi) * cos(dec) * sin(ws));
  }
  for (int d = 0; d < DAYS; d++) {
    double hot = 0, cold = 0, e = 0, sun = 0, u = 0, p = 0;
    for (int s = 0; s < SITES; s++) {
      double w = weight[s], warmer = 0.0065 * (level[s] - elevation);
      hot += w * (tmax[s][d] + warmer);
      cold += w * (tmin[s][d] + warmer);
      e += w * ea[s][d];
      sun += w * rs[s][d];
      u += w * wind[s][d];
      p += w * rain[s][d];
    }
    double eh = saturation(hot), es = (eh + saturation(cold)) / 2, t = (hot + cold) / 2;
    if (e > es) e = es;
    double relative = clamp(sun / ((0.75 + 2e-5 * elevation) * ra[d]), 0, 1), a = hot + 273.16, b = cold + 273.16;
    double black = 4.903e-9 * (a * a * a * a + b * b * b * b) / 2;
    double rn = 0.77 * sun - black * (0.34 - 0.14 * sqrt(e)) * (1.35 * relative - 0.35);
    double slope = 4098 * saturation(t) / ((t + 237.3) * (t + 237.3)), blown = fmax(0.5, u);
    et[d] = fmax(0, (0.408 * slope * rn + gamma * 900 * blown * (es - e) / (t + 273)) / (slope + gamma * (1 + 0.34 * blown)));
    u2[d] = u;
    dry[d] = 100 * e / eh;
    wet[d] = p;
    climate[d] = 0.04 * (clamp(u, 1, 6) - 2) - 0.004 * (clamp(dry[d], 20, 80) - 45);
  }
}

struct crop { double initial, mid, end, height, least, most, p; int ini, dev, middle, late; };
struct soil { double fc, wp, rew, tew, cn; };
struct method { double efficiency, fw, most, trigger; int under; };

static double stage_mean(const double *row, int from, int to) {
  double sum = 0;
  for (int d = from; d < to; d++) sum += row[d];
  return sum / (to - from);
}

static void draw_curve(const struct crop *c, int start, int end) {
  int dev = start + c->ini, mid = dev + c->dev, late = mid + c->middle, last = late + c->late < end ? late + c->late : end;
  double h3 = pow(c->height / 3, 0.3), kmid = c->mid, kend = c->end;
  if (late > mid && late <= DAYS) kmid += (0.04 * (clamp(stage_mean(u2, mid, late), 1, 6) - 2) - 0.004 * (clamp(stage_mean(dry, mid, late), 20, 80) - 45)) * h3;
  if (kend >= 0.45 && last > late) kend += (0.04 * (clamp(stage_mean(u2, late, last), 1, 6) - 2) - 0.004 * (clamp(stage_mean(dry, late, last), 20, 80) - 45)) * h3;
  for (int d = 0; d < DAYS; d++) {
    kcb[d] = 0;
    height[d] = 0.05;
    factor[d] = 0.29274;
    root[d] = d < start ? c->least : c->most;
    if (d < start || d >= end) continue;
    double grown = d < dev ? 0 : d < mid ? (double)(d - dev + 1) / c->dev : 1;
    kcb[d] = d < mid ? c->initial + grown * (kmid - c->initial) : d < late ? kmid : kmid + fmin(1, (double)(d - late + 1) / (c->late + 1)) * (kend - kmid);
    height[d] = d < mid ? c->height * fmin(1, kcb[d] / kmid) : c->height;
    factor[d] = d >= mid ? h3 : pow(height[d] / 3, 0.3);
    root[d] = c->least + grown * (c->most - c->least);
  }
}

static void walk(const struct crop *c, const struct soil *g, const struct method *m, int start, int end, uint16_t (*out)[DAYS]) {
  double per = 1000 * (g->fc - g->wp), deepest = c->most, z = root[0], s = 25400 / g->cn - 254;
  double dr = 0.3 * per * z, db = 0.3 * per * (deepest - z), de = 0.3 * g->tew, fw = 1, few = 1, p = c->p;
  int going = 0;
  for (int d = 0; d < DAYS; d++) {
    double grow = root[d] - z, moved = grow > 0 ? db * grow / (deepest - z) : 0, taw = per * root[d], pr = wet[d];
    dr += moved;
    db -= moved;
    z = root[d];
    double ro = pr > 0.2 * s ? (pr - 0.2 * s) * (pr - 0.2 * s) / (pr + 0.8 * s) : 0, pi = pr - ro;
    double excess = fmax(0, pi - dr), keep = fmin(db, excess), dp = excess - keep;
    dr = fmax(0, dr - pi);
    db -= keep;
    double irrigation = 0;
    int planted = d >= start && d < end;
    if (planted) {
      double zs = fmax(z, 0.5 * c->most), ds = dr + (zs > z ? db * (zs - z) / (deepest - z) : 0);
      double calls = fmax(0, ds - few * fmax(0, de - pi));
      if (ds > 0.5 && (going || calls >= m->trigger * p * per * zs || (m->trigger <= 1 && dr > p * taw))) irrigation = fmin(ds, m->most);
      going = irrigation > 0 && ds - irrigation > 0.5;
      db = fmax(0, db - fmax(0, irrigation - dr));
      dr = fmax(0, dr - irrigation);
    }
    if (irrigation > 0) fw = m->fw;
    else if (pr > 3) fw = 1;
    de = fmax(0, de - pi - irrigation / m->fw);
    double k = kcb[d], kmax = fmax(1.2 + climate[d] * factor[d], k + 0.05), ratio = (k - 0.15) / (kmax - 0.15);
    double fc = ratio > 0 ? fmin(0.99, exp((1 + 0.5 * height[d]) * log(ratio))) : 0;
    few = fmax(0.01, fmin(1 - fc, m->under ? (1 - 2.0 / 3 * fc) * fw : fw));
    double kr = de <= g->rew ? 1 : (g->tew - de) / (g->tew - g->rew), ke = fmin(kr * (kmax - k), few * kmax), etc = (k + ke) * et[d];
    if (planted) p = clamp(c->p + 0.04 * (5 - etc), 0.1, 0.8);
    double ks = planted && dr > p * taw ? fmax(0, (taw - dr) / ((1 - p) * taw)) : 1;
    double t = fmin(ks * k * et[d], taw - dr), e = fmin(ke * et[d], taw - dr - t);
    de = fmin(g->tew, de + e / few);
    dr += t + e;
    double row[ROWS] = {et[d], etc, t + e, e, pr, irrigation, irrigation / m->efficiency, dp, dr, dr + db};
    for (int r = 0; r < ROWS; r++) out[r][d] = (uint16_t)(row[r] * 100 + 0.5);
  }
}

int main(int count, char **argument) {
  int parcels = count > 1 ? atoi(argument[1]) : 10000, shared = count > 2 && strcmp(argument[2], "grid") == 0 ? 25 : 1;
  struct crop crops[40];
  struct soil soils[12];
  struct method methods[6];
  make_weather();
  for (int k = 0; k < 40; k++) {
    struct crop c = {between(0.15, 0.5), between(0.6, 1.2), between(0.15, 1.1), between(0.1, 4), between(0.1, 0.4), between(0.4, 2), between(0.2, 0.7), 20, 25, 25, 20};
    crops[k] = c;
  }
  for (int k = 0; k < 12; k++) {
    double wp = between(0.03, 0.2), fc = wp + between(0.07, 0.2), tew = 1000 * (fc - 0.5 * wp) * between(0.1, 0.15);
    struct soil s = {fc, wp, tew * between(0.2, 0.6), tew, between(55, 95)};
    soils[k] = s;
  }
  for (int k = 0; k < 6; k++) {
    struct method m = {between(0.5, 0.95), between(0.2, 1), between(3, 60), between(0.2, 1.2), chance() < 0.3};
    methods[k] = m;
  }
  double sum = 0;
  clock_t begun = clock();
  for (int k = 0; k < parcels; k++) {
    double weight[SITES], all = 0;
    for (int s = 0; s < SITES; s++) all += weight[s] = chance();
    for (int s = 0; s < SITES; s++) weight[s] /= all;
    if (k % shared == 0) place_weather(between(38, 40), between(50, 350), weight);
    const struct crop *c = &crops[(int)(chance() * 40)];
    int start = 75 + 31 * (int)(chance() * 3);
    draw_curve(c, start, 289);
    walk(c, &soils[(int)(chance() * 12)], &methods[(int)(chance() * 6)], start, 289, stored[k % SLICE]);
    sum += stored[k % SLICE][8][DAYS - 1];
  }
  double seconds = (double)(clock() - begun) / CLOCKS_PER_SEC;
  printf("%.2f\n", parcels * (double)DAYS / seconds / 1e6);
  return sum < 0;
}
