"""Pressure correction of a closed square by general-purpose linear solvers.

-div(grad p') = m in the unit square, no flow through any side: per cell, the sum over its faces of
area/distance * (p'_P - p'_neighbour) equals the mass defect m. Five-point, symmetric, singular: p' is
known up to a constant, m adds up to zero. The defects are random, so every wavelength is present.

Iterations end when the residual is 1e-6 of the defects, both in the Euclidean norm; the residual
printed ("off by") is computed anew from the answer.
"""

import sys
import time
import warnings

import numpy as np
import pyamg
import scipy.sparse as sp
import scipy.sparse.linalg as spl
from ngsolve import BitArray, SetNumThreads, TaskManager, la

from lines import graded
from rows import quickest, row

TOLERANCE = 1e-6
# Cells along each axis, strength of the grading.
MESHES = [(256, 0.0), (512, 0.0), (1024, 0.0), (512, 2.0)]


def system(lines):
    """Matrix and defects of the square with these lines along both axes."""
    n = len(lines) - 1
    width = np.diff(lines)
    distance = np.diff(0.5 * (lines[1:] + lines[:-1]))
    jump = sp.diags_array([-np.ones(n - 1), np.ones(n - 1)], offsets=[0, 1], shape=(n - 1, n))
    along = jump.T @ sp.diags_array(1.0 / distance) @ jump
    across = sp.diags_array(width)
    matrix = sp.csr_matrix(sp.kron(across, along) + sp.kron(along, across))
    # PyAMG and SuperLU take 32-bit indices.
    matrix.indices = matrix.indices.astype(np.int32)
    matrix.indptr = matrix.indptr.astype(np.int32)
    defects = np.random.default_rng(1).standard_normal(n * n)
    return matrix, defects - defects.mean()


def by_multigrid(build):
    """Conjugate gradients preconditioned by one algebraic multigrid cycle."""

    def run(matrix, defects):
        start = time.perf_counter()
        hierarchy = build(matrix, max_coarse=100)
        between = time.perf_counter()
        history = []
        p = hierarchy.solve(defects, tol=TOLERANCE, maxiter=200, accel="cg", residuals=history)
        end = time.perf_counter()
        return end - start, between - start, end - between, len(history) - 1, p

    return run


def by_superlu(matrix, defects):
    """Factors of the matrix without its first row and column: p' of the first cell is zero."""
    rest = sp.csc_matrix(matrix[1:, 1:])
    start = time.perf_counter()
    factors = spl.splu(
        rest,
        permc_spec="MMD_AT_PLUS_A",
        diag_pivot_thresh=0.0,
        options={"SymmetricMode": True},
    )
    between = time.perf_counter()
    p = np.concatenate([[0.0], factors.solve(defects[1:])])
    end = time.perf_counter()
    return end - start, between - start, end - between, 1, p


def by_cholesky(matrix, defects):
    """The same system by NGSolve's own Cholesky factors."""
    coo = sp.coo_matrix(matrix)
    held = la.SparseMatrixd.CreateFromCOO(coo.row, coo.col, coo.data, *coo.shape)
    free = BitArray(coo.shape[0])
    free.Set()
    free.Clear(0)
    right = held.CreateColVector()
    right.FV().NumPy()[:] = defects
    answer = held.CreateColVector()
    with TaskManager():
        start = time.perf_counter()
        factors = held.Inverse(free, inverse="sparsecholesky")
        between = time.perf_counter()
        answer.data = factors * right
        end = time.perf_counter()
    return end - start, between - start, end - between, 1, answer.FV().NumPy().copy()


WAYS = [
    ("PyAMG, classical + CG", by_multigrid(pyamg.ruge_stuben_solver)),
    ("PyAMG, aggregation + CG", by_multigrid(pyamg.smoothed_aggregation_solver)),
    ("SciPy, SuperLU", by_superlu),
    ("NGSolve, Cholesky", by_cholesky),
]


def main(threads):
    SetNumThreads(threads)
    warnings.simplefilter("ignore", sp.SparseEfficiencyWarning)
    for cells, strength in MESHES:
        matrix, defects = system(graded(0.0, 1.0, cells, strength))
        mesh = f"{cells}^2" + (f" tanh {strength:g}" if strength else "")
        for way, run in WAYS:
            cpu, (seconds, setup, solve, its, p) = quickest(lambda run=run: run(matrix, defects))
            residual = np.linalg.norm(defects - matrix @ p) / np.linalg.norm(defects)
            # Round-off in the solver's own running residual is allowed for, no more.
            if not residual <= 1.001 * TOLERANCE:
                raise SystemExit(f"{way}, {mesh}: residual {residual:.1e} after {its} iterations")
            more = f"setup {setup:.3f} s, solve {solve:.3f} s, iterations {its}"
            row("pressure", mesh, way, threads, seconds, cpu, f"{residual:.0e}", more)


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 1)
