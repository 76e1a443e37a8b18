"""Cycles of reactions: exact, short, found where something is wrong and nowhere else; the repair is the least-squares one."""

import numpy as np
import pytest

from bothways import InputError, build_mechanism
from bothways.mechanism.cycles import independent_cycles, least_squares_repair, violated_cycles, worst_cycle

NETWORKS = 1000


def network(seed):
    """Random stoichiometric numbers (N, R), ln K that close all cycles, and a generator to go on with."""
    rng = np.random.default_rng(seed)
    n = int(rng.integers(3, 9))
    r = int(rng.integers(n + 1, 3 * n))
    nu = np.zeros((n, r), dtype=np.int64)
    for j in range(r):
        some = rng.choice(n, min(n, int(rng.integers(2, 5))), replace=False)
        nu[some, j] = rng.choice([-2, -1, -1, 1, 1, 2], some.size)
    return nu, -(nu.T @ rng.normal(0.0, 20.0, n)), rng


def nearest_by_normal_equations(cycles, values, spread):
    """x = v - S Cᵀ (C S Cᵀ)⁻¹ C v, S = diag(spread²), in extended precision, by Cholesky's method typed out."""
    C, v = cycles.astype(np.longdouble), values.astype(np.longdouble)
    S = spread.astype(np.longdouble) ** 2
    M, b, m = (C * S) @ C.T, C @ v, len(C)
    L = np.zeros_like(M)
    for k in range(m):
        L[k, k] = np.sqrt(M[k, k] - L[k, :k] @ L[k, :k])
        for q in range(k + 1, m):
            L[q, k] = (M[q, k] - L[q, :k] @ L[k, :k]) / L[k, k]
    y = np.zeros(m, dtype=np.longdouble)
    for k in range(m):
        y[k] = (b[k] - L[k, :k] @ y[:k]) / L[k, k]
    for k in range(m - 1, -1, -1):
        y[k] = (y[k] - L[k + 1 :, k] @ y[k + 1 :]) / L[k, k]
    return v - S * (C.T @ y)


def test_a_thousand_random_networks():
    """None is reported as they are; with one K perturbed the cycle reported holds that reaction; repairs to 1e-10."""
    for seed in range(NETWORKS):
        nu, values, rng = network(seed)
        allowed, cycles = np.full(values.size, 0.01), independent_cycles(nu)
        assert not np.any(nu @ cycles.T) and len(cycles) == nu.shape[1] - np.linalg.matrix_rank(nu)
        assert worst_cycle(nu, values, allowed) is None and violated_cycles(nu, values, allowed) == []
        members = np.flatnonzero(np.any(cycles != 0, axis=0))
        k = int(rng.choice(members))
        least = min(np.abs(c).sum() / abs(c[k]) for c in cycles if c[k])  # at least this short a cycle holds it
        values[k] += rng.choice([-1, 1]) * float(rng.uniform(1.1, 50.0)) * 0.01 * least
        found = violated_cycles(nu, values, allowed) if seed % 10 == 0 else [worst_cycle(nu, values, allowed)]
        assert found and all(c and c.numbers[k] and not np.any(nu @ c.numbers) for c in found), seed
        assert all(c.misfit > c.allowed and abs(c.numbers @ values - c.misfit) < 1e-9 for c in found)
        spread = rng.uniform(0.005, 0.05, values.size)
        gap = least_squares_repair(nu, values, spread) - nearest_by_normal_equations(cycles, values, spread)
        assert np.max(np.abs(gap)) < 1e-10, seed


def test_the_cycle_reported_is_a_short_one():
    """A wrong K in a ring of three within a ladder of rings: three reactions are named, not the long way round."""
    pairs = [(k, k + 1) for k in range(9)] + [(k, k + 2) for k in range(8)]
    nu = np.zeros((10, len(pairs)), dtype=np.int64)
    for j, (a, b) in enumerate(pairs):
        nu[a, j], nu[b, j] = -1, 1
    values = -(nu.T @ np.arange(10.0))
    values[4] += 1.0
    found = worst_cycle(nu, values, np.full(len(pairs), 0.01))
    assert len(found.reactions) == 3 and 4 in found.reactions and found.misfit == pytest.approx(1.0)


@pytest.mark.parametrize("seed", range(40))
def test_the_same_at_loading(seed):
    """Isomers in a random network: a file whose K's close loads, and with one K perturbed its error names that reaction."""
    rng = np.random.default_rng(seed)
    n = int(rng.integers(4, 8))
    pairs = [(int(rng.integers(k)), k) for k in range(1, n)]
    pairs += [p for p in ((a, b) for a in range(n) for b in range(a + 1, n)) if p not in pairs and rng.random() < 0.4]
    g = rng.normal(0.0, 5.0, n)
    T = [float(t) for t in rng.choice([298.15, 310.0], len(pairs))]
    rows = [{"equation": f"S{a} = S{b}", "forward": {"law": "Arrhenius", "A": 1.0},
             "equilibrium": {"K": float(np.exp(g[a] - g[b])), "at": t, "dH": 0.0}} for (a, b), t in zip(pairs, T, strict=True)]
    document = {"mechanism": {"name": "isomers", "phase": "ideal solution", "standard_state": "mole fraction"},
                "elements": {"Q": 0.01}, "species": {f"S{k}": {"formula": "Q"} for k in range(n)}, "reaction": rows}
    build_mechanism(document)
    cycles = independent_cycles(np.array([[(k == b) - (k == a) for a, b in pairs] for k in range(n)]))
    members = np.flatnonzero(np.any(cycles != 0, axis=0)) if len(cycles) else []
    if not len(members):
        return
    k = int(rng.choice(members))
    rows[k]["equilibrium"]["K"] *= 1.5
    with pytest.raises(InputError) as caught:
        build_mechanism(document)
    assert f"through 'S{pairs[k][0]} ⇌ S{pairs[k][1]}'" in str(caught.value)
