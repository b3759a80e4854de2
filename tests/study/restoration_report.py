"""Markdown tables and verdicts for restoration.py, from the results of its run_row and run_speed.

Targets. Noise level given: the mean gain over the best of the four filters for each image (non-local
means, total variation, wavelet, bilateral) at least +1.0 dB in every row, no image below -0.1 dB, mean SSIM not below any filter's; nominal 90 % intervals cover .87 to .96 of
all pixels of a row and at least .86 of its strongest edges. Noise level estimated: mean gain at least
+0.8 dB. Speed on two cores: 40 seconds per megapixel; with --quick 6 seconds and at most 0.4 dB lost;
at most 200 bytes of memory per pixel.
"""
import statistics

FAMILIES = ("nlm", "tv", "wavelet", "bilateral")  # those the targets speak of
TITLES = ("NLM", "TV", "wavelet", "bilateral")
WITH_SHIFTED = (*FAMILIES, "shifted")  # and one that is harder to beat


def table(header, rows):
    lines = ["| " + " | ".join(header) + " |", "|" + "---|" * len(header)]
    return "\n".join(lines + ["| " + " | ".join(row) + " |" for row in rows]) + "\n"


def best_filter(image, families=FAMILIES):
    return max(families, key=lambda family: image["baselines"][family]["psnr"])


def best_psnr(image, families=FAMILIES):
    return image["baselines"][best_filter(image, families)]["psnr"]


def gain(image, families=FAMILIES):
    return image["ours"]["psnr"] - best_psnr(image, families)


def mean(values):
    return statistics.fmean(values)


def share(value):
    """.912 for 0.912, 1.000 for 1."""
    return f"{value:.3f}".removeprefix("0")


def edge_coverage(pictures):
    """Coverage pooled over the edge pixels of one or more images."""
    covered = sum(image["ours"]["edge_covered"] for image in pictures)
    return covered / sum(image["ours"]["edge_pixels"] for image in pictures)


def baseline_means(result, figure, families=FAMILIES):
    return [mean(i["baselines"][family][figure] for i in result["images"]) for family in families]


def psnr_table(results, measured):
    header = ["row", "noisy", *TITLES, "shifted wavelet", "best of the four, each image"]
    header += ["**ours**", "gain, mean", "of photographs", "min..max", "worst image",
               "gain over shifted wavelets too", "min..max"] if measured else []
    rows = []
    for result in results:
        pictures = result["images"]
        row = [result["row"], f"{mean(i['noisy'] for i in pictures):.2f}"]
        row += [f"{value:.2f}" for value in baseline_means(result, "psnr", WITH_SHIFTED)]
        row.append(f"{mean(map(best_psnr, pictures)):.2f}")
        if measured:
            gains = [gain(i) for i in pictures]
            row += [f"**{mean(i['ours']['psnr'] for i in pictures):.2f}**", f"{mean(gains):+.2f}",
                    f"{mean(gain(i) for i in pictures if i['photograph']):+.2f}",
                    f"{min(gains):+.2f}..{max(gains):+.2f}", min(pictures, key=gain)["name"]]
            harder = [gain(i, WITH_SHIFTED) for i in pictures]
            row += [f"{mean(harder):+.2f}", f"{min(harder):+.2f}..{max(harder):+.2f}"]
        rows.append(row)
    return table(header, rows)


def ssim_table(results, measured):
    rows = []
    for result in results:
        row = [result["row"], *(share(value) for value in baseline_means(result, "ssim", WITH_SHIFTED))]
        rows.append(row + ([share(mean(i["ours"]["ssim"] for i in result["images"]))] if measured else []))
    return table(["row", *TITLES, "shifted wavelet"] + (["**ours**"] if measured else []), rows)


def coverage_table(results):
    header = ["row", "pooled", "strongest edges", "per image", "edges per image",
              "mean width / s", "sd / rms error"]
    rows = []
    for result in results:
        pictures = result["images"]
        every = [i["ours"]["coverage"] for i in pictures]
        edges = [edge_coverage([i]) for i in pictures]
        rows.append([result["row"], share(mean(every)), share(edge_coverage(pictures)),
                     f"{share(min(every))} to {share(max(every))}", f"{share(min(edges))} to {share(max(edges))}",
                     f"{mean(i['ours']['width'] for i in pictures):.2f}",
                     f"{mean(i['ours']['sd_over_error'] for i in pictures):.2f}"])
    return table(header, rows)


def seconds_per_megapixel(times):
    return 1e6 * times["wall"] / times["pixels"]


def speed_table(results, speed):
    header = ["images", "ours, seconds per megapixel", "processor time", "OpenCV NLM", "scikit-image NLM",
              "ours / OpenCV", "ours / scikit-image", "peak memory, MB"]
    entries = [(f"{len(r['images'])} of 256², {r['row']}", r["times"]) for r in results]
    entries += [("1 of 1024², sigma25", speed)] if speed else []
    rows = []
    for title, times in entries:
        scale = 1e6 / times["pixels"]
        rows.append([title, f"{times['wall'] * scale:.2f}", f"{times['processor'] * scale:.2f}",
                     f"{times['opencv'] * scale:.2f}", f"{times['skimage'] * scale:.2f}",
                     f"{times['wall'] / times['opencv']:.1f}", f"{times['wall'] / times['skimage']:.1f}",
                     f"{times['peak'] / 1e6:.0f}"])
    return table(header, rows)


def tuned_settings(image):
    """The best filter of an image with its settings, in words."""
    found = image["baselines"][best_filter(image)]
    settings = ", ".join(f"{key} {value}" for key, value in found["settings"].items())
    domain = "" if found["domain"] == "direct" else f" ({found['domain']})"
    return f"{dict(zip(FAMILIES, TITLES))[best_filter(image)]}{domain}: {settings}"


def image_table(result, measured):
    header = ["image", *TITLES, "shifted wavelet", "best SSIM"]
    header += ["ours", "gain", "SSIM", "coverage", "edges", "width / s"] if measured else []
    rows = []
    for image in result["images"]:
        row = [image["name"], *(f"{image['baselines'][family]['psnr']:.2f}" for family in WITH_SHIFTED),
               share(max(image["baselines"][family]["ssim"] for family in WITH_SHIFTED))]
        if measured:
            ours = image["ours"]
            row += [f"{ours['psnr']:.2f}", f"{gain(image):+.2f}", share(ours["ssim"]),
                    share(ours["coverage"]), share(edge_coverage([image])), f"{ours['width']:.2f}"]
        rows.append(row + [tuned_settings(image)])
    return table(header + ["best filter's settings"], rows)


def verdict(name, value, text, met, wanted):
    return f"- {name}: {text.format(value)} ({wanted}): {'met' if met else 'NOT MET'}"


def quality_verdicts(result, estimated):
    pictures, row = result["images"], result["row"]
    average, least = mean(map(gain, pictures)), 0.8 if estimated else 1.0
    lines = [verdict(f"{row}, mean gain", average, "{:+.2f} dB", average >= least,
                     f"at least {least:+.1f} dB")]
    if estimated:
        return lines
    worst = min(pictures, key=gain)
    lines.append(verdict(f"{row}, worst image {worst['name']}", gain(worst), "{:+.2f} dB",
                         gain(worst) >= -0.1, "at least -0.1 dB"))
    ours, theirs = mean(i["ours"]["ssim"] for i in pictures), max(baseline_means(result, "ssim", WITH_SHIFTED))
    lines.append(verdict(f"{row}, mean SSIM", ours, "{:.4f}", ours >= theirs, f"at least {theirs:.4f}"))
    return lines


def coverage_verdicts(result):
    pooled = mean(i["ours"]["coverage"] for i in result["images"])
    edges = edge_coverage(result["images"])
    return [verdict(f"{result['row']}, pooled coverage", pooled, "{:.3f}", 0.87 <= pooled <= 0.96,
                    ".87 to .96"),
            verdict(f"{result['row']}, coverage at edges", edges, "{:.3f}", edges >= 0.86,
                    "at least .86")]


def speed_verdicts(results, speed, quick):
    lines = []
    for title, times in [(r["row"], r["times"]) for r in results] + ([("1024²", speed)] if speed else []):
        value, most = seconds_per_megapixel(times), 6 if quick else 40
        lines.append(verdict(f"{title}, seconds per megapixel", value, "{:.1f}", value <= most,
                             f"at most {most}"))
    for result in results:
        lost = result.get("lost_by_quick")
        if lost is not None:
            lines.append(verdict(f"{result['row']}, lost by --quick", lost, "{:.2f} dB", lost <= 0.4,
                                 "at most 0.4 dB"))
    if speed:
        value = speed["peak"] / speed["pixels"]
        lines.append(verdict("1024², peak memory per pixel", value, "{:.0f} bytes", value <= 200, "at most 200"))
    return lines


def markdown(results, speed, estimated, quick):
    """The whole report."""
    measured = results[0]["times"] is not None
    parts = ["# Restoration against tuned filters\n"]
    if measured:
        parts.append(f"Noise level {'estimated by the program' if estimated else 'given to all'}"
                     f"{', --quick' if quick else ''}; filters tuned per image by an oracle.\n")
    parts += ["## Mean PSNR, dB\n", psnr_table(results, measured),
              "## Mean SSIM\n", ssim_table(results, measured)]
    if measured:
        parts += ["## Nominal 90 % intervals\n", coverage_table(results),
                  "## Time\n", speed_table(results, speed)]
        if speed:
            parts.append(f"On the 1024² image: ours {speed['psnr']:.2f} dB, tuned scikit-image NLM "
                         f"{speed['nlm_psnr']:.2f} dB.\n")
    parts.append("## Images, PSNR in dB\n")
    for result in results:
        parts += [f"### {result['row']}\n", image_table(result, measured)]
    if measured:
        lines = [line for result in results for line in quality_verdicts(result, estimated)]
        if not estimated:
            lines += [line for result in results for line in coverage_verdicts(result)]
        lines += speed_verdicts(results, speed, quick)
        parts += ["## Targets\n", "\n".join(lines)]
    return "\n".join(parts)
