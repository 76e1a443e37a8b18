"""The slowest relaxation time of a mixture near its equilibrium, without the round-off that drowns eigenvalues of J.

Near equilibrium d(δn)/dt = -ν diag(r) νᵀ H δn, r the one-way rates (of a lumped step over σ) and H = LᵀL the curvature
of the potential that may not rise. Its rates are the squared singular values of L ν diag(r)^½ (a symmetric form of
linear irreversible thermodynamics; e.g. S.R. de Groot, P. Mazur, Non-Equilibrium Thermodynamics, 1962, ch. X). Amounts
and rates span tens of decades as scales of rows and columns of small integers; Jacobi's one-sided method keeps the
relative accuracy of the small values then (Z. Drmač, K. Veselić, SIAM J. Matrix Anal. Appl. 29 (2008) 1322,
doi:10.1137/050639193; LAPACK gejsv).
"""

import numpy as np

from .constants import GAS_CONSTANT as R
from .contents import Contents


def relaxation_times(nu: np.ndarray, rates: np.ndarray, amount: np.ndarray, rank: int, curvature: np.ndarray,
                     trace: np.ndarray | None = None, cooling: float = 0.0) -> np.ndarray:
    """Relaxation times [s], the slowest first.

    nu : (N, reactions). rates : (reactions) one-way rates at equilibrium [mol/s]. amount : (N) at equilibrium [mol].
    rank : of nu over the species present. curvature : (2, N), see `further_rows`.
    trace : (N) mask of species that follow the others without delay: they hold too little to matter, and what is slow
        among them alone is left out.
    cooling : UA/C of a jacket [1/s].
    """
    here, running = amount > 0, rates > 0
    scaled = nu[np.ix_(here, running)] * np.sqrt(rates[running]) / np.sqrt(amount[here])[:, None]
    small = np.zeros(int(here.sum()), dtype=bool) if trace is None else trace[here]
    curved = _with_curvature(scaled, curvature[:, here])
    if cooling > 0:
        scaled, curved, rank = *_with_cooling(scaled, curved, cooling), rank + 1
    rows, lost = _without(scaled[small], curved[~np.append(small, False)])
    if rank <= lost or not rows.size:
        return np.empty(0)
    values = np.sort(singular_values(rows))[::-1][: rank - lost]
    with np.errstate(divide="ignore"):
        return 1.0 / values[::-1] ** 2


def _with_curvature(scaled: np.ndarray, curvature: np.ndarray) -> np.ndarray:
    """L ν diag(r)^½: the volume's part projected out, the heat's set below as one more row."""
    volume, heat = curvature
    return np.vstack([scaled - np.outer(volume, volume @ scaled), heat @ scaled])


def _with_cooling(scaled: np.ndarray, curved: np.ndarray, cooling: float) -> tuple[np.ndarray, np.ndarray]:
    """Both with the jacket's column: heat flows like a reaction of rate UA·R·T², and changes the heat's row alone.

    That row is √(C/R)·δT/T, for which reactions count with the other sign: their heat is taken from the contents.
    """
    column = np.append(np.zeros(len(scaled)), -np.sqrt(cooling))
    return np.column_stack([scaled, np.zeros(len(scaled))]), np.column_stack([curved, column])


def _without(followers: np.ndarray, rows: np.ndarray) -> tuple[np.ndarray, int]:
    """Rows with what the followers' rows span taken out, and the rank of that."""
    if not followers.size:
        return rows, 0
    from scipy.linalg import qr  # takes its time to load, and few runs need it

    norms = np.linalg.norm(followers, axis=1)
    basis, triangle, _ = qr((followers[norms > 0] / norms[norms > 0, None]).T, mode="economic", pivoting=True)
    rank = int(np.sum(np.abs(np.diag(triangle)) > 1e-13))
    basis = basis[:, :rank]
    for _ in range(2):  # twice is enough against round-off
        rows = rows - (rows @ basis) @ basis.T
    return rows, rank


def further_rows(contents: Contents, amount: np.ndarray, temperature: float, holds: str, heat: str, own: float) -> np.ndarray:
    """Rows (2, N) on δn/√n besides the identity: √(n/N) to be projected out at held pressure, and heat if T is free.

    H = 1/n at held volume, less 1/N at held pressure and for mole fractions; adiabatic or in a jacket, plus e_i e_j/(R T² C)
    with e the internal energies (a gas at held volume) or enthalpies, C the heat capacity of contents and vessel; zero rows
    where a part is absent.
    """
    rows = np.zeros((2, len(amount)))
    root = np.sqrt(amount)
    if contents.shared(holds):
        rows[0] = root / np.sqrt(np.sum(amount))
    if heat in ("adiabatic", "jacket"):
        energy = R * temperature * (contents.molar(temperature)[1] - contents.less(holds))
        capacity = contents.heat_capacity(amount, temperature, holds) + own
        rows[1] = energy * root / (temperature * np.sqrt(R * capacity))
    return rows


def singular_values(matrix: np.ndarray) -> np.ndarray:
    """Singular values, small ones to relative accuracy where the matrix is a scaled well-conditioned one.

    Rows sorted by size and columns pivoted, Householder's triangularisation keeps the small rows' digits (A.J. Cox,
    N.J. Higham, BIT 38 (1998) 34, doi:10.1007/BF02510915), and Jacobi's method those of the triangle.
    """
    from scipy.linalg import lapack, qr

    tall = matrix if matrix.shape[0] >= matrix.shape[1] else matrix.T
    order = np.argsort(-np.linalg.norm(tall, axis=1))
    triangle = qr(tall[order], mode="r", pivoting=True)[0][: tall.shape[1]]
    sva, _, _, work, _, info = lapack.dgejsv(np.asfortranarray(triangle), joba=2, jobu=3, jobv=3, jobr=0, jobt=0, jobp=0)
    if info != 0:
        return np.linalg.svd(matrix, compute_uv=False)
    return sva * (work[0] / work[1])
