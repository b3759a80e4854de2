#!/usr/bin/env python3
"""Computes src/random/normal_table.h: upper quantiles of the standard normal distribution.

Usage: python3 normal_table.py | clang-format > ../../src/random/normal_table.h
       (standard library only)

The tail probability p = f / 2^32 lies in the binade 2^(j-1) <= f < 2^j, j = 0..31. Within it
f = 2^(j-1) (1.5 + t) with -1/2 <= t < 1/2, and z(t) = -quantile(p) is replaced by the polynomial of
degree 5 with the smallest largest error |dz| density(z) of the tail probability: Remez 1934 (exchange
of reference points). Coefficients are then rounded to float.
"""
from math import cos, pi
from statistics import NormalDist

DEGREE = 5
BINADES = 32
NORMAL = NormalDist()


def upper_quantile(j, t):
    return -NORMAL.inv_cdf(2.0 ** (j - 33) * (1.5 + t))


def weight(j, t):
    return NORMAL.pdf(upper_quantile(j, t))


def solve(rows):
    """Gaussian elimination with pivoting on rows [a_1 .. a_n | b]."""
    n = len(rows)
    for i in range(n):
        pivot = max(range(i, n), key=lambda r: abs(rows[r][i]))
        rows[i], rows[pivot] = rows[pivot], rows[i]
        for r in range(n):
            if r != i:
                factor = rows[r][i] / rows[i][i]
                rows[r] = [x - factor * y for x, y in zip(rows[r], rows[i])]
    return [rows[i][n] / rows[i][i] for i in range(n)]


def value(c, t):
    total = 0.0
    for a in reversed(c):
        total = total * t + a
    return total


def best_polynomial(j):
    grid = [i / 2000.0 - 0.5 for i in range(2001)]
    points = [-0.5 * cos(pi * i / (DEGREE + 1)) for i in range(DEGREE + 2)]
    for _ in range(30):
        rows = []
        for i, t in enumerate(points):
            rows.append([t**k for k in range(DEGREE + 1)]
                        + [(-1) ** i / weight(j, t), upper_quantile(j, t)])
        c = solve(rows)[:-1]
        error = [(value(c, t) - upper_quantile(j, t)) * weight(j, t) for t in grid]
        # The largest error of each run of equal sign is a new reference point.
        runs = [[0]]
        for i in range(1, len(grid)):
            if (error[i] > 0) == (error[runs[-1][0]] > 0):
                runs[-1].append(i)
            else:
                runs.append([i])
        peaks = [max(run, key=lambda i: abs(error[i])) for run in runs]
        if len(peaks) != DEGREE + 2:
            break
        if max(abs(grid[i] - p) for i, p in zip(peaks, points)) < 1e-9:
            break
        points = [grid[i] for i in peaks]
    tail = [2.0 ** (j - 33) * (1.5 + t) for t in grid]
    return c, max(map(abs, error)), max(abs(e) / p for e, p in zip(error, tail))


def main():
    table = [best_polynomial(j) for j in range(BINADES)]
    worst = max(e for _, e, _ in table)
    relative = max(r for _, _, r in table)
    print(f"""\
// Polynomials of the upper quantile of the standard normal distribution, one a binade of the tail
// probability. Written by tests/random/normal_table.py, which says how they are found; in exact
// arithmetic the tail probability is off by at most {worst:.2e}, and by {relative:.2e} of itself.
#ifndef STILLFIELD_RANDOM_NORMAL_TABLE_H_
#define STILLFIELD_RANDOM_NORMAL_TABLE_H_

namespace stillfield {{

inline constexpr int kNormalDegree = {DEGREE};
inline constexpr int kNormalBinades = {BINADES};

// [power of t][binade j]: tail probabilities 2^(j-33) to 2^(j-32), t = mantissa - 1.5.
inline constexpr float kNormalTable[kNormalDegree + 1][kNormalBinades] = {{""")
    for k in range(DEGREE + 1):
        print("    {")
        for j in range(0, BINADES, 4):
            print("        " + ", ".join(f"{table[i][0][k]:.8e}f" for i in range(j, j + 4)) + ",")
        print("    },")
    print("""\
};

}  // namespace stillfield

#endif  // STILLFIELD_RANDOM_NORMAL_TABLE_H_""")


if __name__ == "__main__":
    main()
