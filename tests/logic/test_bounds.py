"""Lower bounds hold whatever the solver says, and covering tables are reduced without loss."""

from __future__ import annotations

import itertools
import random
from types import SimpleNamespace

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from making import COMPLEMENT, FREE, TRUE, function_of, random_table, wrong_points
from oracles import cover_search
from oracles.functions import Table, parity, symmetric

from pla.logic import relaxation as relaxation_module
from pla.logic import solver as solver_module
from pla.logic.covering import greedy_cover, irredundant, reduce_to_core
from pla.logic.dense import coordinates, fed_outputs
from pla.logic.effort import Effort
from pla.logic.lattice import dense_primes
from pla.logic.minimize import minimize
from pla.logic.phases import phase_function, phases_of
from pla.logic.relaxation import Relaxation
from pla.logic.selection import smallest_cover, table_of


@st.composite
def tables(draw, most_inputs=3, most_outputs=2):
    inputs, outputs = draw(st.integers(1, most_inputs)), draw(st.integers(1, most_outputs))
    cells = st.integers(0, (1 << (1 << inputs)) - 1)
    sets = [(draw(cells), draw(cells)) for _ in range(outputs)]
    return Table(inputs, tuple(a & b for a, b in sets), tuple(b & ~a for a, b in sets))


def relaxation_of(table, allowed):
    """The relaxed program with a row for every demanded combination."""
    phases = phases_of(allowed)
    on, off = phase_function(function_of(table), phases)
    primes = dense_primes(off, len(phases))
    fed = fed_outputs(on)
    required = [
        coordinates(np.asarray(fed >> np.uint64(b) & np.uint64(1)).astype(bool))
        for b in range(len(phases))
    ]
    program = Relaxation(len(primes), phases, table.outputs)
    rows = table_of(primes, required)
    program.add_rows([np.flatnonzero(row) for row in rows.matrix], rows.phase.tolist())
    return program


def true_minimum(table, allowed, decisions):
    return min(
        cover_search.fewest_terms(table.in_polarity(c))
        for c in cover_search.polarities(table.outputs)
        if all(d in (None, x) for d, x in zip(decisions, c, strict=True))
        and all(p.complement if x else p.true for p, x in zip(allowed, c, strict=True))
    )


@st.composite
def programs(draw):
    table = draw(tables())
    allowed = [draw(st.sampled_from((TRUE, COMPLEMENT, FREE))) for _ in range(table.outputs)]
    choices = [
        [None, *([False] if p.true else []), *([True] if p.complement else [])] for p in allowed
    ]
    steps = st.lists(st.tuples(*map(st.sampled_from, choices)), min_size=1, max_size=4)
    return table, allowed, draw(steps)


@given(programs())
@settings(max_examples=80, deadline=None)
def test_the_relaxed_bound_never_exceeds_the_minimum(case):
    table, allowed, steps = case
    program = relaxation_of(table, allowed)
    for decisions in steps:
        relaxed = program.solve(decisions)
        assert 0 <= relaxed.bound <= true_minimum(table, allowed, decisions)


def test_the_relaxed_bound_is_tight_where_all_terms_are_essential():
    table = parity(4)
    assert relaxation_of(table, [FREE]).solve((None,)).bound == 8
    assert relaxation_of(table, [TRUE]).solve((False,)).bound == 8


WEIGHTS = st.one_of(
    st.floats(),
    st.floats(-0.5, 1.5),
    st.sampled_from([float("nan"), float("inf"), -float("inf"), 1.0, 1e300]),
)


class Corrupted(solver_module.Solver):
    """A solver whose dual values are whatever the test wants."""

    wanted: tuple[float, ...] = ()

    def getSolution(self):  # noqa: N802 - the library's name
        true = super().getSolution()
        weights = list(itertools.islice(itertools.cycle(self.wanted), len(true.row_dual)))
        return SimpleNamespace(col_value=true.col_value, row_dual=weights)


@given(programs(), st.lists(WEIGHTS, min_size=1, max_size=20))
@example((symmetric(3, (1, 2)), [TRUE], [(False,)]), [1.0])
@settings(max_examples=80, deadline=None)
@pytest.mark.filterwarnings("ignore:invalid value:RuntimeWarning")
def test_the_bound_holds_with_any_dual_weights(case, weights):
    table, allowed, steps = case
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(Corrupted, "wanted", tuple(weights))
        patch.setattr(relaxation_module, "Solver", Corrupted)
        program = relaxation_of(table, allowed)
        for decisions in steps:
            bound = program.solve(decisions).bound
            assert 0 <= bound <= true_minimum(table, allowed, decisions)


@pytest.mark.parametrize("seed", [1924, 935])
def test_a_minimum_above_the_relaxed_bound_has_no_certificate(seed):
    rng = random.Random(seed)
    inputs, outputs = rng.randint(4, 6), rng.randint(1, 2)
    table = random_table(rng, inputs, outputs, rng.choice((0, 0.2, 0.4)))
    allowed = [TRUE] * outputs
    found = minimize(function_of(table), allowed)
    bound = relaxation_of(table, allowed).solve((False,) * outputs).bound
    assert bound < found.count == found.lower_bound
    assert found.proven_by == "solver"
    if inputs < 6:
        assert found.count == cover_search.fewest_terms(table)


@pytest.mark.parametrize("seed", range(15))
def test_lies_of_the_solver_never_break_a_certificate(seed, monkeypatch):
    rng = random.Random(seed)
    table = random_table(rng, 3, 2, 0.2)
    monkeypatch.setattr(Corrupted, "wanted", tuple(rng.uniform(-1, 2) for _ in range(7)))
    monkeypatch.setattr(relaxation_module, "Solver", Corrupted)
    least = cover_search.fewest_terms_free(table)
    found = minimize(function_of(table))
    assert wrong_points(found.cover, found.complemented, table) == []
    if found.proven_by == "certificate":
        assert found.count == least


def all_covers(matrix):
    """Size of a smallest cover by trying all sets of columns in order of size."""
    columns = [int("".join("1" if c else "0" for c in col) or "0", 2) for col in matrix.T]
    whole = (1 << matrix.shape[0]) - 1
    for size in range(len(columns) + 1):
        for chosen in itertools.combinations(columns, size):
            held = 0
            for column in chosen:
                held |= column
            if held == whole:
                return size
    raise AssertionError


@st.composite
def matrices(draw):
    rows, columns = draw(st.integers(0, 9)), draw(st.integers(1, 8))
    cells = [draw(st.integers(1, (1 << columns) - 1)) for _ in range(rows)]
    matrix = np.array([[c >> k & 1 for k in range(columns)] for c in cells], dtype=bool)
    return matrix.reshape(rows, columns)


@given(matrices(), st.lists(st.integers(0, 3), min_size=8, max_size=8))
@settings(max_examples=150, deadline=None)
def test_tables_are_reduced_without_loss(matrix, costs):
    cost = np.array(costs[: matrix.shape[1]], dtype=float)
    least = all_covers(matrix)
    core = reduce_to_core(matrix, cost)
    rest = all_covers(core.matrix) if len(core.columns) else 0
    assert len(core.chosen) + rest == least
    greedy = greedy_cover(matrix, cost)
    assert matrix[:, greedy].any(axis=1).all()
    assert len(greedy) >= least
    for k in range(len(greedy)):
        assert not matrix[:, np.delete(greedy, k)].any(axis=1).all()
    assert len(irredundant(matrix, np.arange(matrix.shape[1]))) >= least
    core = reduce_to_core(matrix, cost)
    chosen, bound = smallest_cover(core, np.zeros(matrix.shape[1]), 0, Effort())
    assert matrix[:, chosen].any(axis=1).all()
    assert len(chosen) == bound == least


def test_a_start_that_comes_back_as_the_optimum_is_noticed():
    # highspy 1.16 answers this program with the start, of cost 6, and says that it costs 5.
    primes = [(1, 0), (0, 1), (0, 2), (3, 0), (1, 2)]
    links = [(0, 1), (1, 1), (1, 2), (1, 4), (2, 0), (2, 3), (2, 4), (3, 3)]
    demands = [(0, (1,)), (1, (1,)), (1, (2, 4)), (2, (0, 4)), (2, (0, 3)), (3, (3,))]
    # Variables: five primes, eight links (output phase, prime), two polarities.
    rows = []
    for phase, among in demands:
        entries = {5 + links.index((phase, p)): 1.0 for p in among}
        entries[13 + phase % 2] = -1.0 if phase < 2 else 1.0
        rows.append((entries, 0.0 if phase < 2 else 1.0))
    rows += [({p: 1.0, 5 + k: -1.0}, 0.0) for k, (_, p) in enumerate(links)]
    rows.append((dict.fromkeys(range(5), -1.0), -2.0))
    literals = [(ones | zeros).bit_count() for ones, zeros in primes]
    cost = np.array([*literals, *[1] * 8, 0, 0], dtype=float)
    solver = solver_module.Solver()
    solver.load(
        cost,
        np.ones(15),
        np.concatenate([[0], np.cumsum([len(e) for e, _ in rows])]).astype(np.int32),
        np.concatenate([list(e) for e, _ in rows]).astype(np.int32),
        np.concatenate([list(e.values()) for e, _ in rows]),
        np.array([low for _, low in rows]),
        integer=np.ones(15, dtype=bool),
    )
    start = np.array([0, 1, 0, 0, 1, 1, 1, 0, 1, 0, 0, 0, 0, 1, 1], dtype=float)
    outcome = solver_module.solve_integer(solver, start, 20)
    assert outcome.optimal
    assert (outcome.bound, cost @ outcome.x) == (5, 5)
