/*
 * The same algorithm as src/trial/swift-trial.ts and src/plant/rigid.ts, in C, to measure against: event-driven rigid
 * plant on a stiff supply, even ticks, the same controller with the same options. Built and run by test/bench/solver.ts with
 * `gcc -O2`; arguments: file of cases, rounds, resolution; prints seconds and a checksum.
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

typedef struct {
  double top_speed, lag, against_forward, against_back, start_forward, start_back, min, max;
} Law;
typedef struct {
  double duration, keep, speed_gain, coast, travel_gain;
} Stride;
typedef struct {
  double position, speed;
} Motion;
typedef struct {
  double kp, ki, kd, zone, most_sum, hold, low, high, half_turn, filter;
  int resets_outside, on_measured;
} Controller;
typedef struct {
  double *setpoint, *measured, *output;
  const double *noise;
  double counts, per_unit, period;
  int rows;
} Stand;

static double lag_share(double z) { return -expm1(-z); }

static double mean_lag_share(double z, double share) {
  static const double series[] = {1.0 / 2,     -1.0 / 6,     1.0 / 24,      -1.0 / 120,     1.0 / 720,
                                  -1.0 / 5040, 1.0 / 40320, -1.0 / 362880, 1.0 / 3628800, -1.0 / 39916800};
  if (z > 0.1) return 1 - share / z;
  double sum = 0;
  for (int k = 9; k >= 0; k--) sum = sum * z + series[k];
  return sum * z;
}

static double gap(double t, double speed, double to_end, double lag, double distance) {
  return (t == 0 ? 0 : t * (speed + to_end * mean_lag_share(t / lag, lag_share(t / lag)))) - distance;
}

/* Halving is enough here: no stop is hit in the measured work. */
static double stop_time(double distance, double speed, double to_end, double lag, double within) {
  double low = 0, high = within;
  int up = gap(high, speed, to_end, lag, distance) > 0;
  for (int k = 0; k < 60; k++) {
    double mid = 0.5 * (low + high);
    if ((gap(mid, speed, to_end, lag, distance) > 0) == up) high = mid;
    else low = mid;
  }
  return high;
}

static double relax(Motion *m, double to_end, double lag, double target, double left, double stop) {
  double time = left, share = lag_share(left / lag), next = m->speed + to_end * share;
  if (to_end < 0 ? next <= target : next >= target) {
    next = target;
    time = fmin(left, lag * log1p((m->speed - target) / (target - (m->speed + to_end))));
    share = (target - m->speed) / to_end;
  }
  double reached = time == 0 ? m->position : m->position + time * (m->speed + to_end * mean_lag_share(time / lag, share));
  if (stop > m->position ? reached >= stop : reached <= stop) {
    time = stop_time(stop - m->position, m->speed, to_end, lag, time);
    m->position = stop;
    m->speed = 0;
    return time;
  }
  m->position = reached;
  m->speed = next;
  return time;
}

static void advance(Motion *m, const Law *law, double u, double duration) {
  double left = duration;
  for (int events = 0; left > 0 && events < 16; events++) {
    int direction;
    if (m->speed != 0) direction = m->speed > 0 ? 1 : -1;
    else if (u > law->start_forward) direction = m->position < law->max;
    else if (u < law->start_back) direction = -(m->position > law->min);
    else direction = 0;
    if (direction == 0) return;
    double stop = direction > 0 ? law->max : law->min;
    if (direction > 0 ? m->position >= stop : m->position <= stop) {
      m->speed = 0;
      continue;
    }
    double to_end = law->top_speed * (u - (direction > 0 ? law->against_forward : law->against_back)) - m->speed;
    double target = m->speed * to_end < 0 ? 0 : to_end < 0 ? -INFINITY : INFINITY;
    left -= relax(m, to_end, law->lag, target, left, stop);
  }
}

static Stride stride_of(const Law *law, double duration) {
  double z = duration / law->lag, share = lag_share(z), mean = mean_lag_share(z, share);
  Stride s = {duration, 1 - share, law->top_speed * share, duration * (1 - mean), law->top_speed * duration * mean};
  return s;
}

typedef struct {
  double i, d, previous;
} Terms;

__attribute__((noinline)) static int move_rows(const Stand *stand, const Controller *c, const Law *law, const Stride *after,
                                               Motion *m, Terms *terms, int start, int end) {
  const double ki_tick = c->ki * stand->period, most_i = fabs(c->ki) * c->most_sum;
  const double kd_tick = c->filter > 0 ? c->kd / (c->filter + stand->period) : c->kd / stand->period;
  const double d_keep = c->filter > 0 ? c->filter / (c->filter + stand->period) : 0;
  const double target = stand->setpoint[0];
  double x = m->position, v = m->speed, i = terms->i, d = terms->d, previous = terms->previous;
  int row = start;
  for (;;) {
    double reading = x;
    if (stand->noise) reading += stand->noise[row];
    if (stand->counts > 0) reading = floor(reading * stand->counts + 0.5) / stand->counts;
    double error = target - reading;
    if (fabs(error) > c->half_turn) error -= 2 * c->half_turn * floor(0.5 * error / c->half_turn + 0.5);
    double point = c->on_measured ? -reading : error;
    if (row > 0) {
      if (fabs(error) < c->zone) {
        i += ki_tick * error;
        if (fabs(i) > most_i) i = i > 0 ? most_i : -most_i;
      } else if (c->resets_outside) i = 0;
      d = kd_tick * (point - previous) + d_keep * d;
    }
    previous = point;
    double sent = c->kp * error + (i + d) + c->hold;
    if (sent > c->high) sent = c->high;
    else if (sent < c->low) sent = c->low;
    stand->measured[row] = reading;
    stand->output[row] = sent;
    row++;
    if (row >= end) break;
    double net = stand->output[row - 1] * stand->per_unit - (v > 0 ? law->against_forward : law->against_back);
    double next_speed = after->keep * v + after->speed_gain * net;
    double next_position = x + after->coast * v + after->travel_gain * net;
    if (!(next_speed * v > 0 && next_position < law->max && next_position > law->min)) break;
    x = next_position;
    v = next_speed;
  }
  m->position = x;
  m->speed = v;
  terms->i = i;
  terms->d = d;
  terms->previous = previous;
  return row;
}

__attribute__((noinline)) static int rest_rows(const Stand *stand, const Controller *c, const Law *law, Motion *m, Terms *terms,
                                               int start, int end) {
  const double ki_tick = c->ki * stand->period, most_i = fabs(c->ki) * c->most_sum;
  const double kd_tick = c->filter > 0 ? c->kd / (c->filter + stand->period) : c->kd / stand->period;
  const double d_keep = c->filter > 0 ? c->filter / (c->filter + stand->period) : 0;
  double reading = m->position, i = terms->i, d = terms->d, previous = terms->previous;
  if (stand->counts > 0) reading = floor(reading * stand->counts + 0.5) / stand->counts;
  double error = stand->setpoint[0] - reading;
  if (fabs(error) > c->half_turn) error -= 2 * c->half_turn * floor(0.5 * error / c->half_turn + 0.5);
  double point = c->on_measured ? -reading : error;
  int inside = fabs(error) < c->zone;
  double i_tick = inside ? ki_tick * error : 0, steady = c->kp * error + c->hold;
  int row = start, quiet = 0;
  for (;;) {
    if (row > 0) {
      i = inside || !c->resets_outside ? i + i_tick : 0;
      if (fabs(i) > most_i) i = i > 0 ? most_i : -most_i;
      d = kd_tick * (point - previous) + d_keep * d;
    }
    previous = point;
    double sent = steady + (i + d);
    if (sent > c->high) sent = c->high;
    else if (sent < c->low) sent = c->low;
    stand->measured[row] = reading;
    stand->output[row] = sent;
    row++;
    if (row >= end) break;
    double u = sent * stand->per_unit;
    if (u > law->start_forward || u < law->start_back) break;
    quiet++;
    if (d == 0 && quiet > 0) {
      double room = i_tick > 0 ? fmin(law->start_forward / stand->per_unit, c->high) - sent
                               : sent - fmax(law->start_back / stand->per_unit, c->low);
      double i_room = most_i >= 0 ? most_i - fabs(i) : INFINITY;
      int ticks = (int)fmin(end - row, floor(fmin(room, i_room) / fabs(i_tick)) - 1);
      for (int tick = 1; tick <= ticks; tick++) {
        stand->measured[row] = reading;
        stand->output[row] = sent + tick * i_tick;
        row++;
      }
      if (ticks > 0) i += ticks * i_tick;
      if (row >= end) break;
    }
  }
  terms->i = i;
  terms->d = d;
  terms->previous = previous;
  return row;
}

static int trial(const Stand *stand, const Controller *c, const Law *law, const Stride *after, double from, double lost) {
  Motion m = {from, 0};
  Terms terms = {0, 0, 0};
  for (int row = 0;;) {
    int end = row + 128 < stand->rows ? row + 128 : stand->rows;
    row = m.speed == 0 && !stand->noise ? rest_rows(stand, c, law, &m, &terms, row, end)
                                        : move_rows(stand, c, law, after, &m, &terms, row, end);
    if (row >= stand->rows || fabs(stand->setpoint[0] - stand->measured[row - 1]) > lost) return row;
    advance(&m, law, stand->output[row - 1] * stand->per_unit, after->duration);
  }
}

/* One case a line: topSpeed lag drag breakaway kp ki kd zone to. */
int main(int argc, char **argv) {
  enum { ROWS = 251, MOST = 4096 };
  static double setpoint[ROWS], measured[ROWS], output[ROWS];
  static Law laws[MOST];
  static Controller controllers[MOST];
  static Stride strides[MOST];
  static double targets[MOST];
  if (argc < 4) return 2;
  const int rounds = atoi(argv[2]);
  const double resolution = atof(argv[3]);
  FILE *file = fopen(argv[1], "r");
  if (!file) return 2;
  int cases = 0;
  double k, lag, drag, breakaway, kp, ki, kd, zone, to;
  while (cases < MOST &&
         fscanf(file, "%lf %lf %lf %lf %lf %lf %lf %lf %lf", &k, &lag, &drag, &breakaway, &kp, &ki, &kd, &zone, &to) == 9) {
    laws[cases] = (Law){k, lag, drag, -drag, breakaway, -breakaway, -10, 10};
    controllers[cases] = (Controller){kp, ki, kd, zone, INFINITY, 0, -1, 1, INFINITY, 0, 0, 0};
    strides[cases] = stride_of(&laws[cases], 0.02);
    targets[cases++] = to;
  }
  fclose(file);
  Stand stand = {setpoint, measured, output, NULL, resolution > 0 ? round(1 / resolution) : 0, 1, 0.02, ROWS};
  double checksum = 0;
  struct timespec a, b;
  /* As many rounds untimed first: a process that has just started is measured cold otherwise, which would flatter the other side. */
  for (int round = -rounds; round < rounds; round++) {
    if (round == 0) {
      checksum = 0;
      clock_gettime(CLOCK_MONOTONIC, &a);
    }
    for (int n = 0; n < cases; n++) {
      for (int row = 0; row < ROWS; row++) setpoint[row] = targets[n];
      trial(&stand, &controllers[n], &laws[n], &strides[n], 0, INFINITY);
      checksum += measured[ROWS - 1];
    }
  }
  clock_gettime(CLOCK_MONOTONIC, &b);
  printf("%.9f %.17g\n", (b.tv_sec - a.tv_sec) + 1e-9 * (b.tv_nsec - a.tv_nsec), checksum);
  return 0;
}
