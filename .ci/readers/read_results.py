"""Opens every file of a result folder with readers that are not ours and checks that they agree with each other.

Fields are read by VTK and by meshio, pictures by VTK, tables and JSON by Python's own modules. The areas of the parts are
compared with the shapes in job.json, temperatures with history.csv, and the loss integrated over the workpieces and the
figures of the mesh with summary.json.

Usage: read_results.py FOLDER
"""

import csv
import json
import math
import sys
import xml.etree.ElementTree as ElementTree
from pathlib import Path

import meshio
import numpy as np
import vtk
from vtk.util.numpy_support import vtk_to_numpy

CELL_TYPES = {1: (5, "triangle"), 2: (22, "triangle6"), 3: (69, "VTK_LAGRANGE_TRIANGLE")}
POINT_FIELDS = ["A_phi_re_peak_wb_per_m", "A_phi_im_peak_wb_per_m", "A_phi_abs_peak_wb_per_m", "r_A_re_peak_wb", "r_A_im_peak_wb"]
CELL_FIELDS = ["region", "part", "joule_loss_w_per_m3", "J_phi_re_peak_a_per_m2", "J_phi_im_peak_a_per_m2",
               "B_re_peak_t", "B_im_peak_t", "H_re_peak_a_per_m", "H_im_peak_a_per_m", "force_density_n_per_m3"]
LENGTHS = {"mm": 1e-3, "cm": 1e-2, "m": 1.0, "in": 0.0254, "µm": 1e-6, "um": 1e-6}

checks = 0
failures = []


def check(holds, text):
    """Counts a check and notes it when it fails."""
    global checks
    checks += 1
    if not holds:
        failures.append(text)


def refuse_constant(name):
    raise ValueError(f"{name} in JSON")


def load_json(path):
    return json.loads(path.read_text(encoding="utf-8"), parse_constant=refuse_constant)


def load_table(path):
    """Rows of a CSV file as dictionaries; every row must have as many cells as the header."""
    with path.open(newline="", encoding="utf-8") as file:
        rows = list(csv.reader(file))
    header = rows[0]
    check(len(set(header)) == len(header), f"{path.name}: a column name is used twice")
    for number, row in enumerate(rows[1:], 2):
        check(len(row) == len(header), f"{path.name}: line {number} has {len(row)} cells, the header {len(header)}")
    table = [dict(zip(header, row)) for row in rows[1:]]
    for row in table:
        for name, cell in row.items():
            if cell and name not in ("state", "coil", "stage", "limit_reached"):
                check(math.isfinite(float(cell)), f"{path.name}: {name} = {cell}")
    return table


def vtk_grid(path):
    """The grid as VTK reads it; anything VTK complains about is a failure."""
    complaints = []
    reader = vtk.vtkXMLUnstructuredGridReader()
    for event in ("ErrorEvent", "WarningEvent"):
        reader.AddObserver(event, lambda *_: complaints.append(path.name))
    reader.SetFileName(str(path))
    reader.Update()
    check(not complaints, f"{path.name}: VTK complains")
    return reader.GetOutput()


def vtk_areas(grid):
    """Area of every cell, each split by VTK into straight triangles, m2."""
    sizes = vtk.vtkCellSizeFilter()
    sizes.SetInputData(grid)
    sizes.ComputeVertexCountOff()
    sizes.ComputeLengthOff()
    sizes.ComputeVolumeOff()
    sizes.Update()
    return vtk_to_numpy(sizes.GetOutput().GetCellData().GetArray("Area"))


def metres(text):
    number, unit = text.split()
    return float(number) * LENGTHS[unit]


def section_area(shape):
    """Area of a shape's section in the half plane, m2; None for shapes this script does not know."""
    kind, sizes = next(iter((k, v) for k, v in shape.items() if k != "note"))
    known = {"cylinder": ("diameter", "length"), "tube": ("inner_diameter", "outer_diameter", "length")}
    if kind not in known or any(not isinstance(sizes.get(key), str) for key in known[kind]):
        return None
    lengths = [metres(sizes[key]) for key in known[kind]]
    return lengths[0] / 2 * lengths[1] if kind == "cylinder" else (lengths[1] - lengths[0]) / 2 * lengths[2]


def read_field(path, summary):
    """Opens one snapshot twice and compares; returns what the caller compares with the tables."""
    grid, mesh = vtk_grid(path), meshio.read(path)
    number, name = CELL_TYPES[summary["mesh"]["order"]]
    cells = summary["mesh"]["triangles"]
    check(grid.GetNumberOfPoints() == summary["mesh"]["nodes"] == len(mesh.points), f"{path.name}: points")
    check(grid.GetNumberOfCells() == cells, f"{path.name}: cells")
    distinct = vtk.vtkCellTypes()
    grid.GetCellTypes(distinct)
    types = {distinct.GetCellType(index) for index in range(distinct.GetNumberOfTypes())}
    check(types == {number}, f"{path.name}: VTK sees cell types {types}, not {number}")
    check([block.type for block in mesh.cells] == [name], f"{path.name}: meshio sees {[b.type for b in mesh.cells]}")
    points = vtk_to_numpy(grid.GetPoints().GetData())
    check(np.array_equal(points, mesh.points), f"{path.name}: VTK and meshio read different points")
    for field in POINT_FIELDS:
        values = vtk_to_numpy(grid.GetPointData().GetArray(field))
        check(np.array_equal(values, mesh.point_data[field].reshape(values.shape)), f"{path.name}: {field} differs")
        check(np.isfinite(values).all(), f"{path.name}: {field} is not finite")
    for field in CELL_FIELDS:
        values = vtk_to_numpy(grid.GetCellData().GetArray(field))
        check(np.array_equal(values, mesh.cell_data[field][0].reshape(values.shape)), f"{path.name}: {field} differs")
        check(np.isfinite(values).all(), f"{path.name}: {field} is not finite")
    return grid, points


def compare_areas(name, areas, parts, job):
    if job.get("mirror_planes"):
        return
    for index, part in enumerate(job["parts"]):
        wanted, found = section_area(part["shape"]), areas[parts == index].sum()
        check(found > 0, f"{name}: part {part['name']} has no cells")
        if wanted is not None:
            check(abs(found / wanted - 1) < 1e-9, f"{name}: section of {part['name']} is {found} m2, not {wanted} m2")


def read_mesh_block(mesh, job):
    """The figures of the mesh agree with each other and with the job."""
    regions = mesh["regions"]
    check(list(regions["parts"]) == [part["name"] for part in job["parts"]], "summary.json: mesh: names of parts")
    check(list(regions["coils"]) == [coil["name"] for coil in job.get("coils", [])], "summary.json: mesh: names of coils")
    bodies = [regions["air"], *regions["parts"].values(), *regions["coils"].values()]
    for key in ("triangles", "strip_triangles"):
        found = sum(body[key] for body in bodies)
        check(found == mesh[key], f"summary.json: mesh: {key} of the bodies add up to {found}, not {mesh[key]}")
    counts, outside = mesh["min_angle_counts"], mesh["triangles"] - mesh["strip_triangles"]
    check(len(counts) == 12 and sum(counts) == outside, "summary.json: mesh: angles are not counted once a triangle")
    share = sum(counts[6:8]) / outside if outside else 0
    check(math.isclose(mesh["share_of_min_angles_30_to_40_deg"], share, abs_tol=1e-12), "summary.json: mesh: share of angles")
    check(0 < mesh["min_angle_deg"] <= mesh["mean_min_angle_deg"] <= 60, "summary.json: mesh: angles")
    merges = mesh["merges"]
    moved = merges["corners_moved"] + merges["lines_moved"]
    check((moved > 0) == (merges["largest_move_m"] > 0) == bool(merges["moves"]), "summary.json: mesh: moves")
    check(all(isinstance(note, str) and note for note in mesh["notes"] + merges["moves"]), "summary.json: mesh: words")


def compare_mesh(name, grid, parts, points, mesh, job):
    """Triangles by body, edges and angles from the corners of the cells, against the summary."""
    corners = np.array([[grid.GetCell(c).GetPointId(k) for k in range(3)] for c in range(grid.GetNumberOfCells())])
    check(len(np.unique(corners)) == mesh["vertices"], f"{name}: vertices")
    for index, part in enumerate(job["parts"]):
        found, wanted = int((parts == index).sum()), mesh["regions"]["parts"][part["name"]]["triangles"]
        check(found == wanted, f"{name}: {found} cells of {part['name']}, the summary has {wanted}")
    places = points[corners][:, :, :2]
    sides = np.linalg.norm(places - np.roll(places, -1, axis=1), axis=2)
    for end, found, wanted in (("shortest", sides.min(), mesh["shortest_edge_m"]), ("longest", sides.max(), mesh["longest_edge_m"])):
        check(abs(found / wanted - 1) < 1e-9, f"{name}: {end} edge is {found} m, the summary has {wanted} m")
    a, b, c = sides[:, 0], sides[:, 1], sides[:, 2]
    cosines = [(x * x + y * y - z * z) / (2 * x * y) for x, y, z in ((a, b, c), (b, c, a), (c, a, b))]
    least = np.degrees(np.arccos(np.clip(np.max(cosines, axis=0), -1, 1)))
    for limit, counted in ((30, sum(mesh["min_angle_counts"][:6])), (40, sum(mesh["min_angle_counts"][:8]))):
        below = int((least < limit).sum())
        check(below >= counted, f"{name}: {below} cells below {limit} degrees, fewer than {counted} outside strips")
        check(below <= counted + mesh["strip_triangles"], f"{name}: {below} cells below {limit} degrees, too many")


def compare_power(name, grid, areas, parts, points, job, state):
    """The loss over the workpieces, cell mean times the circle of its centroid, against the summary."""
    loss = vtk_to_numpy(grid.GetCellData().GetArray("joule_loss_w_per_m3"))
    corners = np.array([[grid.GetCell(c).GetPointId(k) for k in range(3)] for c in range(grid.GetNumberOfCells())])
    radius = points[corners, 0].mean(axis=1)
    work = [index for index, part in enumerate(job["parts"]) if part["role"] == "workpiece"]
    power = (loss * areas * 2 * np.pi * radius)[np.isin(parts, work)].sum()
    power *= 2 if len(job.get("mirror_planes", [])) == 1 else 1
    wanted = state["workpiece_power_w"]
    check(abs(power / wanted - 1) < 0.02, f"{name}: loss integrates to {power} W in the work, the summary has {wanted} W")


def compare_temperatures(name, grid, history):
    """Hottest and coldest node against the row of the same time."""
    array = grid.GetPointData().GetArray("temperature_degC")
    time = grid.GetFieldData().GetArray("TimeValue").GetValue(0)
    rows = [row for row in history if float(row["time_s"]) == time]
    check(array is not None, f"{name}: there is no temperature")
    check(bool(rows), f"{name}: history.csv has no row at {time} s")
    if array is None or not rows:
        return
    values = vtk_to_numpy(array)
    values = values[np.isfinite(values)]
    check(len(values) > 0, f"{name}: no node has a temperature")
    for end, found, best in (("_min_degc", values.min(), min), ("_max_degc", values.max(), max)):
        wanted = best(float(cell) for key, cell in rows[-1].items() if key.endswith(end))
        check(abs(found - wanted) < 1e-6, f"{name}: {end[1:4]} is {found} degC, history.csv has {wanted} degC")


def read_pictures(folder):
    pictures = sorted(folder.glob("**/*.png"))
    check(bool(pictures), "there are no pictures")
    for path in pictures:
        reader = vtk.vtkPNGReader()
        check(reader.CanReadFile(str(path)) != 0, f"{path.name}: VTK cannot read it")
        reader.SetFileName(str(path))
        reader.Update()
        pixels = vtk_to_numpy(reader.GetOutput().GetPointData().GetScalars())
        check(len(np.unique(pixels, axis=0)) > 8, f"{path.name}: fewer than nine colours")
    return len(pictures)


def main():
    folder = Path(sys.argv[1])
    summary, job = load_json(folder / "summary.json"), load_json(folder / "job.json")
    check(load_json(folder / "timings.json")["total_s"] > 0, "timings.json: no time passed")
    check(not (folder / "unfinished.txt").exists(), "the folder is marked as unfinished")
    states, history = load_table(folder / "states.csv"), load_table(folder / "history.csv")
    turns = load_table(folder / "turns.csv")
    check(bool(states), "states.csv is empty")
    check(bool(turns) == bool(job.get("coils")), "turns.csv: turns without coils, or coils without turns")
    listed = ElementTree.parse(folder / "run.pvd").getroot().findall("./Collection/DataSet")
    times = [float(entry.get("timestep")) for entry in listed]
    files = [folder / entry.get("file") for entry in listed]
    check(times == sorted(times), "run.pvd: times are not in order")
    check(sorted(files) == sorted(folder.glob("fields/*.vtu")), "run.pvd does not list the files in fields/")
    read_mesh_block(summary["mesh"], job)
    check(bool(files), "there are no fields")
    for index, path in enumerate(files):
        grid, points = read_field(path, summary)
        if index == 0:
            areas, parts = vtk_areas(grid), vtk_to_numpy(grid.GetCellData().GetArray("part"))
            check((areas > 0).all(), f"{path.name}: a cell has no area")
            compare_areas(path.name, areas, parts, job)
            compare_mesh(path.name, grid, parts, points, summary["mesh"], job)
            compare_power(path.name, grid, areas, parts, points, job, summary["states"]["first"])
        if history:
            compare_temperatures(path.name, grid, history)
    pictures = read_pictures(folder)
    for failure in failures:
        print(f"FAILED {failure}")
    print(f"{len(files)} fields, {pictures} pictures, {len(states) + len(history) + len(turns)} table rows read")
    print(f"{checks - len(failures)} passed, {len(failures)} failed")
    return 1 if failures or checks == 0 else 0


if __name__ == "__main__":
    sys.exit(main())
