/*
 * The same full score as core/pls/score.ts in plain C, as a yardstick: SNV, Savitzky-Golay, centring, scores, prediction, T2, Q, leverage,
 * distance to the nearest calibration sample, verdict. Built by score.ts with cc -O2.
 *
 * Usage: score FILE ROUNDS. FILE holds little-endian doubles: sizes (channels, components, samples, window, spectra), then the
 * end weights of the filter (window rows), mean, R and P (components x channels), L inverse (components x components), whitened
 * calibration scores (samples x components), y-loadings, y mean, limits (T2, Q, nearest), and the spectra. Prints nanoseconds per
 * spectrum (the best of the rounds) and the sums of prediction, T2, Q and nearest over the spectra.
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

static double now(void)
{
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return 1e9 * (double)t.tv_sec + (double)t.tv_nsec;
}

struct model {
    int p, a, n, window;
    const double *filter, *mean, *rotations, *loadings, *whiten, *places, *y_loadings, *y_mean, *limits;
    double *standard, *x, *t, *z;
};

struct score {
    double value, t2, q, leverage, nearest;
    int verdict;
};

static void score(const double *values, const struct model *m, struct score *out)
{
    const int p = m->p, A = m->a, n = m->n, w = m->window, half = (w - 1) / 2;
    double sum = 0, squares = 0;
    for (int j = 0; j < p; j++) sum += values[j];
    const double mean = sum / p;
    for (int j = 0; j < p; j++) squares += (values[j] - mean) * (values[j] - mean);
    const double factor = 1 / sqrt(squares / (p - 1));
    for (int j = 0; j < p; j++) m->standard[j] = (values[j] - mean) * factor;
    for (int j = 0; j < p; j++) {
        int first = j - half;
        if (first < 0) first = 0;
        if (first > p - w) first = p - w;
        const double *weights = m->filter + (j - first) * w;
        double total = 0;
        for (int k = 0; k < w; k++) total += weights[k] * m->standard[first + k];
        m->x[j] = total - m->mean[j];
    }
    double value = m->y_mean[0];
    for (int a = 0; a < A; a++) {
        const double *r = m->rotations + a * p;
        double t = 0;
        for (int j = 0; j < p; j++) t += r[j] * m->x[j];
        m->t[a] = t;
        value += t * m->y_loadings[a];
    }
    for (int a = 0; a < A; a++) {
        const double *l = m->loadings + a * p;
        const double t = m->t[a];
        for (int j = 0; j < p; j++) m->x[j] -= t * l[j];
    }
    double q = 0;
    for (int j = 0; j < p; j++) q += m->x[j] * m->x[j];
    double t2 = 0;
    for (int a = 0; a < A; a++) {
        double z = 0;
        for (int b = 0; b <= a; b++) z += m->whiten[a * A + b] * m->t[b];
        m->z[a] = z;
        t2 += z * z;
    }
    double least = INFINITY;
    for (int i = 0; i < n; i++) {
        double d = 0;
        for (int a = 0; a < A; a++) {
            const double apart = m->z[a] - m->places[i * A + a];
            d += apart * apart;
        }
        if (d < least) least = d;
    }
    out->value = value;
    out->t2 = t2;
    out->q = q;
    out->leverage = 1.0 / n + t2 / (n - 1);
    out->nearest = sqrt(least);
    out->verdict = (q / m->limits[1] > 1) << 3 | (t2 / m->limits[0] > 1) << 2 | (out->nearest / m->limits[2] > 1 && t2 / m->limits[0] <= 1) << 1;
}

int main(int argc, char **argv)
{
    if (argc != 3) return 2;
    FILE *file = fopen(argv[1], "rb");
    if (!file) return 1;
    fseek(file, 0, SEEK_END);
    const long size = ftell(file);
    rewind(file);
    double *data = malloc((size_t)size);
    if (!data || fread(data, 1, (size_t)size, file) != (size_t)size) return 1;
    fclose(file);
    struct model m = {.p = (int)data[0], .a = (int)data[1], .n = (int)data[2], .window = (int)data[3]};
    const int spectra = (int)data[4];
    const double *at = data + 5;
    m.filter = at, at += m.window * m.window;
    m.mean = at, at += m.p;
    m.rotations = at, at += m.a * m.p;
    m.loadings = at, at += m.a * m.p;
    m.whiten = at, at += m.a * m.a;
    m.places = at, at += m.n * m.a;
    m.y_loadings = at, at += m.a;
    m.y_mean = at, at += 1;
    m.limits = at, at += 3;
    m.standard = malloc(sizeof(double) * (size_t)m.p);
    m.x = malloc(sizeof(double) * (size_t)m.p);
    m.t = malloc(sizeof(double) * (size_t)m.a);
    m.z = malloc(sizeof(double) * (size_t)m.a);
    double best = INFINITY, sums[4] = {0};
    int verdicts = 0;
    for (int round = 0; round < atoi(argv[2]); round++) {
        double value = 0, t2 = 0, q = 0, nearest = 0;
        const double began = now();
        for (int i = 0; i < spectra; i++) {
            struct score s;
            score(at + (long)i * m.p, &m, &s);
            value += s.value;
            t2 += s.t2;
            q += s.q;
            nearest += s.nearest;
            verdicts ^= s.verdict;
        }
        const double took = (now() - began) / spectra;
        if (took < best) best = took;
        sums[0] = value, sums[1] = t2, sums[2] = q, sums[3] = nearest;
    }
    printf("%.17g %.17g %.17g %.17g %.17g %d\n", best, sums[0], sums[1], sums[2], sums[3], verdicts);
    return 0;
}
