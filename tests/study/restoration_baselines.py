"""General-purpose baselines for restoration.py, tuned per image by an oracle.

Filters: scikit-image's non-local means (fast mode), total variation (Chambolle 2004) and wavelet
thresholding, OpenCV's bilateral filter; and, harder to beat, wavelet thresholding averaged over 16 shifts
(Coifman & Donoho 1995). The settings of each are those with the highest peak signal-to-noise ratio against the truth, which no user could find:
    PSNR = 10 log10(255^2 / mean((restored - truth)^2)),
found by climbing coordinate by coordinate over a grid from each family's starting points: short lists
are tried whole, long ones walked step by step until no step helps.

Photon noise: each family works on the counts, and also on the Anscombe transform a = 2 sqrt(y + 3/8)
(Anscombe 1948; noise sd about 1) followed by the closed form of the exact unbiased inverse
    a^2/4 + sqrt(3/2)/(4a) - 11/(8a^2) + 5 sqrt(3/2)/(8a^3) - 1/8   (Makitalo & Foi 2011);
the better of the two counts. Impulses: each family works on the input, and also after a filter that
replaces pixels farther than a threshold from the median of their window by the median of the pixels not
so far within 5 x 5; threshold and window are tuned with the family's settings, and the better counts.

SSIM: Wang et al. 2004 with their Gaussian window of 1.5 pixels and a range of 255.
"""
import dataclasses
import hashlib
import json
import typing

import cv2
import numpy as np
import skimage.metrics
import skimage.restoration

GRID_VERSION = 4  # raise it when filters or grids change: cached results of other versions are redone
SHORT_LIST = 5


def psnr(case, restored):
    """PSNR in dB on the 0..255 scale."""
    error = (np.asarray(restored, float) - case.truth) * case.to_grey
    return float(10 * np.log10(255**2 / np.mean(error**2)))


def ssim(case, restored):
    """Mean structural similarity on the 0..255 scale."""
    return float(skimage.metrics.structural_similarity(
        case.truth * case.to_grey, np.asarray(restored, float) * case.to_grey, data_range=255,
        gaussian_weights=True, sigma=1.5, use_sample_covariance=False))


def factors(low, high, step):
    """A geometric list from low to at least high."""
    count = int(np.ceil(np.log(high / low) / np.log(step)))
    return [round(low * step**k, 4) for k in range(count + 1)]


def nonlocal_means(image, sd, h, patch, distance, known):
    return skimage.restoration.denoise_nl_means(image, patch, distance, h=h * sd, sigma=known * sd,
                                                fast_mode=True, preserve_range=True)


def total_variation(image, sd, weight):
    return skimage.restoration.denoise_tv_chambolle(image, weight * sd, eps=1e-5, max_num_iter=200)


def wavelet_settings(sd, sigma, basis, rule):
    return {"sigma": sigma * sd, "wavelet": basis, "rescale_sigma": False, "method": rule,
            "mode": "hard" if rule == "VisuShrink" else "soft"}


def wavelet(image, sd, sigma, basis, rule):
    return skimage.restoration.denoise_wavelet(image, **wavelet_settings(sd, sigma, basis, rule))


def shifted_wavelet(image, sd, sigma, basis, rule):
    return skimage.restoration.cycle_spin(image, skimage.restoration.denoise_wavelet, max_shifts=3,
                                          num_workers=1, func_kw=wavelet_settings(sd, sigma, basis, rule))


def bilateral(image, sd, color, space):
    return cv2.bilateralFilter(np.ascontiguousarray(image), -1, color * sd, space)


@dataclasses.dataclass(frozen=True)
class Family:
    """A filter, its grid of settings (factors are in units of the noise sd) and where to start."""
    title: str
    filter: typing.Callable
    grid: dict
    starts: tuple


WAVELET_GRID = {"sigma": factors(0.1, 4, 1.08), "basis": ["haar", "db2", "sym4", "sym8"],
                "rule": ["BayesShrink", "VisuShrink"]}
WAVELET_STARTS = ({"sigma": 1.0, "basis": "db2", "rule": "BayesShrink"},
                  {"sigma": 0.6, "basis": "db2", "rule": "VisuShrink"})
FAMILIES = {
    "nlm": Family("non-local means", nonlocal_means, {
        "h": factors(0.1, 5, 1.08), "patch": [3, 5, 7, 9, 13], "distance": [4, 7, 10, 14], "known": [0, 1]},
        ({"h": 0.7, "patch": 5, "distance": 7, "known": 1},
         {"h": 0.5, "patch": 9, "distance": 4, "known": 1})),
    "tv": Family("TV", total_variation, {"weight": factors(0.05, 10, 1.06)}, ({"weight": 0.7},)),
    "wavelet": Family("wavelet", wavelet, WAVELET_GRID, WAVELET_STARTS),
    "shifted": Family("wavelet over 16 shifts", shifted_wavelet, WAVELET_GRID, WAVELET_STARTS),
    "bilateral": Family("bilateral", bilateral, {
        "color": factors(0.3, 20, 1.1), "space": factors(0.5, 8, 1.25)}, ({"color": 3.0, "space": 1.5},)),
}


@dataclasses.dataclass(frozen=True)
class Domain:
    """What is done before and after a filter: forward(image, **settings) -> image; sd of its noise."""
    grid: dict
    start: dict
    sd: float
    forward: typing.Callable
    backward: typing.Callable = staticmethod(lambda image: image)


def anscombe(counts):
    return 2 * np.sqrt(np.maximum(counts, 0) + np.float32(0.375))


def unbiased_inverse(a):
    """Mean counts from the mean of their Anscombe transform; 0 below the transform of 0 counts."""
    safe = np.maximum(a, 2 * np.sqrt(0.375))
    root = np.sqrt(1.5)
    counts = safe**2 / 4 + root / (4 * safe) - 11 / (8 * safe**2) + 5 * root / (8 * safe**3) - 0.125
    return np.maximum(counts, 0)


def replace_impulses(image, threshold, window):
    """Pixels farther than threshold from their window's median become the 5 x 5 median of the others."""
    flagged = np.abs(image - cv2.medianBlur(image, window)) > threshold
    kept = np.pad(np.where(flagged, np.float32(np.nan), image), 2, mode="reflect")
    windows = np.lib.stride_tricks.sliding_window_view(kept, (5, 5))[flagged].reshape(-1, 25)
    empty = np.isnan(windows).all(axis=1)
    windows = np.where(empty[:, None], np.float32(np.median(image)), windows)
    result = image.copy()
    result[flagged] = np.nanmedian(windows, axis=1)
    return result


def domains(case):
    """{name: Domain} of the preparations tried in a case."""
    result = {"direct": Domain({}, {}, case.noise_sd, lambda image: image)}
    if case.row.kind == "poisson":
        result["anscombe"] = Domain({}, {}, 1.0, anscombe, unbiased_inverse)
    if case.row.kind == "impulses":
        result["median"] = Domain({"threshold": factors(20, 160, 1.12), "window": [3, 5]},
                                  {"threshold": 60, "window": 3}, case.noise_sd, replace_impulses)
    return result


def apply(case, domain, family, settings):
    """The image restored by one family in one domain with one set of settings."""
    inner = {key: settings[key] for key in domain.grid}
    outer = {key: settings[key] for key in family.grid}
    image = domain.forward(case.noisy, **inner).astype(np.float32)
    return domain.backward(family.filter(image, domain.sd, **outer))


def climb(score, grid, start, seen):
    """(best score, its settings) by coordinate ascent over grid from the grid point nearest to start.

    seen: scores of grid points, shared between the starts on one grid.
    """
    def value(point):
        if point not in seen:
            seen[point] = score({key: grid[key][k] for key, k in zip(grid, point)})
        return seen[point]

    def nearest(values, wanted):
        if wanted in values:
            return values.index(wanted)
        return min(range(len(values)), key=lambda k: abs(values[k] - wanted))

    best = tuple(nearest(grid[key], start[key]) for key in grid)
    improved = True
    while improved:
        before = best
        for axis, values in enumerate(grid.values()):
            if len(values) <= SHORT_LIST:
                best = max((best[:axis] + (k,) + best[axis + 1:] for k in range(len(values))), key=value)
                continue
            for step in (-1, 1):
                while 0 <= best[axis] + step < len(values):
                    moved = best[:axis] + (best[axis] + step,) + best[axis + 1:]
                    if value(moved) <= value(best):
                        break
                    best = moved
        improved = value(best) > value(before)
    return value(best), {key: grid[key][k] for key, k in zip(grid, best)}


def tune(case, families):
    """{family: {psnr, ssim, domain, settings}} with the oracle's settings."""
    result = {}
    for key in families:
        family, found = FAMILIES[key], []
        for name, domain in domains(case).items():
            grid, seen = {**domain.grid, **family.grid}, {}
            for start in family.starts:
                best, settings = climb(lambda s: psnr(case, apply(case, domain, family, s)), grid,
                                       {**domain.start, **start}, seen)
                found.append((best, name, settings))
        best, name, settings = max(found, key=lambda item: item[0])
        restored = apply(case, domains(case)[name], family, settings)
        result[key] = {"psnr": best, "ssim": ssim(case, restored), "domain": name, "settings": settings}
    return result


def tuned_baselines(case, cache, families=tuple(FAMILIES)):
    """As tune, on one thread, kept in the folder cache while the noisy bytes and the grids are the same."""
    digest = hashlib.sha256(case.noisy.tobytes() + case.truth.tobytes()).hexdigest()
    path = cache / f"{case.row.name}-{case.name}.json"
    if path.exists():
        kept = json.loads(path.read_text())
        if kept["digest"] == digest and kept["grid_version"] == GRID_VERSION:
            return kept["families"]
    cv2.setNumThreads(1)
    tuned = tune(case, families)
    cv2.setNumThreads(-1)
    path.write_text(json.dumps({"digest": digest, "grid_version": GRID_VERSION, "families": tuned},
                               indent=1))
    return tuned


def tuned_restoration(case, tuned, key):
    """The image that one family restores with the settings found by tune."""
    return apply(case, domains(case)[tuned[key]["domain"]], FAMILIES[key], tuned[key]["settings"])
