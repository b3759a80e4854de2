#!/usr/bin/env python3
"""Noise estimates on scikit-image's pictures with added noise.

usage: noise_estimation.py STUDY_PROGRAM [gaussian|photon|rician|auto|impulses]
needs: python3-skimage, python3-tifffile (Debian packages) and the program study_noise_estimation

Every photograph and micrograph of scikit-image's installed data folder, as grey values on a scale of
0..255 without rounding, twice: the central 256 x 256 pixels, and the central 256 x 256 of the picture
averaged over 2 x 2 pixels, whose texture is finer. Smaller pictures stay as they are. The pictures
have noise and compression artefacts of their own, which count as error here.
"""
import pathlib
import subprocess
import sys
import tempfile

import numpy as np
import skimage.color
import skimage.data
import skimage.io
import tifffile

PICTURES = ("astronaut.png", "brick.png", "camera.png", "cell.png", "chelsea.png", "clock_motion.png",
            "coffee.png", "coins.png", "grass.png", "gravel.png", "hubble_deep_field.jpg", "ihc.png",
            "moon.png", "motorcycle_left.png", "page.png", "retina.jpg", "rocket.jpg", "text.png")
SIDE = 256


def central(image):
    top, left = (max(0, (n - SIDE) // 2) for n in image.shape)
    return image[top:top + SIDE, left:left + SIDE]


def halved(image):
    h, w = (n // 2 for n in image.shape)
    return image[:2 * h, :2 * w].reshape(h, 2, w, 2).mean(axis=(1, 3))


def main():
    program, modes = sys.argv[1], sys.argv[2:] or ["gaussian", "photon", "auto", "rician", "impulses"]
    data = pathlib.Path(skimage.data.__file__).parent
    with tempfile.TemporaryDirectory() as work:
        sets = {"as they are": [], "averaged over 2 x 2 pixels": []}
        for name in PICTURES:
            image = skimage.io.imread(data / name)
            grey = 255 * skimage.color.rgb2gray(image[..., :3]) if image.ndim == 3 else image.astype(float)
            for (kind, paths), picture in zip(sets.items(), (grey, halved(grey))):
                folder = pathlib.Path(work) / kind.replace(" ", "_")
                folder.mkdir(exist_ok=True)
                paths.append(folder / f"{pathlib.Path(name).stem}.tif")
                tifffile.imwrite(paths[-1], central(picture).astype(np.float32))
        for mode in modes:
            for kind, paths in sets.items():
                print(f"\n{mode}, pictures {kind}\n", flush=True)
                subprocess.run([program, mode, *paths], check=True)


if __name__ == "__main__":
    main()
