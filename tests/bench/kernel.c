/* W = sum g / (z - s): plain loops as a C programmer writes them, elements outside, points inside. */
void free_sums(long n, long m, const double *restrict x, const double *restrict y, const double *restrict px,
               const double *restrict py, const double *restrict ga, const double *restrict gb,
               double *restrict u, double *restrict v)
{
    for (long block = 0; block < n; block += 64) {
        long width = block + 64 < n ? 64 : n - block;
        double a[64] = {0}, b[64] = {0};
        for (long j = 0; j < m; j++)
            for (long i = 0; i < width; i++) {
                double dx = x[block + i] - px[j], dy = y[block + i] - py[j];
                double r = 1.0 / (dx * dx + dy * dy);
                a[i] += (ga[j] * dx + gb[j] * dy) * r;
                b[i] += (gb[j] * dx - ga[j] * dy) * r;
            }
        for (long i = 0; i < width; i++) {
            u[block + i] = a[i];
            v[block + i] = b[i];
        }
    }
}

#include <math.h>

/* W = sum g coth((z - s) / 2) / 2, in the form that does not overflow. */
void channel_sums(long n, long m, const double *restrict x, const double *restrict y, const double *restrict px,
                  const double *restrict py, const double *restrict ga, const double *restrict gb,
                  double *restrict u, double *restrict v)
{
    for (long i = 0; i < n; i++) {
        double a = 0.0, b = 0.0;
        for (long j = 0; j < m; j++) {
            double dx = x[i] - px[j], dy = y[i] - py[j];
            double sign = dx >= 0.0 ? 1.0 : -1.0;
            double lost = -expm1(-fabs(dx)), e = 1.0 - lost;
            double s = sin(0.5 * dy), c = cos(0.5 * dy);
            double r = 0.5 / (lost * lost + 4.0 * e * s * s);
            double re = sign * lost * (1.0 + e) * r, im = -4.0 * e * s * c * r;
            a += ga[j] * re - gb[j] * im;
            b += ga[j] * im + gb[j] * re;
        }
        u[i] = a;
        v[i] = b;
    }
}
