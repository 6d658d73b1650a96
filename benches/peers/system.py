"""A symmetric system as `systems write` leaves it. Convention: numbers from 0; the lower triangle by columns, which is the upper triangle
by rows, diagonal first; sizes of complex numbers as |Re| + |Im|, as in LAPACK's `xGERFS`.
"""

from pathlib import Path

import numpy as np
import scipy.sparse as sp


def size(a):
    return np.abs(a.real) + np.abs(a.imag)


class System:
    """Matrix and right-hand sides, the latter as columns."""

    def __init__(self, folder):
        folder = Path(folder)
        self.starts = np.fromfile(folder / "starts", "<i8")
        self.rows = np.fromfile(folder / "rows", "<i4")
        self.n = len(self.starts) - 1
        is_complex = (folder / "values").stat().st_size == 16 * len(self.rows)
        kind = "<c16" if is_complex else "<f8"
        self.values = np.fromfile(folder / "values", kind)
        self.rhs = np.fromfile(folder / "rhs", kind).reshape(-1, self.n).T
        self.dtype = self.values.dtype
        self.upper = sp.csr_array((self.values, self.rows, self.starts), shape=(self.n, self.n))

    def full(self):
        """Both triangles by columns."""
        return sp.csc_array(self.upper + sp.triu(self.upper, 1).T)

    def backward_error(self, x, b):
        """Largest |b - A x| over |A||x| + |b| of any row and column (W. Oettli, W. Prager, Numer. Math. 6, 1964)."""
        a = self.full()
        sizes = sp.csc_array((size(a.data), a.indices, a.indptr), shape=a.shape)
        scale = sizes @ size(x) + size(b)
        residual = size(b - a @ x)
        return float((residual[scale > 0] / scale[scale > 0]).max())
