"""Clean images and their noisy copies for restoration.py.

Photographs. Every picture of scikit-image's installed data folder (Debian: python3-skimage, no
download) that is a photograph or micrograph, at least 256 pixels high and wide, stored without loss
and free of motion blur: twelve. Colour becomes luminance (0.2125 R + 0.7154 G + 0.0721 B). Pictures
with 512 pixels on both axes are the central 512 x 512 averaged over 2 x 2 pixels, the others the
central 256 x 256 as they are. Values are floats in 0..255 and are not rounded.

Synthetic images, drawn from a fixed seed.
  fluorescence  background 8, six smooth cell bodies, 14 wandering filaments and 60 spots, all seen
                through a Gaussian point spread of 1.3 pixels, scaled to a maximum of 255
  two_phase     a Gaussian random field (correlation length 6 pixels) cut at its median, on a grid four
                times finer and averaged down, so that boundaries are mixed pixels; levels 80 and 176

Noise, with generators keyed by (row, image), so that a row does not depend on which others are run.
  sigmaS        y = x + S n, n standard normal, S = 15, 25, 50; not clipped
  poissonP      counts y ~ Poisson(x'), x' = x P / max(x), P = 100, 30, 10; the truth is x' in counts,
                figures are computed after multiplication by max(x) / P
  impulses      a tenth of the pixels replaced, half of them by 0 and half by 255, then 15 n added to
                every pixel (a defective pixel is read out through the same noisy amplifier)
"""
import dataclasses
import pathlib
import zlib

import numpy as np
import scipy.ndimage
import skimage.color
import skimage.data
import skimage.io

SIDE = 256
PHOTOGRAPHS = ("astronaut", "brick", "camera", "cell", "chelsea", "coffee",
               "coins", "grass", "gravel", "ihc", "moon", "motorcycle_left")
SYNTHETIC = ("fluorescence", "two_phase")
IMPULSE_SHARE = 0.1


@dataclasses.dataclass(frozen=True)
class Row:
    """One noise condition: kind is gaussian, poisson or impulses; level is sigma or the peak count."""
    name: str
    kind: str
    level: float

    def noise_options(self, estimated):
        """The program's options for this noise, with the level given or left to be estimated."""
        if self.kind == "poisson":
            return ["--noise", "photon" if estimated else "photon:1,0"]
        options = ["--noise", "gaussian" if estimated else f"gaussian:{self.level:g}"]
        if self.kind == "impulses":  # their share is part of the noise level
            options += ["--impulses", "auto" if estimated else str(IMPULSE_SHARE)]
        return options


ROWS = {row.name: row for row in (
    Row("sigma15", "gaussian", 15), Row("sigma25", "gaussian", 25), Row("sigma50", "gaussian", 50),
    Row("poisson100", "poisson", 100), Row("poisson30", "poisson", 30), Row("poisson10", "poisson", 10),
    Row("impulses", "impulses", 15))}


@dataclasses.dataclass(frozen=True)
class Case:
    """A noisy image with its truth.

    truth, noisy: equal shape, in the units of the noisy file (grey values or counts), noisy float32;
    to_grey: factor from these units to 0..255; noise_sd: root mean variance of the noise without
    impulses, in the units of the file.
    """
    name: str
    row: Row
    truth: np.ndarray
    noisy: np.ndarray
    to_grey: float
    noise_sd: float


def photograph(name):
    """A 256 x 256 float image in 0..255 from scikit-image's data folder."""
    path = pathlib.Path(skimage.data.__file__).parent / f"{name}.png"
    image = skimage.io.imread(path)
    grey = 255 * skimage.color.rgb2gray(image[..., :3]) if image.ndim == 3 else image.astype(float)
    size = 2 * SIDE if min(grey.shape) >= 2 * SIDE else SIDE
    top, left = ((extent - size) // 2 for extent in grey.shape)
    grey = grey[top:top + size, left:left + size]
    return grey if size == SIDE else grey.reshape(SIDE, 2, SIDE, 2).mean(axis=(1, 3))


def fluorescence(seed=1):
    """Cell bodies, filaments and spots through a Gaussian point spread; 0..255."""
    random = np.random.default_rng(seed)
    rows, columns = np.mgrid[0:SIDE, 0:SIDE]
    bodies = np.zeros((SIDE, SIDE))
    for _ in range(6):
        row, column = random.uniform(20, SIDE - 20, 2)
        long, short, angle = random.uniform(18, 30), random.uniform(12, 20), random.uniform(0, np.pi)
        along = np.cos(angle) * (rows - row) + np.sin(angle) * (columns - column)
        across = -np.sin(angle) * (rows - row) + np.cos(angle) * (columns - column)
        inside = ((along / long) ** 2 + (across / short) ** 2 < 1).astype(float)
        bodies += random.uniform(25, 60) * scipy.ndimage.gaussian_filter(inside, 2)
    lines = np.zeros((SIDE, SIDE))
    for _ in range(14):
        position, heading = random.uniform(0, SIDE, 2), random.uniform(0, 2 * np.pi)
        weight = random.uniform(40, 110)
        for _ in range(600):
            heading += 0.05 * random.standard_normal()
            position = position + 0.5 * np.array([np.cos(heading), np.sin(heading)])
            row, column = np.floor(position).astype(int)
            if 0 <= row < SIDE and 0 <= column < SIDE:
                lines[row, column] = weight
    spots = np.zeros((SIDE, SIDE))
    for row, column in random.integers(4, SIDE - 4, (60, 2)):
        spots[row, column] += random.uniform(400, 1600)
    seen = 8 + scipy.ndimage.gaussian_filter(bodies + 2 * lines + spots, 1.3)
    return 255 * seen / seen.max()


def two_phase(seed=2):
    """Two levels, 80 and 176, with mixed pixels at the boundaries."""
    fine = 4
    field = np.random.default_rng(seed).standard_normal((fine * SIDE, fine * SIDE))
    field = scipy.ndimage.gaussian_filter(field, 6 * fine, mode="wrap")
    phase = (field > np.median(field)).astype(float)
    share = phase.reshape(SIDE, fine, SIDE, fine).mean(axis=(1, 3))
    return 80 + 96 * share


def clean_images():
    """{name: 256 x 256 float image in 0..255}, photographs first."""
    images = {name: photograph(name) for name in PHOTOGRAPHS}
    images["fluorescence"] = fluorescence()
    images["two_phase"] = two_phase()
    return images


def large_image():
    """A 1024 x 1024 float image in 0..255 for timing: the centre of the fundus photograph retina.jpg."""
    image = skimage.io.imread(pathlib.Path(skimage.data.__file__).parent / "retina.jpg")
    top, left = ((extent - 1024) // 2 for extent in image.shape[:2])
    return 255 * skimage.color.rgb2gray(image[top:top + 1024, left:left + 1024])


def degrade(name, clean, row):
    """The Case of a clean image in one row; the same bytes on every call."""
    random = np.random.default_rng([zlib.crc32(row.name.encode()), zlib.crc32(name.encode())])
    if row.kind == "poisson":
        to_grey = clean.max() / row.level
        truth = clean / to_grey
        noisy = random.poisson(truth)
        return Case(name, row, truth, noisy.astype(np.float32), to_grey, float(np.sqrt(truth.mean())))
    noisy = clean
    if row.kind == "impulses":
        replaced = random.random(clean.shape) < IMPULSE_SHARE
        noisy = np.where(replaced, 255.0 * (random.random(clean.shape) < 0.5), clean)
    noisy = noisy + row.level * random.standard_normal(clean.shape)
    return Case(name, row, clean, noisy.astype(np.float32), 1.0, float(row.level))
