"""The gmsh library on a given boundary. Convention: coordinates in metres; one size everywhere; the boundary keeps its segments.

Its frontal algorithm has no angle limit to set; sizes are those of the boundary, extended inwards, and at most the size asked for.
"""

import time

import gmsh
import numpy as np


def loops(segments):
    """The closed loops of directed segments (label, start, end); labels in order around each loop."""
    leaving = {}
    for label, start, end in segments:
        leaving.setdefault(start, []).append((label, end))
    found = []
    for start in list(leaving):
        while leaving[start]:
            path, at = [], start
            while True:
                label, at = leaving[at].pop()
                path.append(label)
                if at == start:
                    break
            found.append(path)
    return found


def mesh(boundary):
    """Seconds of the call, points (n, 2) and triangles (m, 3)."""
    gmsh.initialize(interruptible=False)
    try:
        for name, value in [("General.Terminal", 0), ("General.NumThreads", 1), ("Mesh.Algorithm", 6)]:
            gmsh.option.setNumber(name, value)
        gmsh.option.setNumber("Mesh.MeshSizeMax", boundary["size_m"])
        kernel = gmsh.model.geo
        for tag, (x, y) in enumerate(boundary["points"], 1):
            kernel.addPoint(x, y, 0.0, 0.0, tag)
        by_face = {}
        for tag, (a, b, left, right) in enumerate(boundary["segments"], 1):
            kernel.addLine(a + 1, b + 1, tag)
            kernel.mesh.setTransfiniteCurve(tag, 2)
            by_face.setdefault(left, []).append((tag, a, b))
            by_face.setdefault(right, []).append((-tag, b, a))
        by_face.pop(-1)
        for segments in by_face.values():
            kernel.addPlaneSurface([kernel.addCurveLoop(path) for path in loops(segments)])
        kernel.synchronize()
        start = time.perf_counter()
        gmsh.model.mesh.generate(2)
        seconds = time.perf_counter() - start
        tags, coordinates, _ = gmsh.model.mesh.getNodes()
        number = np.zeros(int(tags.max()) + 1, dtype=int)
        number[tags] = np.arange(len(tags))
        _, corners = gmsh.model.mesh.getElementsByType(2)
        return seconds, coordinates.reshape(-1, 3)[:, :2].copy(), number[corners].reshape(-1, 3)
    finally:
        gmsh.finalize()
