"""MKL PARDISO through ctypes. Convention: upper triangle by rows, numbers from 0; complex symmetric (mtype 6) or real positive definite
(mtype 2). Other parameters are the library's own, ordering by parallel METIS among them. Source: the reference of oneMKL, `pardiso` and its `iparm`.
"""

import ctypes
import sys
import time
from pathlib import Path

import numpy as np

ANALYSE, FACTOR, SOLVE, RELEASE = 11, 22, 33, -1


def library():
    folder = Path(sys.prefix) / "lib"
    return ctypes.CDLL(str(next(folder.glob("libmkl_rt.so*"))), mode=ctypes.RTLD_GLOBAL)


class Version(ctypes.Structure):
    """`MKLVersion`."""

    _fields_ = [("major", ctypes.c_int), ("minor", ctypes.c_int), ("update", ctypes.c_int)] + [
        (name, ctypes.c_char_p) for name in ("status", "build", "processor", "platform")
    ]


class Pardiso:
    """A solver for one matrix pattern."""

    name = "MKL PARDISO"

    def __init__(self, system):
        self.mkl = library()
        self.mtype = 6 if system.dtype.kind == "c" else 2
        self.starts = system.starts.astype(np.int32)
        self.rows = system.rows.astype(np.int32)
        self.values, self.n, self.dtype = system.values, system.n, system.dtype
        self.handle = np.zeros(64, dtype=np.int64)
        self.iparm = np.zeros(64, dtype=np.int32)
        self.mkl.pardisoinit(self._at(self.handle), ctypes.byref(ctypes.c_int(self.mtype)), self._at(self.iparm))
        self.iparm[34] = 1  # numbers from 0
        self.iparm[17] = -1  # count the entries of the factor
        self.iparm[7] = 0  # no refinement of solutions (the default is two steps): the others make none
        self.none = np.zeros(1, dtype=self.dtype)

    @staticmethod
    def _at(array):
        return array.ctypes.data_as(ctypes.c_void_p)

    def _call(self, phase, b=None, x=None):
        b = self.none if b is None else b
        x = self.none if x is None else x
        columns = b.shape[1] if b.ndim == 2 else 1
        integer = lambda value: ctypes.byref(ctypes.c_int(value))
        error = ctypes.c_int(0)
        start = time.perf_counter()
        self.mkl.pardiso(
            self._at(self.handle), integer(1), integer(1), integer(self.mtype), integer(phase), integer(self.n),
            self._at(self.values), self._at(self.starts), self._at(self.rows), self._at(np.zeros(1, np.int32)),
            integer(columns), self._at(self.iparm), integer(0), self._at(b), self._at(x), ctypes.byref(error),
        )  # fmt: skip
        seconds = time.perf_counter() - start
        assert error.value == 0, f"PARDISO: phase {phase} ended with error {error.value}"
        return seconds

    def analyse(self):
        return self._call(ANALYSE)

    def factor(self):
        return self._call(FACTOR)

    refactor = factor

    def solve(self, b):
        """Seconds and solution for columns that lie one after the other in memory."""
        b = np.asfortranarray(b)
        x = np.empty_like(b)
        return self._call(SOLVE, b, x), x

    def close(self):
        self._call(RELEASE)

    def facts(self):
        version = Version()
        self.mkl.MKL_Get_Version(ctypes.byref(version))
        return {
            "fill": int(self.iparm[17]),
            "own_memory_bytes": 1024 * int(max(self.iparm[14], self.iparm[15] + self.iparm[16])),
            "version": f"{version.major}.{version.minor}.{version.update}",
            "vector_unit": version.processor.decode(),
            "threads": self.mkl.MKL_Get_Max_Threads(),
        }
