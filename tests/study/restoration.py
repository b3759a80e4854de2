#!/usr/bin/env python3
"""Quality, coverage and speed of `denoise` against tuned general-purpose filters.

usage: restoration.py PROGRAM [--work DIR] [--rows sigma15,...] [--estimated] [--quick] [--speed]
                      [--baselines-only] [--markdown FILE]
needs: python3-skimage, python3-opencv, python3-tifffile (Debian packages)

Images and noise: restoration_images.py. Filters and how they are tuned: restoration_baselines.py.
Each row's noisy images go to the program as 32-bit float TIFF files in one folder, with the noise level
given, or with --estimated left to the program (the filters are given it all the same).

Figures. PSNR and SSIM on the 0..255 scale; nothing is clipped. The gain of an image is the program's
PSNR less that of the best filter on that image. Coverage is the share of pixels whose true intensity lies in
[lower90, upper90], also among the tenth of the pixels with the largest Sobel magnitude of the truth.
Width is mean(upper90 - lower90) / s, s the root mean variance of the noise without impulses.
Times are wall time and include reading, learning and writing; those of the non-local means are taken
in the same run on the same images: OpenCV's 8-bit fastNlMeansDenoising (7, 21, h = s) with its own
choice of threads, scikit-image's with the settings the oracle chose, on one thread.

--quick passes --quick to the program and compares with an earlier run without it in the same --work
folder. --speed adds one image of 1024 x 1024 with sigma 25: time and peak memory. Filters' results are
cached in the work folder, which must lie outside the repository; the first run takes fifteen to twenty
minutes of one core, later ones only the program's time.
"""
import argparse
import json
import pathlib
import shutil
import subprocess
import sys
import tempfile
import time

sys.dont_write_bytecode = True

import cv2
import numpy as np
import skimage.filters
import tifffile

import restoration_baselines as baselines
import restoration_images as images
import restoration_report as report

OUTPUTS = ("restored", "sd", "lower90", "upper90")
# A fresh interpreter starts the program: a child's peak memory counts what its parent held at the fork.
LAUNCHER = """
import json, resource, subprocess, sys, time
begin = time.perf_counter()
code = subprocess.run(sys.argv[1:], stdout=subprocess.DEVNULL).returncode
usage = resource.getrusage(resource.RUSAGE_CHILDREN)
print(json.dumps({"code": code, "wall": time.perf_counter() - begin,
                  "processor": usage.ru_utime + usage.ru_stime, "peak": 1024 * usage.ru_maxrss}))
"""


def run_program(arguments):
    """{wall, processor: seconds, peak: resident bytes} of a run that must succeed."""
    launched = subprocess.run([sys.executable, "-c", LAUNCHER, *map(str, arguments)],
                              stdout=subprocess.PIPE, check=True)
    used = json.loads(launched.stdout)
    if used.pop("code") != 0:
        sys.exit(f"failed: {' '.join(map(str, arguments))}")
    return used


def denoise(program, folder, cases, row, estimated, quick):
    """Writes the cases to folder/in, runs the program into a fresh folder/out; returns run_program's."""
    shutil.rmtree(folder, ignore_errors=True)
    (folder / "in").mkdir(parents=True)
    for case in cases:
        tifffile.imwrite(folder / "in" / f"{case.name}.tif", case.noisy)
    options = row.noise_options(estimated) + (["--quick"] if quick else []) + ["--quiet"]
    return run_program([program, "denoise", folder / "in", "--out", folder / "out", *options])


def read_outputs(folder, case):
    """{restored, sd, lower90, upper90} as float64 planes of the truth's shape, checked to be finite."""
    planes = {}
    for output in OUTPUTS:
        path = folder / "out" / f"{case.name}.{output}.tif"
        if not path.exists():
            sys.exit(f"{path} was not written")
        planes[output] = tifffile.imread(path).astype(float)
        if planes[output].shape != case.truth.shape or not np.isfinite(planes[output]).all():
            sys.exit(f"{path}: shape {planes[output].shape}, or values that are not finite")
    return planes


def strongest_edges(truth):
    """Mask of the tenth of the pixels with the largest Sobel magnitude (fewer when most are flat)."""
    magnitude = skimage.filters.sobel(truth)
    return (magnitude >= np.quantile(magnitude, 0.9)) & (magnitude > 0)


def measure(case, planes):
    """Our figures for one image."""
    covered = (planes["lower90"] <= case.truth) & (case.truth <= planes["upper90"])
    edges = strongest_edges(case.truth)
    error = planes["restored"] - case.truth
    return {"psnr": baselines.psnr(case, planes["restored"]),
            "ssim": baselines.ssim(case, planes["restored"]),
            "coverage": float(covered.mean()),
            "edge_covered": int(covered[edges].sum()), "edge_pixels": int(edges.sum()),
            "width": float((planes["upper90"] - planes["lower90"]).mean() / case.noise_sd),
            "sd_over_error": float(np.sqrt((planes["sd"] ** 2).mean() / (error**2).mean()))}


def time_nonlocal_means(cases, tuned):
    """Wall seconds of OpenCV's 8-bit and scikit-image's tuned non-local means over the cases."""
    opencv = tuned_skimage = 0.0
    for case in cases:
        grey = np.clip(np.round(case.noisy * case.to_grey), 0, 255).astype(np.uint8)
        begin = time.perf_counter()
        cv2.fastNlMeansDenoising(grey, None, case.noise_sd * case.to_grey, 7, 21)
        middle = time.perf_counter()
        baselines.tuned_restoration(case, tuned[case.name], "nlm")
        opencv += middle - begin
        tuned_skimage += time.perf_counter() - middle
    return {"opencv": opencv, "skimage": tuned_skimage}


def run_speed(options, work):
    """Time and memory on one image of 1024 x 1024 with sigma 25."""
    row = images.ROWS["sigma25"]
    case = images.degrade("large", images.large_image(), row)
    tuned = {case.name: baselines.tuned_baselines(case, work / "baselines", ("nlm",))}
    folder = work / "runs" / "speed"
    used = denoise(options.program, folder, [case], row, options.estimated, options.quick)
    return {**used, "pixels": case.truth.size,
            "psnr": baselines.psnr(case, read_outputs(folder, case)["restored"]),
            "nlm_psnr": tuned[case.name]["nlm"]["psnr"], **time_nonlocal_means([case], tuned)}


def run_row(row, clean, options, work):
    """All figures of one row: {row, images: [{name, photograph, noisy, baselines, ours}], times}."""
    cases = [images.degrade(name, image, row) for name, image in clean.items()]
    tuned = {case.name: baselines.tuned_baselines(case, work / "baselines") for case in cases}
    result = {"row": row.name, "times": None, "images": [
        {"name": case.name, "photograph": case.name in images.PHOTOGRAPHS,
         "noisy": baselines.psnr(case, case.noisy), "baselines": tuned[case.name], "ours": None}
        for case in cases]}
    if options.baselines_only:
        return result
    folder = work / "runs" / row.name
    used = denoise(options.program, folder, cases, row, options.estimated, options.quick)
    result["times"] = {**used, "pixels": sum(case.truth.size for case in cases),
                       **time_nonlocal_means(cases, tuned)}
    for case, image in zip(cases, result["images"]):
        image["ours"] = measure(case, read_outputs(folder, case))
    mode = ("estimated" if options.estimated else "given") + ("-quick" if options.quick else "")
    (work / f"ours-{mode}-{row.name}.json").write_text(json.dumps(result, indent=1))
    full = work / f"ours-{mode.removesuffix('-quick')}-{row.name}.json"
    if options.quick and full.exists():
        earlier = {image["name"]: image["ours"]["psnr"] for image in json.loads(full.read_text())["images"]}
        result["lost_by_quick"] = float(np.mean(
            [earlier[image["name"]] - image["ours"]["psnr"] for image in result["images"]]))
    return result


def parse_arguments():
    parser = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    parser.add_argument("program", nargs="?", help="the program to measure")
    parser.add_argument("--work", type=pathlib.Path, help="folder for noisy images, outputs and caches")
    parser.add_argument("--rows", default=",".join(images.ROWS), help="rows to run, separated by commas")
    parser.add_argument("--estimated", action="store_true", help="the program estimates the noise level")
    parser.add_argument("--quick", action="store_true", help="the program's --quick")
    parser.add_argument("--speed", action="store_true", help="also time one image of 1024 x 1024")
    parser.add_argument("--baselines-only", action="store_true", help="only tune the filters")
    parser.add_argument("--markdown", type=pathlib.Path, help="write the report here as well")
    options = parser.parse_args()
    if not options.program and not options.baselines_only:
        parser.error("name the PROGRAM to measure, or give --baselines-only")
    options.rows = options.rows.split(",")
    unknown = [name for name in options.rows if name not in images.ROWS]
    if unknown:
        parser.error(f"unknown row {unknown[0]}; rows are {', '.join(images.ROWS)}")
    options.work = options.work or pathlib.Path(tempfile.gettempdir()) / "stillfield-restoration"
    if options.work.resolve().is_relative_to(pathlib.Path(__file__).resolve().parents[2]):
        parser.error("--work must lie outside the repository")
    return options


def main():
    options = parse_arguments()
    (options.work / "baselines").mkdir(parents=True, exist_ok=True)
    clean = images.clean_images()
    results = []
    for name in options.rows:
        print(f"{name} ...", file=sys.stderr, flush=True)
        results.append(run_row(images.ROWS[name], clean, options, options.work))
    speed = run_speed(options, options.work) if options.speed and not options.baselines_only else None
    text = report.markdown(results, speed, options.estimated, options.quick)
    print(text)
    if options.markdown:
        options.markdown.write_text(text + "\n")


if __name__ == "__main__":
    main()
