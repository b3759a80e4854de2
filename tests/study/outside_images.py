#!/usr/bin/env python3
"""Two-class labels of noisy copies of images from scikit-image's data folder.

usage: outside_images.py PROGRAM [--quick]
needs: python3-skimage, python3-opencv, python3-tifffile (Debian packages)

Truth. horse and bw_text are two-level pictures drawn by hand: they are their own truth, as are the
random blobs. coins, page, cell and camera are grey photographs without a hand-made truth; their
reference is Otsu's threshold of the clean picture, which favours Otsu's threshold in the comparison.
Noise. White Gaussian noise with a standard deviation of 0.3, 0.6 and 1.0 times the distance of the
two reference classes' means is added to the clean picture; the same noisy picture, as 32-bit floats,
goes to both methods (rounded to 65 536 levels for Otsu's threshold of OpenCV).
Prints a Markdown table of misclassified pixels; the results stand in docs/accuracy.md.
"""
import pathlib
import subprocess
import sys
import tempfile

import cv2
import numpy as np
import skimage.data
import skimage.io
import tifffile

NOISE_LEVELS = (0.3, 0.6, 1.0)


def otsu(image):
    """Labels 0 and 1 by OpenCV's Otsu threshold."""
    low, high = float(image.min()), float(image.max())
    levels = np.round((image - low) / (high - low) * 65535).astype(np.uint16)
    threshold, _ = cv2.threshold(levels, 0, 65535, cv2.THRESH_BINARY + cv2.THRESH_OTSU)
    return (levels > threshold).astype(np.uint8)


def pictures():
    """(name, clean grey picture, reference labels 0 and 1, where the reference comes from)"""
    folder = pathlib.Path(skimage.data.__file__).parent
    for name in ("horse", "bw_text"):
        grey = skimage.io.imread(folder / f"{name}.png", as_gray=True).astype(float)
        yield name, grey, (grey > 0.5 * grey.max()).astype(np.uint8), "hand-made"
    blobs = skimage.data.binary_blobs(256, blob_size_fraction=0.08, volume_fraction=0.4, seed=7)
    yield "binary_blobs", blobs.astype(float), blobs.astype(np.uint8), "exact"
    for name in ("coins", "page", "cell", "camera"):
        grey = skimage.io.imread(folder / f"{name}.png", as_gray=True).astype(float)
        yield name, grey, otsu(grey), "Otsu, clean"


def main():
    program, extra = sys.argv[1], sys.argv[2:]
    cases = []
    with tempfile.TemporaryDirectory() as work:
        work = pathlib.Path(work)
        for number, (name, grey, truth, source) in enumerate(pictures()):
            contrast = grey[truth == 1].mean() - grey[truth == 0].mean()
            for level in NOISE_LEVELS:
                random = np.random.default_rng([number, int(level * 10)])
                noisy = (grey + level * contrast * random.standard_normal(grey.shape)).astype(np.float32)
                stem = f"{name}-{level}"
                (work / "in").mkdir(exist_ok=True)
                tifffile.imwrite(work / "in" / f"{stem}.tif", noisy)
                cases.append((name, level, stem, noisy, truth, source))
        subprocess.run([program, "segment", work / "in", "--classes", "2", "--out", work / "out",
                        "--quiet", *extra], check=True, stdout=subprocess.DEVNULL)
        print("| picture | reference | noise | Otsu, % wrong | Stillfield, % wrong | ratio |")
        print("|---|---|---|---|---|---|")
        wins = 0
        for name, level, stem, noisy, truth, source in cases:
            labels = tifffile.imread(work / "out" / f"{stem}.labels.tif")
            ours = 100 * np.mean(labels - 1 != truth)
            theirs = 100 * np.mean(otsu(noisy) != truth)
            wins += ours < theirs
            print(f"| {name} | {source} | {level} | {theirs:.2f} | {ours:.2f} | {ours / theirs:.2f} |")
        print(f"\nFewer wrong pixels than Otsu's threshold in {wins} of {len(cases)} cases.")


if __name__ == "__main__":
    main()
