#!/usr/bin/env python3
"""Fits the shares of src/measure/bootstrap_shares.cc to images of known truth.

usage: bootstrap_shares.py PARTS.csv [...]     (of study_trust ... --parts PARTS.csv)

For each group of measurements the shares c, w, k, s, q, h of measure/bootstrap_interval.h are those
that minimise, over cells of shapes, noise and blur that count alike,

    mean log u  +  mean over cells of w (coverage - .9)^2,  w = HIGH above .9, LOW below,

with coverage of the 90 % interval smoothed by a logistic function so that it can be followed
downhill; in the end u is scaled so that the mean over cells is MEAN_COVERAGE. Prints the shares, the
coverage of each cell when its images are judged by shares fitted to the other half of the images, and
a summary of the same with shares fitted to the other three families only: how far they carry over to
shapes they have not seen.

Needs python3-numpy and python3-scipy.
"""

import csv
import sys
from collections import defaultdict

import numpy as np
from scipy.optimize import minimize
from scipy.stats import t as student

GROUPS = {
    "area_fraction": ["area_fraction"],
    "interface_length": ["interface_length"],
    "particle_count": ["particle_count"],
    "sizes": ["mean_particle_area", "d10", "d50", "d90"],
    "mean_intensity": ["mean_intensity"],
}
SHARES = ["correction", "within", "between", "bias", "posterior", "floor"]
HIGH = 60.0
LOW = 75.0
USUAL = np.array([1.0, 0, 0, 0, 0, 0])  # correction, and logarithms of the other shares
RESTRAINT = np.array([0.5, 0.001, 0.001, 0.001, 0.001, 0.001])
MEAN_COVERAGE = 0.91
SMOOTH = 0.15  # of u: width of the logistic function


def read(files):
    rows = []
    for file in files:
        with open(file, newline="") as text:
            for r in csv.reader(text):
                family, sigma, blur, number, name, label = r[:6]
                if label != "2":
                    continue
                v = [float(x) for x in r[6:]]
                truth, plain, value, b0, w0, b1, w1, n, posterior, floor = v
                if not np.isfinite(posterior):
                    posterior = 0.0
                rows.append(((family, float(sigma), float(blur)), name, truth, value, b0, w0, b1, w1, n,
                             posterior, floor, int(number)))
    return rows


class Sample:
    def __init__(self, rows):
        rows = sorted(rows, key=lambda r: (r[0], r[1]))
        self.cell = [r[0] for r in rows]
        self.name = np.array([r[1] for r in rows])
        a = np.array([r[2:-1] for r in rows], dtype=float)
        truth, value, b0, w0, b1, w1, n, posterior, floor = a.T
        self.bias = (b0 + b1) / 2
        self.error = value - truth
        self.parts = np.array([(1 + 1 / n) * (w0 + w1) / 2, ((b0 - b1) / 2) ** 2, self.bias**2,
                               posterior, floor])
        self.quantile = student.ppf(0.95, n - 2)
        groups = defaultdict(list)
        for i, r in enumerate(rows):
            groups[(r[0], r[1])].append(i)
        self.groups = {k: np.array(v) for k, v in groups.items()}
        self.first = np.array([v[0] for v in self.groups.values()])  # of each group's run of rows
        self.size = np.array([len(v) for v in self.groups.values()])

    def by_group(self, values):
        return np.add.reduceat(values, self.first) / self.size

    def variance(self, shares):
        return np.maximum(np.array(shares[1:]) @ self.parts, 1e-18)

    def half_width(self, shares):
        return self.quantile * np.sqrt(self.variance(shares))

    def remaining(self, shares):
        return self.error - shares[0] * self.bias

    def loss(self, shares):
        half = self.half_width(shares)
        e = np.abs(self.remaining(shares))
        inside = 1 / (1 + np.exp(-np.clip((half - e) / (SMOOTH * half), -50, 50)))
        off = self.by_group(inside) - 0.9
        return np.mean(self.by_group(np.log(half)) + np.where(off > 0, HIGH, LOW) * off**2)

    def coverage(self, shares):
        inside = np.abs(self.remaining(shares)) <= self.half_width(shares)
        return {k: (np.mean(inside[rows]), len(rows)) for k, rows in self.groups.items()}


def fit(sample):
    best = None
    for start in range(6):
        random = np.random.default_rng(start)
        at = np.concatenate([[1.0], random.normal(0.0, 0.5 + 0.2 * start, 5)])

        def restrained(th):
            loss = sample.loss(np.concatenate([th[:1], np.exp(th[1:])]))
            return loss + RESTRAINT @ (th - USUAL) ** 2

        r = minimize(restrained, at, method="Nelder-Mead",
                     options={"maxfev": 4000, "maxiter": 4000, "adaptive": True,
                              "xatol": 1e-3, "fatol": 1e-6})
        if best is None or r.fun < best.fun:
            best = r
    return rescaled(sample, np.concatenate([best.x[:1], np.exp(best.x[1:])]))


def rescaled(sample, shares):
    """The logistic function leans to one side: the variance is scaled to the wanted mean coverage."""
    low, high = 0.2, 5.0
    for _ in range(40):
        factor = np.sqrt(low * high)
        scaled = np.concatenate([shares[:1], factor * shares[1:]])
        mean = np.mean([c for c, _ in sample.coverage(scaled).values()])
        low, high = (factor, high) if mean < MEAN_COVERAGE else (low, factor)
    return scaled


def summary(coverage):
    c = np.array([v[0] for v in coverage.values()])
    return (f"mean {np.mean(c):.3f}, {np.sum((c >= 0.85) & (c <= 0.95))} of {len(c)} cells within .85-.95, "
            f"{np.sum(c < 0.75)} below .75")


def with_number_variance(rows, counts, variance):
    """The floor of sizes is the change by one particle times the variance of their number."""
    of_image = {(r[0], r[-1]): v for r, v in zip(counts, variance)}
    return [r[:-2] + (r[-2] * of_image.get((r[0], r[-1]), 0.0), r[-1]) for r in rows]


def pooled(parts):
    """Coverage of cells of which each part was judged by other shares."""
    inside, images = defaultdict(float), defaultdict(int)
    for coverage in parts:
        for cell, (c, n) in coverage.items():
            inside[cell] += c * n
            images[cell] += n
    return {cell: (inside[cell] / images[cell], images[cell]) for cell in images}


def judged_by_others(chosen, part_of):
    """Each part of the rows is judged by shares fitted to all other parts."""
    judged = []
    for part in sorted({part_of(r) for r in chosen}):
        shares = fit(Sample([r for r in chosen if part_of(r) != part]))
        judged.append(Sample([r for r in chosen if part_of(r) == part]).coverage(shares))
    return pooled(judged)


def main():
    rows = read(sys.argv[1:])
    for group, names in GROUPS.items():
        chosen = [r for r in rows if r[1] in names]
        if not chosen:
            continue
        if group == "sizes":
            chosen = with_number_variance(chosen, counts, variance)
        sample = Sample(chosen)
        shares = fit(sample)
        if group == "particle_count":
            counts, variance = chosen, sample.variance(shares)
        print(f"\n{group}: " + ", ".join(f"{n} {s:.2f}" for n, s in zip(SHARES, shares)))
        print("  fitted to all:", summary(sample.coverage(shares)))
        # Sides come in cycles of four: halves of whole cycles have the same sides.
        unseen_images = judged_by_others(chosen, lambda r: r[-1] // 4 % 2)
        print("  unseen images:", summary(unseen_images))
        for (cell, name), (c, n) in sorted(unseen_images.items()):
            if name in ("area_fraction", "particle_count", "d50", "interface_length"):
                print(f"    {cell[0]:9s} sigma {cell[1]:.1f} blur {cell[2]:.0f} {name:17s} {c:.2f} of {n}")
        print("  unseen family:", summary(judged_by_others(chosen, lambda r: r[0][0])))


main()
