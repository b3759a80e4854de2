"""What a file must be read as, and how files are made with other programs."""

import shutil
import subprocess
import sys

import numpy

PACKAGES = {"tiffcp": "libtiff-tools", "tiffinfo": "libtiff-tools", "pamdepth": "netpbm"}


def require_tools():
    missing = [tool for tool in PACKAGES if shutil.which(tool) is None]
    if missing:
        names = sorted({PACKAGES[tool] for tool in missing})
        sys.exit(f"flavours: {', '.join(missing)} not found; install {' '.join(names)}")


def run(*command, stdin=None, stdout_file=None):
    """Standard output of a program that must succeed."""
    done = subprocess.run([str(part) for part in command], input=stdin, capture_output=True)
    if done.returncode != 0:
        sys.exit(f"flavours: {' '.join(map(str, command))}: {done.stderr.decode()}")
    if stdout_file is not None:
        stdout_file.write_bytes(done.stdout)
    return done.stdout


class Case:
    """A file and what its writer's own reader sees: one array a page, H x W or H x W x 3."""

    def __init__(self, file, pages, reader, bits=None, kind=None, pixel_um=None, source=None,
                 places=None):
        self.file = file
        self.pages = [numpy.asarray(page).astype(numpy.float32) for page in pages]
        self.reader = reader  # who said so
        self.bits = bits
        self.kind = kind
        self.pixel_um = pixel_um
        self.source = source
        self.places = places  # (z, c, t) a page


class Refusal:
    """A file that is refused with a sentence that holds `words`."""

    def __init__(self, file, words):
        self.file = file
        self.words = words


def dump(program, files):
    """What the reader makes of the files: {file: (pages, facts)} or {file: sentence}."""
    text = "".join(f"{file}\n" for file in files)
    lines = run(program, stdin=text.encode()).decode().splitlines()
    seen = {}
    for line in lines:
        what, *fields = line.split("\t")
        if what == "file":
            file = fields[0]
            seen[file] = []
        elif what == "refused":
            seen[file] = fields[0]
        else:
            seen[file].append(fields)
    for file, pages in seen.items():
        if isinstance(pages, str):
            continue
        raw = numpy.fromfile(file + ".raw", numpy.float32)
        arrays = []
        at = 0
        for width, height, planes, *_ in pages:
            shape = int(planes), int(height), int(width)
            size = int(numpy.prod(shape))
            planes_read = raw[at:at + size].reshape(shape)
            arrays.append(planes_read[0] if shape[0] == 1 else numpy.moveaxis(planes_read, 0, 2))
            at += size
        assert at == raw.size, file
        seen[file] = arrays, pages
    return seen


def differences(case, seen):
    """Sentences about what is wrong with the reading of a case."""
    if isinstance(seen, str):
        return [f"is refused: {seen}"]
    arrays, facts = seen
    if len(arrays) != len(case.pages):
        return [f"has {len(arrays)} pages, not {len(case.pages)}"]
    wrong = []
    for number, (got, want, fact) in enumerate(zip(arrays, case.pages, facts)):
        if got.shape != want.shape:
            wrong.append(f"page {number} has the shape {got.shape}, not {want.shape}")
        elif not numpy.array_equal(got, want):
            wrong.append(f"page {number} differs in {numpy.sum(got != want)} samples")
        kind, bits, pixel_um, source, place = fact[3:]
        if case.kind is not None and kind != case.kind:
            wrong.append(f"page {number} is of kind {kind}, not {case.kind}")
        if case.bits is not None and int(bits) != case.bits:
            wrong.append(f"page {number} has {bits} bits, not {case.bits}")
        if case.pixel_um is not None:
            if pixel_um == "-" or abs(float(pixel_um) / case.pixel_um - 1) > 1e-6:
                wrong.append(f"page {number} has pixels of {pixel_um} um, not {case.pixel_um}")
            if source != case.source:
                wrong.append(f"page {number} has its pixel size from {source}")
        if case.places is not None:
            want_place = "%d %d %d" % tuple(case.places[number])
            if place != want_place:
                wrong.append(f"page {number} is at {place}, not at {want_place}")
    return wrong
