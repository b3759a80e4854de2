"""PNM and deep PNG by netpbm; PNG, JPEG and BMP by Pillow and netpbm."""

import re

import numpy
from PIL import Image

from cases import Case, Refusal, run
from tiff_flavours import HEIGHT, WIDTH, colour, grey

MAXVALS = [1, 2, 77, 100, 255, 256, 1000, 4095, 65534, 65535]


def netpbm_samples(file, reader=None):
    """What netpbm's own reader sees, from the table it prints."""
    table = run("pamtable", stdin=run(*reader, file) if reader else file.read_bytes()).decode()
    rows = [[int(value) for value in re.findall(r"\d+", line)] for line in table.splitlines()]
    array = numpy.array(rows)
    channels = array.shape[1] // WIDTH
    return array.reshape(HEIGHT, WIDTH, channels) if channels > 1 else array


def plain_text(array, largest):
    """Plain PGM or PPM."""
    kind = "P3" if array.ndim == 3 else "P2"
    words = " ".join(str(value) for value in array.ravel())
    return f"{kind}\n{WIDTH} {HEIGHT}\n{largest}\n{words}\n".encode()


def pnm(folder):
    """Every kind of PNM at any largest value, binary and plain."""
    for kind, array in (("pgm", grey("u2")), ("ppm", colour("u2"))):
        source = folder / f"source.{kind}"
        source.write_bytes(plain_text(array, 65535))
        for largest in MAXVALS:
            raw = folder / f"netpbm-{largest}.{kind}"
            run("pamdepth", largest, source, stdout_file=raw)
            plain = folder / f"netpbm-{largest}-plain.{kind}"
            run("pnmtoplainpnm", raw, stdout_file=plain)
            for file in (raw, plain):
                yield Case(file, [netpbm_samples(file)], "netpbm", kind="u",
                           bits=largest.bit_length())
    for name, command in (("raw", ["pamtopnm"]), ("plain", ["pnmtoplainpnm"])):
        file = folder / f"netpbm-{name}.pbm"
        bitmap = run("pamthreshold", "-simple", folder / "source.pgm")
        run(*command, stdin=run("pamtopnm", stdin=bitmap), stdout_file=file)
        yield Case(file, [netpbm_samples(file)], "netpbm", kind="u", bits=1)
    file = folder / "refused.pam"
    run("pamtopam", stdin=run("pamdepth", 255, folder / "source.ppm"), stdout_file=file)
    yield Refusal(file, "not an image in a known format")


def png(folder):
    for kind in ("pgm", "ppm"):
        for largest, bits in ((1, 1), (3, 2), (15, 4), (255, 8), (65535, 16)):
            if kind == "ppm" and largest < 255:
                continue
            for interlace in ([], ["-interlace"]):
                file = folder / f"netpbm-{kind}-{bits}{''.join(interlace)}.png"
                source = run("pamdepth", largest, folder / f"source.{kind}")
                run("pnmtopng", "-force", *interlace, stdin=source, stdout_file=file)
                yield Case(file, [netpbm_samples(file, ["pngtopam"])], "netpbm", kind="u",
                           bits=bits)
    base = Image.fromarray(grey("u1"))
    images = {"1": base.convert("1"), "L": base, "I;16": Image.fromarray(grey("u2")),
              "RGB": Image.fromarray(colour("u1")), "LA": base.convert("LA"),
              "RGBA": Image.fromarray(colour("u1", 4), "RGBA")}
    for mode, image in images.items():
        file = folder / f"pillow-{mode.replace(';', '')}.png"
        image.save(file, dpi=(300, 300))
        yield Case(file, [pillow_samples(file)], "Pillow", kind="u", source="resolution tags",
                   pixel_um=1e6 / 11811)
    yield palette_case(folder / "pillow-P.png")


def pillow_samples(file):
    with Image.open(file) as image:
        array = numpy.asarray(image)
    if array.ndim == 3:
        return array[..., 0] if array.shape[2] == 2 else array[..., :3]
    return array


def palette_case(file, **options):
    """Palettes always become luminance (ITU-R BT.601-7)."""
    Image.fromarray(colour("u1")).quantize(16).save(file, **options)
    with Image.open(file) as again:
        rgb = numpy.asarray(again.convert("RGB")).astype(float)
    return Case(file, [0.299 * rgb[..., 0] + 0.587 * rgb[..., 1] + 0.114 * rgb[..., 2]], "Pillow")


def jpeg(folder):
    smooth = numpy.add.outer(2 * numpy.arange(HEIGHT), 3 * numpy.arange(WIDTH)).astype("u1")
    images = {"L": Image.fromarray(smooth),
              "RGB": Image.fromarray(numpy.dstack([smooth, 255 - smooth, smooth // 2]))}
    for mode, image in images.items():
        for quality in (30, 95):
            for progressive in (False, True):
                for subsampling in (0, 1, 2):
                    file = folder / f"pillow-{mode}-{quality}-{progressive:d}-{subsampling}.jpg"
                    image.save(file, quality=quality, progressive=progressive,
                               subsampling=subsampling, dpi=(600, 600))
                    yield Case(file, [pillow_samples(file)], "Pillow", kind="u", bits=8,
                               pixel_um=25400 / 600, source="resolution tags")
    file = folder / "refused-cmyk.jpg"
    images["RGB"].convert("CMYK").save(file)
    yield Refusal(file, "4 channels (printing inks)")


def bmp(folder):
    base = Image.fromarray(grey("u1"))
    for mode, image in {"L": base, "RGB": Image.fromarray(colour("u1")),
                        "RGBA": Image.fromarray(colour("u1", 4), "RGBA")}.items():
        file = folder / f"pillow-{mode}.bmp"
        image.save(file, dpi=(300, 300))
        yield Case(file, [pillow_samples(file)], "Pillow", kind="u", bits=8, pixel_um=1e6 / 11811,
                   source="resolution tags")
    yield palette_case(folder / "pillow-P.bmp")
    for variant in ("-windows", "-os2"):
        file = folder / f"netpbm{variant}.bmp"
        run("ppmtobmp", variant, "-bpp=24", stdin=run("pamdepth", 255, folder / "source.ppm"),
            stdout_file=file)
        yield Case(file, [pillow_samples(file)], "Pillow", kind="u", bits=8)
    file = folder / "refused.gif"
    base.save(file)
    yield Refusal(file, "not an image in a known format")


def everything(folder):
    for maker in (pnm, png, jpeg, bmp):
        yield from maker(folder)
