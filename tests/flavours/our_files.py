"""What the program writes, read by tifffile, Pillow and libtiff's tools."""

import json
import xml.etree.ElementTree as ElementTree

import numpy
import tifffile
from PIL import Image

import cases
from tiff_flavours import samples

SCHEMA = "{http://www.openmicroscopy.org/Schemas/OME/2016-06}"
SIDE = 24


def scene(dtype, shape):
    """Two levels and noise, in the middle of the type's range."""
    level = numpy.add.outer(numpy.arange(SIDE) // 12, numpy.arange(SIDE) // 12) % 2
    noise = samples("f4", shape, seed=5) / 1000
    kind = numpy.dtype(dtype)
    low, step = {"u1": (60, 100), "i1": (-60, 90), "i2": (-9000, 8000), "u2": (9000, 8000),
                 "i4": (-90000, 70000), "u4": (90000, 70000), "f4": (0.25, 0.5)}[dtype]
    level = level.reshape((SIDE, SIDE) + (1,) * (len(shape) - 2)) if len(shape) == 3 else level
    values = low + step * (level + 0.1 * noise)
    return values.astype(kind) if kind.kind == "f" else numpy.rint(values).astype(kind)


def make_inputs(folder):
    """{file stem: (dtype of the restored image, shape, OME?)}"""
    inputs = {}
    folder.mkdir()
    for dtype in ("u1", "i1", "u2", "i2", "u4", "i4", "f4"):
        tifffile.imwrite(folder / f"{dtype}.tif", scene(dtype, (SIDE, SIDE)), metadata=None,
                         photometric="minisblack", resolution=(20000, 20000),
                         resolutionunit="CENTIMETER")
        inputs[dtype] = dtype, (SIDE, SIDE), False
    tifffile.imwrite(folder / "rgb.tif", scene("u2", (SIDE, SIDE, 3)), photometric="rgb",
                     metadata=None, resolution=(20000, 20000), resolutionunit="CENTIMETER")
    inputs["rgb"] = "u2", (SIDE, SIDE, 3), False
    stack = numpy.stack([scene("u2", (SIDE, SIDE))] * 2)
    tifffile.imwrite(folder / "stack.ome.tif", stack, ome=True, photometric="minisblack",
                     metadata={"axes": "CYX", "PhysicalSizeX": 0.5, "PhysicalSizeY": 0.5,
                               "PhysicalSizeZ": 2.0,
                               "Channel": {"Name": ["nuclei & <walls>", "\u00b5-tubules"]}})
    for page in (1, 2):
        inputs[f"stack.ome.page00{page}"] = "u2", (SIDE, SIDE), True
    return inputs


def same(a, b):
    return a.shape == b.shape and numpy.array_equal(a, b, equal_nan=True)


def other_readers(file, seen):
    """Compares tifffile, Pillow where it knows the samples, and tiffcp with our own reading."""
    problems = []
    with tifffile.TiffFile(file) as tiff:
        arrays = [page.asarray() for page in tiff.pages]
    plain = file.with_name(file.name + ".plain.tif")
    cases.run("tiffcp", "-c", "none", file, plain)
    with tifffile.TiffFile(plain) as tiff:
        copies = [page.asarray() for page in tiff.pages]
    plain.unlink()
    if isinstance(seen, str) or len(arrays) != len(seen[0]):
        return [f"{file.name}: our reader sees {seen}"]
    for number, (array, copied, ours) in enumerate(zip(arrays, copies, seen[0])):
        if not same(array.astype("f4"), ours):
            problems.append(f"{file.name}: tifffile reads page {number} otherwise")
        if not same(array, copied):
            problems.append(f"{file.name}: tiffcp reads page {number} otherwise")
        if array.ndim == 2 and array.dtype.name in ("uint8", "uint16", "int32", "float32"):
            with Image.open(file) as image:
                image.seek(number)
                if not same(numpy.asarray(image).astype("f4"), ours):
                    problems.append(f"{file.name}: Pillow reads page {number} otherwise")
    return problems


def check_resolution(file, um):
    with tifffile.TiffFile(file) as tiff:
        tags = tiff.pages[0].tags
        top, bottom = tags["XResolution"].value
        if int(tags["ResolutionUnit"].value) != 3 or abs(10000 / (top / bottom) / um - 1) > 1e-6:
            return [f"{file.name}: resolution {top}/{bottom}"]
    return []


def check_ome(file, names):
    """Sizes, names and places by ElementTree and tifffile, and the order the schema asks for."""
    with tifffile.TiffFile(file) as tiff:
        problems = [] if tiff.is_ome else [f"{file.name}: tifffile sees no OME"]
        root = ElementTree.fromstring(tiff.ome_metadata)
        pages = len(tiff.pages)
        axes = tiff.series[0].axes
        shape = tiff.series[0].shape
    if shape != ((pages, SIDE, SIDE) if pages > 1 else (SIDE, SIDE)):
        problems.append(f"{file.name}: tifffile sees the shape {shape} of {axes}")
    image, = root
    pixels, = image
    tags = [child.tag.removeprefix(SCHEMA) for child in pixels]
    if (root.tag, image.tag, pixels.tag) != tuple(SCHEMA + name for name in
                                                  ("OME", "Image", "Pixels")):
        problems.append(f"{file.name}: elements {root.tag} {image.tag} {pixels.tag}")
    if tags != ["Channel"] * len(names) + ["TiffData"] * pages:
        problems.append(f"{file.name}: Pixels holds {tags}")
    # Required by the schema 2016-06 (elements Image and Pixels), beside what must come back.
    if image.get("ID") != "Image:0" or pixels.get("ID") != "Pixels:0":
        problems.append(f"{file.name}: no ID")
    wanted = {"SizeX": str(SIDE), "SizeY": str(SIDE), "SizeZ": "1", "SizeC": str(len(names)),
              "SizeT": "1", "DimensionOrder": "XYZCT", "PhysicalSizeX": "0.5",
              "PhysicalSizeY": "0.5", "PhysicalSizeZ": "2", "PhysicalSizeXUnit": "\u00b5m"}
    for key, value in wanted.items():
        if pixels.get(key) != value:
            problems.append(f"{file.name}: {key} is {pixels.get(key)}, not {value}")
    with tifffile.TiffFile(file) as tiff:
        if pixels.get("Type").replace("float", "float32") != tiff.pages[0].dtype.name:
            problems.append(f"{file.name}: type {pixels.get('Type')}")
    got = [channel.get("Name") for channel in pixels.iter(SCHEMA + "Channel")]
    if got != names:
        problems.append(f"{file.name}: channels {got}, not {names}")
    return problems


def check(program, stillfield, folder):
    inputs = make_inputs(folder / "ours")
    out = folder / "results"
    cases.run(stillfield, "denoise", folder / "ours", "--prior", "smooth", "--quick", "--samples",
              "2", "--out", out / "denoise", "--quiet", "--threads", "1")
    cases.run(stillfield, "segment", folder / "ours", "--classes", "2", "--quick", "--no-bootstrap",
              "--out", out / "segment", "--quiet", "--threads", "1")
    files = sorted([*out.glob("*/*.tif")])
    seen = cases.dump(program, [str(file) for file in files])
    problems = []
    for file in files:
        problems += other_readers(file, seen[str(file)])
        stem = next(name for name in inputs if file.name.startswith(name + "."))
        dtype, shape, is_ome = inputs[stem]
        problems += check_resolution(file, 0.5)
        kind = file.name.removeprefix(stem + ".")
        with tifffile.TiffFile(file) as tiff:
            page = tiff.pages[0]
            if kind == "restored.tif" and (page.dtype, page.shape) != (numpy.dtype(dtype), shape):
                problems.append(f"{file.name}: {page.dtype} {page.shape}")
        if is_ome:
            channel = "nuclei & <walls>" if stem.endswith("1") else "\u00b5-tubules"
            names = {"probability.tif": ["class 1", "class 2"],
                     "draws.tif": ["draw 1", "draw 2"]}.get(kind, [channel])
            problems += check_ome(file, names)
    for png in sorted(out.glob("*/*.png")):
        with Image.open(png) as image:
            if image.size != (SIDE, SIDE):
                problems.append(f"{png.name}: {image.size}")
    expected = len(inputs) * (5 + 3)  # restored, sd, bounds, draws; labels, probability, entropy
    if len(files) != expected:
        problems.append(f"{len(files)} files were written, not {expected}")
    record = json.loads((out / "denoise" / "stack.ome.page002.record.json").read_text())["input"]
    if (record["pixel_size_um"], record["pixel_size_from"]) != (0.5, "OME metadata"):
        problems.append(f"the record has {record}")
    if record["plane"] != "z 1 of 1, channel 2 of 2 (\u00b5-tubules), time 1 of 1":
        problems.append(f"the record has {record}")
    return len(files), problems
