"""SuperLU as scipy ships it, in symmetric mode (minimum degree on A + A^T, diagonal pivots). Convention: both triangles by columns; one
thread; order, symbolic and numeric phase are one call.
"""

import time

import numpy as np
from scipy.sparse.linalg import splu


class SuperLu:
    name = "SuperLU"

    def __init__(self, system):
        self.matrix = system.full()

    def analyse(self):
        return None

    def factor(self):
        start = time.perf_counter()
        self.lu = splu(
            self.matrix, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True}
        )
        return time.perf_counter() - start

    def refactor(self):
        return None

    def solve(self, b):
        b = np.asfortranarray(b)
        start = time.perf_counter()
        x = self.lu.solve(b)
        return time.perf_counter() - start, x

    def close(self):
        self.lu = None

    def facts(self):
        return {"fill": int(self.lu.nnz) // 2}
