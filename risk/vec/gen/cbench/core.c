/* The outputs of BSM.Core as a plain loop in C, to compare times with.
 *
 * core reports the best time of an option over many passes through 4096 options,
 * drawn as benchBatch in bsm_bench_test.go draws them. The compiler is left to
 * call the vector functions of the C library where its flags allow it. */
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

enum { LINES = 4096, PASSES = 20000 };

static double *column(void) {
    double *p = aligned_alloc(64, LINES * sizeof(double));
    if (!p) abort();
    return p;
}

static uint64_t state = 0x9E3779B97F4A7C15u;

static double uniform(void) {
    state ^= state << 13;
    state ^= state >> 7;
    state ^= state << 17;
    return (double)(state >> 11) * 0x1p-53;
}

__attribute__((noinline)) static void core(
    const double *restrict spot, const double *restrict strike, const double *restrict time, const double *restrict vol,
    const double *restrict rate, const double *restrict yield, const double *restrict sign,
    double *restrict price, double *restrict delta, double *restrict gamma, double *restrict vega,
    double *restrict theta, double *restrict rho) {
    for (int i = 0; i < LINES; i++) {
        double s = spot[i], k = strike[i], t = time[i], v = vol[i], r = rate[i], q = yield[i], w = sign[i];
        double root = sqrt(t), vs = v * root, rf = exp(-r * t), qf = exp(-q * t);
        double d1 = (log(s / k) + (r - q + 0.5 * v * v) * t) / vs, d2 = d1 - vs;
        double n1 = 0.5 * erfc(-w * d1 * 0.70710678118654752440), n2 = 0.5 * erfc(-w * d2 * 0.70710678118654752440);
        double density = exp(-0.5 * d1 * d1) * 0.39894228040143267794, a = s * qf, b = k * rf;
        price[i] = w * (a * n1 - b * n2);
        delta[i] = w * qf * n1;
        gamma[i] = qf * density / (s * vs);
        vega[i] = a * density * root;
        theta[i] = -a * density * v / (2 * root) + w * (q * a * n1 - r * b * n2);
        rho[i] = w * t * b * n2;
    }
}

static double now(void) {
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return (double)t.tv_sec * 1e9 + (double)t.tv_nsec;
}

int main(void) {
    double *c[13];
    for (int j = 0; j < 13; j++) c[j] = column();
    for (int i = 0; i < LINES; i++) {
        c[0][i] = 80 + 40 * uniform();
        c[1][i] = 100;
        c[2][i] = 0.05 + 2 * uniform();
        c[3][i] = 0.1 + 0.5 * uniform();
        c[4][i] = 0.03;
        c[5][i] = 0.01;
        c[6][i] = uniform() < 0.5 ? 1 : -1;
    }
    double best = 1e300, sum = 0;
    for (int pass = 0; pass < PASSES; pass++) {
        double start = now();
        core(c[0], c[1], c[2], c[3], c[4], c[5], c[6], c[7], c[8], c[9], c[10], c[11], c[12]);
        double took = now() - start;
        if (took < best) best = took;
        sum += c[7][pass % LINES];
    }
    fprintf(stderr, "mean price %.6f\n", sum / PASSES); /* keeps the work alive */
    printf("%.3f\n", best / LINES);
    return 0;
}
