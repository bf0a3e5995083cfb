"""Paired comparison of the eigenvalue core with SciPy's eigsh on the same matrices.

usage: eigsh.py EIGEN_PAIRS_BINARY [ROUNDS]

For every case the binary writes its matrices and then solves on request, so that all
contestants run in turn, round by round, on an equally busy machine; ratios are medians of
ratios within a round. Ours starts without a plan, a hint or warm vectors and ends with the
count that proves completeness; eigsh proves nothing.
"""

import json
import statistics
import subprocess
import sys
import tempfile
import time

import numpy as np
import scipy.sparse as sp
import scipy.sparse.linalg as sla

try:
    from sksparse.cholmod import cholesky
except ImportError:
    cholesky = None

# degree, cells, levels, run SuperLU in its default order too (it takes minutes on the largest)
CASES = [
    (3, 31, 20, True), (3, 31, 50, True), (5, 29, 20, True), (5, 29, 50, True),
    (3, 62, 20, True), (5, 60, 20, True), (3, 125, 20, True), (3, 125, 50, True),
    (5, 123, 20, True), (3, 252, 20, False), (5, 250, 20, False),
]


def matrix(folder, name):
    data, indices, indptr = (np.load(f"{folder}/{name}_{part}.npy") for part in ("data", "indices", "indptr"))
    n = len(indptr) - 1
    return sp.csc_matrix((data, indices.astype(np.int32), indptr.astype(np.int32)), shape=(n, n))


def timed(work):
    start = time.perf_counter()
    result = work()
    return (time.perf_counter() - start) * 1e3, result


def with_cholmod(k, m, count, tol):
    factor = cholesky(k)
    inverse = sla.LinearOperator(k.shape, matvec=factor.solve_A, dtype=float)
    return sla.eigsh(k, count, m, sigma=0.0, OPinv=inverse, tol=tol)[0]


def with_superlu(k, m, count, tol):
    return sla.eigsh(k, count, m, sigma=0.0, tol=tol)[0]


def with_symmetric_superlu(k, m, count, tol):
    lu = sla.splu(k, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True})
    inverse = sla.LinearOperator(k.shape, matvec=lu.solve, dtype=float)
    return sla.eigsh(k, count, m, sigma=0.0, OPinv=inverse, tol=tol)[0]


def main():
    binary = sys.argv[1]
    rounds = int(sys.argv[2]) if len(sys.argv) > 2 else 7
    print(f"{'p':>2} {'n':>6} {'levels':>6} | {'ours':>8} {'warm':>8} | ms of eigsh and ratio to ours (median of rounds)")
    for degree, cells, count, slow in CASES:
        with tempfile.TemporaryDirectory() as folder:
            ours = subprocess.Popen(
                [binary, str(degree), str(cells), str(count), "1e-7", folder],
                stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True,
            )
            size = json.loads(ours.stdout.readline())

            def ask(words):
                ours.stdin.write(words + "\n")
                ours.stdin.flush()
                return json.loads(ours.stdout.readline())

            k, m = matrix(folder, "k"), matrix(folder, "m")
            rivals = {"symmetric": with_symmetric_superlu}
            if cholesky:
                rivals["cholmod"] = with_cholmod
            if slow:
                rivals["superlu"] = with_superlu
            times = {name: [] for name in ["ours", "warm", *rivals]}
            for turn in range(rounds if size["n"] < 10_000 else max(2, rounds // 3)):
                cold = ask("fresh")
                assert cold["complete"]
                times["ours"].append(cold["ms"])
                for name, work in rivals.items():
                    ms, values = timed(lambda: work(k, m, count, 1e-8))
                    times[name].append(ms)
                    assert abs(values.max() / cold["last"] - 1) < 1e-9
                times["warm"].append(ask("guess warm")["ms"])
            ours.stdin.close()
            middle = {name: statistics.median(t) for name, t in times.items()}
            line = f"{degree:2} {size['n']:6} {count:6} | {middle['ours']:8.1f} {middle['warm']:8.1f} |"
            for name in rivals:
                ratio = statistics.median(t / o for t, o in zip(times[name], times["ours"]))
                line += f" {name} {middle[name]:8.1f} ×{ratio:4.1f} "
            print(line, flush=True)


main()
