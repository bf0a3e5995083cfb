#!/bin/sh
# Paired comparison with SciPy's eigsh (default SuperLU, symmetric SuperLU, CHOLMOD if it builds).
# Makes its own virtual environment outside the repository; EIGSH_VENV says where.
# CHOLMOD needs the development files of SuiteSparse 5 (Debian: libsuitesparse-dev).
set -eu
cd "$(dirname "$0")/../.."
venv=${EIGSH_VENV:-${TMPDIR:-/tmp}/dotwright-eigsh}
if [ ! -x "$venv/bin/python" ]; then
    python3 -m venv "$venv"
    "$venv/bin/pip" install -q 'numpy<2' scipy 'cython<3.1' setuptools wheel
    SUITESPARSE_INCLUDE_DIR=/usr/include/suitesparse \
        "$venv/bin/pip" install -q 'scikit-sparse==0.4.16' \
        || echo "scikit-sparse did not build: no comparison with CHOLMOD" >&2
fi
binary=$(cargo bench --bench eigen_pairs --no-run 2>&1 | sed -n 's/.*(\(.*eigen_pairs-[0-9a-f]*\)).*/\1/p')
exec env OPENBLAS_NUM_THREADS=1 OMP_NUM_THREADS=1 "$venv/bin/python" tests/benches/eigsh.py "$binary" "${1:-7}"
