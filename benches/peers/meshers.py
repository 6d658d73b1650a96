"""The mesher beside the Triangle and gmsh libraries on the committed sections, one core, in turns; writes results/meshers.{json,md}.

Fair: the others are given the boundary as our mesh divides it, so they need not divide arcs; 28 degrees; one largest area, that of the
equilateral triangle with sides of our size. Ours is timed from the drawing to the checked mesh, with size field, curves and adjacency;
of the others the meshing call alone. Every mesh must cover the section's area. Counts of triangles differ, so rates are compared.

Usage: meshers.py PROGRAM [REPEATS], PROGRAM being the built `sections`.
"""

import os
import subprocess
import sys
import json

import numpy as np

import gmsh_library
import triangle_library
from report import machine, median, spread, table, versions, write
from served import Served

# Frontal meshing takes minutes where the others take a second.
LARGEST_FOR_GMSH = 100_000


def angles(points, triangles):
    """Least angle of every triangle in degrees, and the area they cover."""
    a, b, c = (points[triangles[:, k]] for k in range(3))

    def at(p, q, r):
        u, v = q - p, r - p
        return np.degrees(np.arctan2(np.abs(u[:, 0] * v[:, 1] - u[:, 1] * v[:, 0]), (u * v).sum(1)))

    u, v = b - a, c - a
    area = 0.5 * np.abs(u[:, 0] * v[:, 1] - u[:, 1] * v[:, 0]).sum()
    return np.minimum(at(a, b, c), np.minimum(at(b, c, a), at(c, a, b))), area


def enclosed(boundary):
    """Area inside the outer boundary, m^2."""
    p = np.array(boundary["points"])
    edges = [(a, b) if right < 0 else (b, a) for a, b, left, right in boundary["segments"] if min(left, right) < 0]
    a, b = (p[[e[k] for e in edges]] for k in (0, 1))
    return 0.5 * float((a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0]).sum())


def measured(library, boundary):
    """One mesh of a peer in the form of our program's answers."""
    seconds, points, triangles = library.mesh(boundary)
    least, area = angles(points, triangles)
    wanted = enclosed(boundary)
    assert abs(area - wanted) < 1e-9 * wanted, f"{library.__name__}: covers {area} m^2 of {wanted} m^2"
    return {
        "seconds": seconds,
        "triangles": len(triangles),
        "min_angle_deg": float(least.min()),
        "mean_angle_deg": float(least.mean()),
        "share_below_30": float((least < 30).mean()),
        "share_30_to_40": float(((least >= 30) & (least < 40)).mean()),
    }


def summary(runs):
    """Median time, rate in million triangles a second, and the quality of the last run (all are the same mesh)."""
    seconds = [run["seconds"] for run in runs]
    rate = 1e-6 * runs[-1]["triangles"] / median(seconds)
    return {**runs[-1], "seconds": median(seconds), "spread": spread(seconds), "million_per_second": rate}


def compare(ours, name, boundary, repeats):
    """Our mesh and the peers' in turns, so that a disturbance meets all alike."""
    libraries = {"Triangle": triangle_library}
    runs = {"coilwright": [], "Triangle": []}
    for _ in range(repeats):
        runs["coilwright"].append(ours.ask(name))
        for peer, library in libraries.items():
            runs[peer].append(measured(library, boundary))
    if runs["Triangle"][0]["triangles"] <= 2 * LARGEST_FOR_GMSH:
        runs["gmsh"] = [measured(gmsh_library, boundary)]
    return {mesher: summary(own) for mesher, own in runs.items()}


def row(name, mesher, s, ratios):
    return [
        name, mesher, s["triangles"], f"{s['seconds']:.4f}", f"{s['spread']:.2f}", f"{s['million_per_second']:.3f}", *ratios,
        f"{s['min_angle_deg']:.1f}", f"{s['mean_angle_deg']:.1f}",
        f"{100 * s['share_below_30']:.2f}", f"{100 * s['share_30_to_40']:.2f}",
    ]  # fmt: skip


def report(results, data):
    head = [
        "section", "mesher", "triangles", "median s", "spread", "million/s", "rate, ours/peer", "time, peer/ours",
        "least angle", "mean least", "% below 30", "% 30 to 40",
    ]  # fmt: skip
    rows = [head]
    for name, meshers in results.items():
        own = meshers["coilwright"]
        for mesher, s in meshers.items():
            rate, time = own["million_per_second"] / s["million_per_second"], s["seconds"] / own["seconds"]
            ratios = ["", ""] if mesher == "coilwright" else [f"{rate:.2f}", f"{time:.2f}"]
            rows.append(row(name, mesher, s, ratios))
    note = (
        "Rates in triangles a second on one core, medians of interleaved runs (gmsh: one run); spread is the slowest run over the "
        "fastest. For the same sizes the peers make more triangles, hence the two ratios. "
        "Angles in degrees; `skin` sections have strips, which only ours can make: their angles are those of triangles away "
        "from strips."
    )
    facts = ", ".join(f"{key} {value}" for key, value in {**data["machine"], **data["versions"]}.items())
    return f"# Meshers\n\n{note}\n\n{facts}\n\n{table(rows)}"


def main(program, repeats=5):
    os.sched_setaffinity(0, {max(os.sched_getaffinity(0))})
    environment = {**os.environ, "RAYON_NUM_THREADS": "1"}

    def output(*arguments):
        return subprocess.run([program, *arguments], env=environment, check=True, capture_output=True, text=True).stdout

    data = {"machine": machine(), "versions": versions("triangle", "gmsh"), "repeats": repeats}
    results = {}
    with Served([program, "serve"], environment) as ours:
        for name in output("list").split():
            if name.endswith("/skin"):
                results[name] = {"coilwright": summary([ours.ask(name) for _ in range(repeats)])}
            else:
                results[name] = compare(ours, name, json.loads(output("boundary", name)), repeats)
    write("meshers", {**data, "results": results}, report(results, data))


if __name__ == "__main__":
    main(sys.argv[1], *map(int, sys.argv[2:]))
