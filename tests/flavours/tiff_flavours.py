"""TIFF, BigTIFF and OME-TIFF by tifffile, libtiff's tiffcp and Pillow."""

import numpy
import tifffile
from PIL import Image

from cases import Case, Refusal, run

TYPES = ["u1", "i1", "u2", "i2", "u4", "i4", "f4", "f8"]
HEIGHT, WIDTH = 37, 50


def samples(dtype, shape, seed=1):
    """Values over the whole range of the type, both ends included."""
    rng = numpy.random.default_rng(seed)
    kind = numpy.dtype(dtype)
    if kind.kind == "f":
        values = rng.normal(size=shape) * 1000
    else:
        info = numpy.iinfo(kind)
        values = rng.integers(info.min, info.max, size=shape, endpoint=True)
        values.flat[0], values.flat[1] = info.min, info.max
    return values.astype(kind)


def grey(dtype, seed=1):
    return samples(dtype, (HEIGHT, WIDTH), seed)


def colour(dtype, channels=3):
    return samples(dtype, (HEIGHT, WIDTH, channels))


def facts(dtype):
    kind = numpy.dtype(dtype)
    return {"kind": kind.kind, "bits": 8 * kind.itemsize}


def read_by_tifffile(file):
    with tifffile.TiffFile(file) as tiff:
        pages = []
        for page in tiff.pages:
            array = page.asarray()
            planar = page.planarconfig == 2 and page.samplesperpixel > 1
            array = numpy.moveaxis(array, 0, 2) if planar else array
            pages.append(array[..., :3] if array.ndim == 3 else array)
        return pages


def by_tifffile(folder):
    """Every type in either byte order, classic and big, in strips and tiles."""
    for dtype in TYPES:
        for order in "<>":
            for big in (False, True):
                for layout in ({"rowsperstrip": 5}, {"tile": (16, 32)}):
                    name = f"{dtype}{'le' if order == '<' else 'be'}{'8' if big else ''}"
                    file = folder / f"tifffile-{name}-{list(layout)[0]}.tif"
                    tifffile.imwrite(file, grey(dtype), byteorder=order, bigtiff=big,
                                     photometric="minisblack", metadata=None, **layout)
                    yield Case(file, read_by_tifffile(file), "tifffile", **facts(dtype))
    for dtype in ("u1", "u2", "f4"):
        for planar in ("contig", "separate"):
            for channels in (3, 4):
                for layout in ({"rowsperstrip": 5}, {"tile": (16, 32)}):
                    file = folder / (f"tifffile-rgb{channels}-{dtype}-{planar}-"
                                     f"{list(layout)[0]}.tif")
                    image = colour(dtype, channels)
                    if planar == "separate":
                        image = numpy.moveaxis(image, 2, 0)
                    tifffile.imwrite(file, image, photometric="rgb", planarconfig=planar,
                                     compression="zlib", metadata=None, **layout,
                                     extrasamples=["unassalpha"] if channels == 4 else None)
                    yield Case(file, read_by_tifffile(file), "tifffile", **facts(dtype))
    file = folder / "tifffile-pages.tif"
    with tifffile.TiffWriter(file) as tiff:
        for number, dtype in enumerate(("u1", "f4", "u2")):
            tiff.write(grey(dtype, number), photometric="minisblack", metadata=None)
    yield Case(file, read_by_tifffile(file), "tifffile")
    for dtype, top in (("u1", 255), ("u2", 65535)):
        file = folder / f"tifffile-miniswhite-{dtype}.tif"
        tifffile.imwrite(file, grey(dtype), photometric="miniswhite", metadata=None)
        stored = read_by_tifffile(file)[0].astype(float)  # as stored: zero is white
        yield Case(file, [top - stored], "tifffile", **facts(dtype))
    file = folder / "tifffile-dpi.tif"
    tifffile.imwrite(file, grey("u1"), resolution=(40000, 40000), resolutionunit="CENTIMETER",
                     photometric="minisblack", metadata=None)
    yield Case(file, read_by_tifffile(file), "tifffile", pixel_um=0.25, source="resolution tags")


def by_tiffcp(folder):
    """The same pixels through every codec and layout of libtiff's own copier.

    Read by tifffile, whose decoders for deflate and PackBits are not libtiff's; where it has none,
    by tiffcp itself into an uncompressed file. Lossless copies must hold the pixels of the source."""
    def copy(source, name, *options, want=None):
        file = folder / f"tiffcp-{name}.tif"
        run("tiffcp", *options, source, file)
        reader = "tifffile"
        try:
            pages = read_by_tifffile(file)
        except ValueError:
            plain = folder / f"plain-{name}.tif"
            run("tiffcp", "-c", "none", "-s", file, plain)
            pages, reader = read_by_tifffile(plain), "tiffcp"
        if want is not None and not numpy.array_equal(pages[0], want):
            raise SystemExit(f"flavours: {reader} reads {file.name} otherwise than its source")
        return Case(file, pages, reader)

    layouts = {"strips": ["-s", "-r", "5"], "tiles": ["-t", "-w", "32", "-l", "16"]}
    for dtype in TYPES:
        source = folder / f"source-{dtype}.tif"
        tifffile.imwrite(source, grey(dtype), photometric="minisblack", metadata=None)
        codecs = ["none", "lzw", "zip", "packbits"] + ["zstd", "lzma"] * (dtype in ("u2", "f4"))
        codecs += ["zip:3"] if dtype in ("f4", "f8") else ["lzw:2", "zip:2"]
        for codec in codecs:
            for layout, options in layouts.items():
                yield copy(source, f"{dtype}-{codec.replace(':', '')}-{layout}", "-c", codec,
                           *options, want=grey(dtype))
        yield copy(source, f"{dtype}-big-be", "-c", "lzw", "-8", "-B", want=grey(dtype))
    for dtype in ("u1", "u2"):
        for planar in ("contig", "separate"):  # tiffcp changes it for 8 bits only
            source = folder / f"source-rgb-{dtype}-{planar}.tif"
            image = colour(dtype)
            tifffile.imwrite(source, image if planar == "contig" else numpy.moveaxis(image, 2, 0),
                             photometric="rgb", planarconfig=planar, metadata=None)
            for layout, options in layouts.items():
                if (dtype, planar, layout) == ("u2", "separate", "tiles"):
                    continue  # tiffcp writes other pixels than it was given
                for codec in ("none", "lzw:2", "zip:2", "packbits"):
                    yield copy(source, f"rgb-{dtype}-{planar}-{codec.replace(':', '')}-{layout}",
                               "-c", codec, "-p", planar, *options, want=colour(dtype))
    smooth = numpy.add.outer(numpy.arange(HEIGHT), numpy.arange(WIDTH)).astype("u1")
    tifffile.imwrite(folder / "smooth.tif", smooth, photometric="minisblack", metadata=None)
    tifffile.imwrite(folder / "smooth-rgb.tif", numpy.dstack([smooth, smooth * 2, smooth // 2]),
                     photometric="rgb", metadata=None)
    for source in ("smooth", "smooth-rgb"):
        for codec in ("jpeg", "jpeg:r"):
            for layout, options in (("strips", ["-s", "-r", "16"]),
                                    ("tiles", ["-t", "-w", "32", "-l", "16"])):
                yield copy(folder / f"{source}.tif", f"{source}-{codec.replace(':', '')}-{layout}",
                           "-c", codec, *options)
    Image.fromarray(smooth % 7 < 3).save(folder / "bilevel.tif")
    for codec in ("none", "g3", "g3:2d", "g4", "lzw", "packbits"):
        for order in ("lsb2msb", "msb2lsb"):
            yield copy(folder / "bilevel.tif", f"bilevel-{codec.replace(':', '')}-{order}",
                       "-c", codec, "-f", order)


def by_pillow(folder):
    """Pillow's modes, read by Pillow."""
    base = Image.fromarray(grey("u1"))
    images = {"1": base.convert("1"), "L": base, "I;16": Image.fromarray(grey("u2")),
              "I": Image.fromarray(grey("i4")), "F": Image.fromarray(grey("f4")),
              "RGB": Image.fromarray(colour("u1")), "LA": base.convert("LA"),
              "RGBA": Image.fromarray(colour("u1", 4), "RGBA")}
    for mode, image in images.items():
        for compression in (None, "tiff_lzw", "tiff_adobe_deflate", "packbits"):
            file = folder / f"pillow-{mode.replace(';', '')}-{compression}.tif"
            image.save(file, compression=compression, dpi=(300, 300))
            with Image.open(file) as again:
                array = numpy.asarray(again)
            array = array[..., 0] if mode == "LA" else array[..., :3] if array.ndim == 3 else array
            yield Case(file, [array], "Pillow", pixel_um=25400 / 300, source="resolution tags")
    file = folder / "pillow-P.tif"
    Image.fromarray(colour("u1")).quantize(16).save(file)
    with Image.open(file) as again:
        rgb = numpy.asarray(again.convert("RGB")).astype(float)
    # Palettes always become luminance (ITU-R BT.601-7).
    yield Case(file, [0.299 * rgb[..., 0] + 0.587 * rgb[..., 1] + 0.114 * rgb[..., 2]], "Pillow")


def ome_by_tifffile(folder):
    """Axes in several orders: the page at (z, c, t) holds the plane of that place."""
    sizes = {"T": 2, "C": 3, "Z": 4}
    for axes in ("TCZ", "ZCT", "CTZ", "CZ", "T"):
        shape = tuple(sizes[axis] for axis in axes) + (HEIGHT, WIDTH)
        stack = samples("u2", shape)
        file = folder / f"tifffile-{axes}.ome.tif"
        metadata = {"axes": axes + "YX", "PhysicalSizeX": 325.0, "PhysicalSizeXUnit": "nm",
                    "PhysicalSizeY": 0.325, "PhysicalSizeYUnit": "\u00b5m", "PhysicalSizeZ": 1.5}
        if "C" in axes:
            metadata["Channel"] = {"Name": ["first", "second", "third"]}
        tifffile.imwrite(file, stack, ome=True, photometric="minisblack", metadata=metadata)
        with tifffile.TiffFile(file) as tiff:
            series = tiff.series[0]
            planes = series.asarray().reshape(-1, HEIGHT, WIDTH)
            order = [axis for axis in series.axes if axis in "TCZ"]
        places = []
        for index in numpy.ndindex(*[sizes[axis] for axis in order]):
            place = dict(zip(order, index))
            places.append((place.get("Z", 0), place.get("C", 0), place.get("T", 0)))
        yield Case(file, planes, "tifffile", pixel_um=0.325, source="OME metadata",
                   places=places, **facts("u2"))


def refused(folder):
    def write(name, array, words, **options):
        file = folder / f"refused-{name}.tif"
        tifffile.imwrite(file, array, metadata=None, **options)
        return Refusal(file, words)

    yield write("u8", samples("u4", (5, 6)).astype("u8"), "64 bits cannot be read",
                photometric="minisblack")
    yield write("f2", samples("f4", (5, 6)).astype("f2"), "16 bits cannot be read",
                photometric="minisblack")
    yield write("complex", samples("f4", (5, 6)).astype("c8"), "cannot be read",
                photometric="minisblack")
    yield write("five-channels", colour("u1", 5), "5 channels that are not grey or RGB",
                photometric="minisblack", planarconfig="contig")
    yield write("cmyk", colour("u1", 4), "colour model 5 cannot be read",
                photometric="separated")
    yield write("lab", colour("u1"), "colour model 8 cannot be read", photometric="cielab")
    yield write("miniswhite-f4", grey("f4"), "zero is white", photometric="miniswhite")
    yield write("miniswhite-i2", grey("i2"), "zero is white", photometric="miniswhite")


def everything(folder):
    for maker in (by_tifffile, by_tiffcp, by_pillow, ome_by_tifffile, refused):
        yield from maker(folder)
