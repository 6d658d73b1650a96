"""The field of the bar in its coil by scikit-fem and MKL PARDISO, on the mesh that `systems write whole` leaves: `field_peer.py FOLDER`
answers every line it reads with the time from the mesh to the losses, and the losses.

The equations are those at the head of `solver/src/magnetics/mod.rs` and `open_boundary.rs`, written afresh as weak forms; one ampere
(peak) in every turn. Convention: SI units, phasors e^{+jwt}; seconds from the mesh in memory to the losses of bar and coil.
"""

import json
import sys
import time
from pathlib import Path

import numpy as np
import scipy.sparse as sp
from scipy.special import lpmv
from skfem import Basis, BilinearForm, ElementTriP2, FacetBasis, Functional, LinearForm, MeshTri1, MeshTri2

from pardiso import Pardiso

MU_0 = 1.25663706127e-6  # CODATA 2022
TERMS = 40
DEGREE = 8


class Given:
    """Mesh and materials."""

    def __init__(self, folder):
        folder = Path(folder)
        points = np.fromfile(folder / "points", "<f8").reshape(-1, 2).T
        elements = np.fromfile(folder / "elements", "<u4").reshape(-1, 6).astype(int)
        self.regions = np.fromfile(folder / "regions", "<u4")
        device = json.loads((folder / "device.json").read_text())
        kinds = np.array(device["kinds"])
        sigma = {"air": 0.0, "bar": device["bar_s_per_m"], "turn": device["turn_s_per_m"]}
        self.sigma = np.array([sigma[kind] for kind in kinds])[self.regions]
        self.turns = np.flatnonzero(kinds == "turn")
        self.bar = np.flatnonzero(kinds == "bar")
        self.omega = device["omega_rad_per_s"]
        self.radius, self.centre = device["open_boundary_m"]
        self.mesh = curved_mesh(points, elements)


def curved_mesh(points, elements):
    """A mesh of curved triangles whose edge nodes stand in the library's own order of edges."""
    count = elements[:, :3].max() + 1
    straight = MeshTri1(points[:, :count], elements[:, :3].T.copy())
    node = {}
    for a, b, c, ab, bc, ca in elements.tolist():
        node[min(a, b), max(a, b)] = ab
        node[min(b, c), max(b, c)] = bc
        node[min(c, a), max(c, a)] = ca
    order = [node[min(a, b), max(a, b)] for a, b in straight.facets.T.tolist()]
    return MeshTri2(np.hstack([points[:, :count], points[:, order]]), straight.t)


def field_form(omega):
    def form(u, v, w):
        r = w.x[0]
        curl = r**2 * u.grad[1] * v.grad[1] + (2 * u + r * u.grad[0]) * (2 * v + r * v.grad[0])
        return (curl / MU_0 + 1j * omega * w.sigma * r**2 * u * v) * 2 * np.pi * r

    return BilinearForm(form, dtype=np.complex128, nthreads=2)


def exterior(given, basis):
    """The field outside the sphere, from its traces on the arc."""
    mesh = given.mesh
    x, y = mesh.p[0, mesh.facets], mesh.p[1, mesh.facets] - given.centre
    on_arc = np.all(np.abs(np.hypot(x, y) - given.radius) < 1e-9 * given.radius, axis=0)
    arc = np.intersect1d(np.flatnonzero(on_arc), mesh.boundary_facets())
    facets = FacetBasis(mesh, ElementTriP2(), facets=arc, intorder=DEGREE)
    rows = []
    for n in range(1, TERMS + 1):

        def trace(v, w, n=n):
            r, z = w.x[0], w.x[1] - given.centre
            rho = np.hypot(r, z)
            angle = (r * w.n[0] + z * w.n[1]) / rho**2
            return r * v * -lpmv(1, n, z / rho) * r / rho * angle

        norm = 2 * n * (n + 1) / (2 * n + 1)
        rows.append(np.sqrt(2 * np.pi * given.radius / MU_0 * n / norm) * LinearForm(trace).assemble(facets))
    c = sp.csr_array(np.array(rows))
    return c.T @ c


def solve(given):
    """Losses of bar and coil in watts, unknowns and seconds."""
    start = time.perf_counter()
    basis = Basis(given.mesh, ElementTriP2(), intorder=DEGREE)
    sigma = np.repeat(given.sigma[:, None], basis.dx.shape[1], axis=1)
    field = sp.csr_array(field_form(given.omega).assemble(basis, sigma=sigma)) + exterior(given, basis)
    turn_of = np.full(len(given.regions), -1)
    sides, corners = [], []
    for k, region in enumerate(given.turns):
        own = np.flatnonzero(given.regions == region)
        turn_of[own] = k
        part = Basis(given.mesh, ElementTriP2(), elements=own, intorder=DEGREE)
        weight = 2 * np.pi * given.omega * given.sigma[own[0]]
        sides.append(-1j * weight * LinearForm(lambda v, w: v * w.x[0]).assemble(part))
        corners.append(1j * weight * Functional(lambda w: 1 / w.x[0]).assemble(part))
    sides = sp.csr_array(np.array(sides))
    matrix = sp.csr_array(sp.block_array([[field, sides.T], [sides, sp.diags_array(corners)]]))
    rhs = np.zeros((matrix.shape[0], 1), dtype=complex)
    rhs[basis.N :] = 2 * np.pi
    x = direct(sp.csr_array(sp.triu(matrix)), rhs)
    losses = element_losses(given, basis, sigma, x, turn_of)
    seconds = time.perf_counter() - start
    power = {"bar_w": losses[np.isin(given.regions, given.bar)].sum(), "coil_w": losses[turn_of >= 0].sum()}
    return {"unknowns": len(x), "seconds": seconds, **{name: float(p) for name, p in power.items()}}


def direct(upper, rhs):
    upper.sort_indices()

    class Upper:
        starts, rows, values, n, dtype = upper.indptr, upper.indices, upper.data, upper.shape[0], upper.dtype

    solver = Pardiso(Upper)
    solver.analyse()
    solver.factor()
    _, x = solver.solve(rhs)
    solver.close()
    return x[:, 0]


def element_losses(given, basis, sigma, x, turn_of):
    """Loss of every element: half of sigma |E|^2 over its volume."""
    r = basis.global_coordinates().value[0]
    u = np.asarray(basis.interpolate(x[: basis.N]))
    w = np.where(turn_of >= 0, x[basis.N + turn_of], 0)[:, None]
    e = given.omega * np.abs(r * u - w / r)
    return (0.5 * sigma * e**2 * 2 * np.pi * r * basis.dx).sum(axis=1)


if __name__ == "__main__":
    given = Given(sys.argv[1])
    for _ in sys.stdin:
        print(json.dumps(solve(given)), flush=True)
