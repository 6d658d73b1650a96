"""The C function `triangulate` of the Triangle library inside the PyPI package `triangle`, without the package's conversions.

Source of the structure: `triangle.h` of J. R. Shewchuk's Triangle 1.6. Convention: coordinates in metres, 28 degrees, one largest area.
"""

import ctypes
import time

import numpy as np
import triangle.core

LIBRARY = ctypes.CDLL(triangle.core.__file__)
REALS, INTS = ctypes.POINTER(ctypes.c_double), ctypes.POINTER(ctypes.c_int)


class Arrays(ctypes.Structure):
    """`struct triangulateio`."""

    _fields_ = [
        ("points", REALS), ("point_attributes", REALS), ("point_markers", INTS),
        ("point_count", ctypes.c_int), ("point_attribute_count", ctypes.c_int),
        ("triangles", INTS), ("triangle_attributes", REALS), ("triangle_areas", REALS), ("neighbours", INTS),
        ("triangle_count", ctypes.c_int), ("corner_count", ctypes.c_int), ("triangle_attribute_count", ctypes.c_int),
        ("segments", INTS), ("segment_markers", INTS), ("segment_count", ctypes.c_int),
        ("holes", REALS), ("hole_count", ctypes.c_int),
        ("regions", REALS), ("region_count", ctypes.c_int),
        ("edges", INTS), ("edge_markers", INTS), ("normals", REALS), ("edge_count", ctypes.c_int),
    ]  # fmt: skip


def mesh(boundary):
    """Seconds of the call, points (n, 2) and triangles (m, 3) of a mesh with region labels."""
    points = np.ascontiguousarray(boundary["points"], dtype=float)
    segments = np.ascontiguousarray([s[:2] for s in boundary["segments"]], dtype=np.intc)
    markers = np.ones(len(segments), dtype=np.intc)
    # Point inside, label, largest area (unused: one area holds everywhere).
    regions = np.array([[*f["inside"], f["region"], 0.0] for f in boundary["faces"]], dtype=float)
    given, made = Arrays(), Arrays()
    given.points, given.point_count = points.ctypes.data_as(REALS), len(points)
    given.segments, given.segment_count = segments.ctypes.data_as(INTS), len(segments)
    given.segment_markers = markers.ctypes.data_as(INTS)
    given.regions, given.region_count = regions.ctypes.data_as(REALS), len(regions)
    # Quiet, numbers from 0, a planar graph, labels, least angle, largest area (written out: exponents are not read).
    switches = f"QzpAq28a{boundary['max_area_m2']:.20f}".encode()
    start = time.perf_counter()
    LIBRARY.triangulate(switches, ctypes.byref(given), ctypes.byref(made), None)
    seconds = time.perf_counter() - start
    vertices = np.ctypeslib.as_array(made.points, (made.point_count, 2)).copy()
    triangles = np.ctypeslib.as_array(made.triangles, (made.triangle_count, 3)).copy()
    for name, kind in Arrays._fields_:
        # Regions and holes are the caller's own, passed through.
        if kind in (REALS, INTS) and name not in ("holes", "regions"):
            LIBRARY.trifree(ctypes.cast(getattr(made, name), ctypes.c_void_p))
    return seconds, vertices, triangles
