"""MUMPS through the PyPI package `python-mumps` (sequential MUMPS, threaded BLAS), ordered by METIS. Convention: one triangle as
triplets, numbers from 1; symmetric (2) or positive definite (1). No pivoting, as in ours: the matrices need none. Source: the users'
guide of MUMPS 5.2.
"""

import time

import numpy as np
from mumps import _mumps

METIS = 5


class Mumps:
    name = "MUMPS"

    def __init__(self, system):
        is_complex = system.dtype.kind == "c"
        kind = _mumps.zmumps if is_complex else _mumps.dmumps
        self.instance = kind(False, 2 if is_complex else 1)
        columns = np.repeat(np.arange(1, system.n + 1, dtype=_mumps.int_dtype), np.diff(system.starts))
        self.kept = [(system.rows + 1).astype(_mumps.int_dtype), columns, system.values]
        self.instance.set_assembled_matrix(system.n, *self.kept)
        self.instance.icntl[7] = METIS

    def _call(self, job):
        self.instance.job = job
        start = time.perf_counter()
        self.instance.call()
        seconds = time.perf_counter() - start
        assert self.instance.infog[1] >= 0, f"MUMPS: job {job} ended with error {self.instance.infog[1]}"
        return seconds

    def analyse(self):
        return self._call(1)

    def factor(self):
        self.instance.cntl[1] = 0.0
        return self._call(2)

    refactor = factor

    def solve(self, b):
        x = np.asfortranarray(b).copy(order="F")
        self.instance.set_dense_rhs(x)
        return self._call(3), x

    def close(self):
        """The object ends its instance itself when it is dropped; ending it here too would abort the process."""
        self.instance = None

    def facts(self):
        fill = self.instance.infog[29]
        return {
            "fill": fill if fill > 0 else -1_000_000 * fill,
            "own_memory_bytes": 1_000_000 * self.instance.infog[22],
            "ordering": "METIS" if self.instance.infog[7] == METIS else f"number {self.instance.infog[7]}",
        }
