"""Writes regions.txt: components and their shape, of label images made by a rule, by scikit-image.

The values in the repository were written with scikit-image 0.19.3, numpy 1.24.2.
usage: python3 tests/measure/regions_reference.py > tests/measure/golden/regions.txt
"""
import numpy as np
import skimage
from skimage.measure import label, perimeter_crofton, regionprops

# image(x, y) = class 2 where a sum of three waves of whole-number phase is positive, else 1; waves
# are triangles with integer values, so that every language makes the same image.


def triangle(t, period):
    t = t % period
    return np.minimum(t, period - t) * 4 - period


def image(width, height, a, b, c):
    y, x = np.mgrid[0:height, 0:width]
    s = triangle(3 * x + 2 * y, a) + triangle(x - 4 * y + 1000 * b, b) + triangle(x * y, c)
    return np.where(s > 0, 2, 1)


print(f"# Written by tests/measure/regions_reference.py with scikit-image {skimage.__version__}, "
      f"numpy {np.__version__}.")
print("# case width height period-a period-b period-c connectivity pixels regions")
print("# area left top box-width box-height centroid-x centroid-y diameter crofton-perimeter")
for width, height, a, b, c in [(64, 48, 31, 37, 17), (97, 80, 61, 53, 41), (33, 120, 23, 97, 29)]:
    picture = image(width, height, a, b, c) == 2
    for connectivity in (4, 8):
        regions = regionprops(label(picture, connectivity=1 if connectivity == 4 else 2))
        print("case", width, height, a, b, c, connectivity, picture.sum(), len(regions))
        for r in regions:
            top, left, bottom, right = r.bbox
            crofton = perimeter_crofton(r.image, directions=4)
            print(int(r.area), left, top, right - left, bottom - top, r.centroid[1], r.centroid[0],
                  r.equivalent_diameter_area, crofton)
