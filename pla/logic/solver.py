"""The one place that talks to the linear and integer programming library.

Its answers are never taken on trust: callers check covers against the function, and lower bounds
are recomputed from the dual weights in exact integer arithmetic (`pla.logic.relaxation`).
"""

from __future__ import annotations

import contextlib
import signal
import threading
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import highspy
import numpy as np

from pla.errors import Diagnostic, InternalError

if TYPE_CHECKING:
    from collections.abc import Iterator

    from numpy.typing import NDArray

__all__ = ["IntegerOutcome", "Solver", "solve_integer"]

SAFETY_SECONDS = 600.0
_SMALL = 300


class Solver(highspy.Highs):
    """The library's model, silent, single-threaded and seeded, so that it is deterministic."""

    def __init__(self) -> None:
        super().__init__()  # type: ignore[no-untyped-call]
        for option, value in (
            ("output_flag", False),
            ("threads", 1),
            ("random_seed", 0),
            ("parallel", "off"),
        ):
            self.option(option, value)

    def enableCallbacks(self) -> None:  # noqa: N802 - the library's name; its banner comes here
        self.setOptionValue("output_flag", False)
        super().enableCallbacks()  # type: ignore[no-untyped-call]

    def option(self, name: str, value: Any) -> None:
        """Set an option; the library only returns a status where others raise."""
        if self.setOptionValue(name, value) != highspy.HighsStatus.kOk:
            raise InternalError(
                [Diagnostic("SOLVER", f"the solver refuses its option {name} = {value}")]
            )

    def load(
        self,
        cost: NDArray[np.float64],
        upper: NDArray[np.float64],
        starts: NDArray[np.int32],
        columns: NDArray[np.int32],
        values: NDArray[np.float64],
        row_lower: NDArray[np.float64],
        row_upper: NDArray[np.float64] | None = None,
        integer: NDArray[np.bool_] | None = None,
    ) -> None:
        """Minimize cost·x over 0 <= x <= upper, row_lower <= A x <= row_upper, A by rows."""
        model = highspy.HighsLp()
        model.num_col_ = len(cost)
        model.num_row_ = len(row_lower)
        model.col_cost_ = cost
        model.col_lower_ = np.zeros(len(cost))
        model.col_upper_ = upper
        model.row_lower_ = row_lower
        model.row_upper_ = (
            np.full(len(row_lower), highspy.kHighsInf) if row_upper is None else row_upper
        )
        model.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
        model.a_matrix_.start_ = starts
        model.a_matrix_.index_ = columns
        model.a_matrix_.value_ = values
        if integer is not None:
            kinds = (highspy.HighsVarType.kContinuous, highspy.HighsVarType.kInteger)
            model.integrality_ = [kinds[int(i)] for i in integer]
        self.passModel(model)

    def work(self) -> int:
        """Simplex iterations of the last run."""
        return max(0, int(self.getInfo().simplex_iteration_count))


@contextlib.contextmanager
def interruptible(solver: Solver) -> Iterator[None]:
    """Let Ctrl-C stop a run: the library loses exceptions that are raised in its callbacks.

    A small program is left alone: it ends sooner than anyone could press a key.
    """
    if solver.getNumRow() + solver.getNumCol() < _SMALL:
        yield
        return
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    pressed = False

    def remember(_signal: int, _frame: Any) -> None:
        nonlocal pressed
        pressed = True

    def ask(event: Any) -> None:
        if pressed:
            event.interrupt()

    before = signal.signal(signal.SIGINT, remember)
    callbacks = (solver.cbMipInterrupt, solver.cbSimplexInterrupt)
    for callback in callbacks:
        callback.subscribe(ask)
    try:
        yield
    finally:
        for callback in callbacks:
            callback.unsubscribe(ask)
        signal.signal(signal.SIGINT, before)
    if pressed:
        raise KeyboardInterrupt


@dataclass(frozen=True, slots=True)
class IntegerOutcome:
    """What an integer program came to.

    Attributes:
        x: The best values found, rounded; ``None`` if there were none within the budget.
        bound: The solver's lower bound on the objective (floating point, not verified).
        optimal: Whether the solver says that `x` is best.
        work: Simplex iterations spent.
        clock: Whether the safety net of the clock cut in, so that the outcome may not repeat.
    """

    x: NDArray[np.int64] | None
    bound: float
    optimal: bool
    work: int
    clock: bool


def solve_integer(
    solver: Solver,
    start: NDArray[np.float64] | None,
    max_nodes: int,
    seconds: float = SAFETY_SECONDS,
) -> IntegerOutcome:
    """Solve the integer program that was loaded, from a starting solution if there is one.

    Args:
        solver: With the model loaded.
        start: A feasible solution, or ``None``.
        max_nodes: Branching budget: it decides, so that results repeat.
        seconds: Safety net.
    """
    solver.option("mip_max_nodes", max_nodes)
    solver.option("time_limit", seconds)
    solver.option("mip_rel_gap", 0.0)
    _run(solver, start)
    work = solver.work()
    if not _consistent(solver):
        # Seen in 1.16: where presolve leaves nothing to do, the start is handed back as if it were
        # the optimum that presolve found, with that one's objective, or with a lower one.
        solver.clearSolver()
        solver.option("presolve", "off")
        _run(solver, start)
        work += solver.work()
    status = solver.getModelStatus()
    info = solver.getInfo()
    found = info.primal_solution_status == highspy.SolutionStatus.kSolutionStatusFeasible
    x = np.rint(np.array(solver.getSolution().col_value)).astype(np.int64) if found else None
    return IntegerOutcome(
        x,
        float(info.mip_dual_bound),
        status == highspy.HighsModelStatus.kOptimal,
        work,
        status == highspy.HighsModelStatus.kTimeLimit,
    )


def _run(solver: Solver, start: NDArray[np.float64] | None) -> None:
    if start is not None:
        solution = highspy.HighsSolution()
        solution.col_value = start
        solver.setSolution(solution)
    with interruptible(solver):
        solver.run()


def _consistent(solver: Solver) -> bool:
    """Whether the solution found costs what the library says it does; so also if there is none."""
    info = solver.getInfo()
    if info.primal_solution_status != highspy.SolutionStatus.kSolutionStatusFeasible:
        return True
    cost = np.array(solver.getLp().col_cost_) @ np.array(solver.getSolution().col_value)
    return bool(abs(cost - info.objective_function_value) < 0.5)
