"""UMFPACK through ctypes, symmetric strategy, ordered by METIS, no refinement. Convention: both triangles by columns, numbers from 0.
Source: the UMFPACK user guide, `umfpack_zl_*` and `umfpack_dl_*`.
"""

import ctypes
import time

import numpy as np

STRATEGY, REFINEMENTS, ORDERING = 5, 7, 10
SYMMETRIC, METIS = 3, 3


class Umfpack:
    name = "UMFPACK"

    def __init__(self, system):
        self.library = ctypes.CDLL("libumfpack.so.5")
        self.family = "zl" if system.dtype.kind == "c" else "dl"
        a = system.full()
        a.sort_indices()
        self.n, self.values = system.n, a.data
        self.starts, self.rows = a.indptr.astype(np.int64), a.indices.astype(np.int64)
        self.control, self.info = np.zeros(20), np.zeros(90)
        getattr(self.library, f"umfpack_{self.family}_defaults")(self._at(self.control))
        self.control[[STRATEGY, REFINEMENTS, ORDERING]] = SYMMETRIC, 0, METIS
        self.symbolic, self.numeric = ctypes.c_void_p(), ctypes.c_void_p()

    @staticmethod
    def _at(array):
        return array.ctypes.data_as(ctypes.c_void_p)

    def _matrix(self):
        imaginary = [None] if self.family == "zl" else []
        return [self._at(self.starts), self._at(self.rows), self._at(self.values), *imaginary]

    def _call(self, what, *arguments):
        start = time.perf_counter()
        status = getattr(self.library, f"umfpack_{self.family}_{what}")(*arguments)
        seconds = time.perf_counter() - start
        assert status == 0, f"UMFPACK: {what} ended with status {status}"
        return seconds

    def _settings(self):
        return self._at(self.control), self._at(self.info)

    def analyse(self):
        n = ctypes.c_int64(self.n)
        return self._call("symbolic", n, n, *self._matrix(), ctypes.byref(self.symbolic), *self._settings())

    def factor(self):
        return self._call("numeric", *self._matrix(), self.symbolic, ctypes.byref(self.numeric), *self._settings())

    def refactor(self):
        getattr(self.library, f"umfpack_{self.family}_free_numeric")(ctypes.byref(self.numeric))
        return self.factor()

    def solve(self, b):
        """One column after the other: there is no call for several."""
        b = np.asfortranarray(b.reshape(self.n, -1))
        x = np.empty_like(b)
        imaginary = [None] if self.family == "zl" else []
        seconds = 0.0
        for k in range(b.shape[1]):
            vectors = [self._at(x[:, k]), *imaginary, self._at(b[:, k]), *imaginary]
            system = ctypes.c_int64(0)
            seconds += self._call("solve", system, *self._matrix(), *vectors, self.numeric, *self._settings())
        return seconds, x

    def close(self):
        getattr(self.library, f"umfpack_{self.family}_free_numeric")(ctypes.byref(self.numeric))
        getattr(self.library, f"umfpack_{self.family}_free_symbolic")(ctypes.byref(self.symbolic))

    def facts(self):
        # Entries of L and U; half of them, as the others store one triangle.
        return {"fill": int(self.info[43] + self.info[44]) // 2, "ordering": {1: "AMD", 3: "METIS"}.get(int(self.info[19]), f"number {int(self.info[19])}")}
