"""Files of independent writers are read as their own readers read them; ours are read by those.

Usage: flavours.py DUMP_PAGES STILLFIELD [FOLDER]    FOLDER: where to leave the files
"""

import collections
import pathlib
import sys
import tempfile

try:
    import numpy  # noqa: F401
    import PIL  # noqa: F401
    import tifffile  # noqa: F401
except ImportError as error:
    sys.exit(f"flavours: {error}; install python3-numpy python3-pil python3-tifffile and run the "
             f"test with the system's Python (this is {sys.executable})")

import cases
import our_files
import raster_flavours
import tiff_flavours


def compare(program, list_of_cases):
    """Number of wrong files, after one line for each."""
    seen = cases.dump(program, [str(case.file) for case in list_of_cases])
    wrong = 0
    for case in list_of_cases:
        got = seen[str(case.file)]
        if isinstance(case, cases.Refusal):
            problems = [] if isinstance(got, str) and case.words in got else [
                f"is not refused with \"{case.words}\" but: {got if isinstance(got, str) else 'read'}"]
        else:
            problems = cases.differences(case, got)
        wrong += bool(problems)
        for problem in problems:
            print(f"{case.file.name}: {problem}")
    return wrong


def main(program, stillfield, folder):
    cases.require_tools()
    list_of_cases = [*tiff_flavours.everything(folder), *raster_flavours.everything(folder)]
    wrong = compare(program, list_of_cases)
    readers = collections.Counter(getattr(case, "reader", "refused") for case in list_of_cases)
    print(f"{len(list_of_cases)} files of other writers, {wrong} wrong; compared with " +
          ", ".join(f"{reader}: {count}" for reader, count in sorted(readers.items())))
    checked, problems = our_files.check(program, stillfield, folder)
    for problem in problems:
        print(problem)
    print(f"{checked} files of ours read by others, {len(problems)} wrong")
    return 1 if wrong or problems else 0


if __name__ == "__main__":
    if len(sys.argv) == 4:
        target = pathlib.Path(sys.argv[3])
        target.mkdir(parents=True, exist_ok=True)
        sys.exit(main(sys.argv[1], sys.argv[2], target))
    with tempfile.TemporaryDirectory() as name:
        sys.exit(main(sys.argv[1], sys.argv[2], pathlib.Path(name)))
