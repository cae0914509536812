"""A mixed-integer model as plain columns and rows, handed whole to a solver of OR-Tools."""

import threading
import time
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import timedelta
from typing import Literal

import numpy as np
from numpy.typing import NDArray
from ortools.math_opt import model_pb2
from ortools.math_opt.python import mathopt
from ortools.math_opt.solvers import highs_pb2
from ortools.util.python.solve_interrupter import SolveInterrupter

Term = tuple[int, float]
Solver = Literal["highs", "scip"]
Status = Literal["optimal", "feasible", "infeasible", "unknown"]
Values = NDArray[np.float64]

_CHUNK = 40
# Bit of HiGHS's presolve rule "aggregator", which would put the short rows together again.
_AGGREGATOR_OFF = 1 << 12

# After Ctrl-C a solver gets this long to let go; then it is left behind.
_GRACE_S = 2.0

_SOLVERS = {"highs": mathopt.SolverType.HIGHS, "scip": mathopt.SolverType.GSCIP}


@dataclass(frozen=True, slots=True, eq=False)
class Answer:
    """What a solver said.

    Attributes:
        values: of every column, empty when there is no solution.
        value, bound: of the objective, in its own direction.
    """

    status: Status
    values: Values
    value: float
    bound: float
    seconds: float

    @property
    def found(self) -> bool:
        """True when there is a solution to look at."""
        return self.status in {"optimal", "feasible"}


@dataclass(slots=True, eq=False)
class Model:
    """Columns and rows being built; indices are handed out in order."""

    lower: list[float] = field(default_factory=list)
    upper: list[float] = field(default_factory=list)
    integer: list[bool] = field(default_factory=list)
    row_lower: list[float] = field(default_factory=list)
    row_upper: list[float] = field(default_factory=list)
    row_of: list[int] = field(default_factory=list)
    column_of: list[int] = field(default_factory=list)
    coefficient: list[float] = field(default_factory=list)

    def column(self, lower: float = 0.0, upper: float = np.inf, *, integer: bool = False) -> int:
        """Add a column and return its index."""
        self.lower.append(lower)
        self.upper.append(upper)
        self.integer.append(integer)
        return len(self.lower) - 1

    def binary(self) -> int:
        """Add a 0/1 column and return its index."""
        return self.column(0.0, 1.0, integer=True)

    def row(self, terms: Iterable[Term], lower: float = -np.inf, upper: float = np.inf) -> int:
        """Add lower <= sum of terms <= upper and return its index; terms of one column are added up."""
        index = len(self.row_lower)
        total: dict[int, float] = {}
        for column, coefficient in terms:
            total[column] = total.get(column, 0.0) + coefficient
        for column in sorted(total):
            if total[column]:
                self.row_of.append(index)
                self.column_of.append(column)
                self.coefficient.append(total[column])
        self.row_lower.append(lower)
        self.row_upper.append(upper)
        return index

    def long_row(self, terms: Sequence[Term], lower: float = -np.inf, upper: float = np.inf) -> None:
        """Add a row of many terms as a sum of short ones, in the order given.

        Cuts that HiGHS aggregates along continuous columns become as dense as the
        densest row on their way; a row over the whole week made each round of cuts ten
        times slower.
        """
        if len(terms) <= 2 * _CHUNK:
            self.row(terms, lower, upper)
            return
        sums: list[Term] = []
        for place in range(0, len(terms), _CHUNK):
            part = self.column(-np.inf)
            sums.append((part, 1.0))
            chunk = [(part, 1.0), *((column, -value) for column, value in terms[place : place + _CHUNK])]
            self.row(chunk, *((-np.inf, 0.0) if np.isfinite(lower) else (0.0, np.inf)))
        self.row(sums, lower, upper)

    def fix(self, column: int, value: float) -> None:
        """Hold a column at a value."""
        self.lower[column] = self.upper[column] = value

    def copy(self) -> "Model":
        """Return a copy that can be changed on its own."""
        return Model(*(list(getattr(self, name)) for name in self.__slots__))

    def solve(
        self,
        objective: Mapping[int, float],
        *,
        maximise: bool,
        seconds: float,
        solver: Solver = "highs",
        relaxed: bool = False,
        gap: float = 1e-4,
        whole: bool = False,
        hint: Values | None = None,
    ) -> Answer:
        """Optimise one objective.

        Args:
            objective: coefficients by column.
            maximise: direction.
            seconds: time limit; the best solution so far is returned when it strikes.
            solver: which one.
            relaxed: leave integrality out.
            gap: relative gap at which a solution counts as optimal.
            whole: the objective is a count, so a gap under 1 proves it.
            hint: a solution to start from, for solvers that listen.
        """
        begin = time.perf_counter()
        model = mathopt.Model.from_model_proto(self._proto(objective, maximise=maximise, relaxed=relaxed))
        parameters = mathopt.SolveParameters(
            time_limit=timedelta(seconds=max(0.05, seconds)),
            relative_gap_tolerance=gap,
            absolute_gap_tolerance=0.999 if whole else 1e-9,
            highs=_highs(),
        )
        extra = mathopt.ModelSolveParameters()
        if hint is not None:
            # HiGHS fails on a hint outside the bounds, which fixing columns may have narrowed.
            columns = {
                model.get_variable(n): min(max(round(float(v)), self.lower[n]), self.upper[n])
                for n, v in enumerate(hint)
                if self.integer[n]
            }
            extra.solution_hints.append(mathopt.SolutionHint(variable_values=columns))
        result = _interruptible(model, _SOLVERS[solver], parameters, extra)
        if isinstance(result, Exception):
            # HiGHS fails on a few sound models; without a hint and presolve it mostly does not.
            parameters.highs = _highs(presolve="off")
            result = _interruptible(model, _SOLVERS[solver], parameters, mathopt.ModelSolveParameters())
        if isinstance(result, Exception):
            other = mathopt.SolverType.GSCIP if solver == "highs" else mathopt.SolverType.HIGHS
            result = _interruptible(model, other, parameters, mathopt.ModelSolveParameters())
        if isinstance(result, Exception):
            return Answer("unknown", np.empty(0), np.nan, np.nan, time.perf_counter() - begin)
        return self._answer(result, time.perf_counter() - begin)

    def _answer(self, result: mathopt.SolveResult, seconds: float) -> Answer:
        """Return a solver's result in our words."""
        reason = mathopt.TerminationReason
        bound = result.termination.objective_bounds.dual_bound
        if not result.has_primal_feasible_solution():
            infeasible = result.termination.reason in {reason.INFEASIBLE, reason.INFEASIBLE_OR_UNBOUNDED}
            return Answer("infeasible" if infeasible else "unknown", np.empty(0), np.nan, bound, seconds)
        status: Status = "optimal" if result.termination.reason == reason.OPTIMAL else "feasible"
        found = result.variable_values()
        values = np.zeros(len(self.lower))
        for variable, value in found.items():
            values[variable.id] = value
        return Answer(status, values, result.objective_value(), bound, seconds)

    def _proto(
        self, objective: Mapping[int, float], *, maximise: bool, relaxed: bool
    ) -> model_pb2.ModelProto:
        """Return the model as OR-Tools stores it; filling lists at once is what makes it fast."""
        proto = model_pb2.ModelProto()
        columns, rows = len(self.lower), len(self.row_lower)
        proto.variables.ids.extend(range(columns))
        proto.variables.lower_bounds.extend(self.lower)
        proto.variables.upper_bounds.extend(self.upper)
        proto.variables.integers.extend([False] * columns if relaxed else self.integer)
        proto.objective.maximize = maximise
        used = sorted(column for column, value in objective.items() if value)
        proto.objective.linear_coefficients.ids.extend(used)
        proto.objective.linear_coefficients.values.extend(objective[column] for column in used)
        proto.linear_constraints.ids.extend(range(rows))
        proto.linear_constraints.lower_bounds.extend(self.row_lower)
        proto.linear_constraints.upper_bounds.extend(self.row_upper)
        proto.linear_constraint_matrix.row_ids.extend(self.row_of)
        proto.linear_constraint_matrix.column_ids.extend(self.column_of)
        proto.linear_constraint_matrix.coefficients.extend(self.coefficient)
        return proto


def _interruptible(
    model: mathopt.Model,
    solver: mathopt.SolverType,
    parameters: mathopt.SolveParameters,
    extra: mathopt.ModelSolveParameters,
) -> mathopt.SolveResult | Exception:
    """Solve in a thread of its own, so that Ctrl-C is heard; a failure inside is returned."""
    stop = SolveInterrupter()
    found: list[mathopt.SolveResult | Exception] = []

    def work() -> None:
        try:
            found.append(
                mathopt.solve(model, solver, params=parameters, model_params=extra, interrupter=stop)
            )
        except (AttributeError, RuntimeError, ValueError) as error:
            # A failed solve can surface as an AttributeError about a status code.
            found.append(error)

    worker = threading.Thread(target=work, daemon=True)
    worker.start()
    try:
        while worker.is_alive():
            worker.join(0.2)
    except KeyboardInterrupt:
        stop.interrupt()
        worker.join(_GRACE_S)
        raise
    return found[0]


def _highs(**strings: str) -> highs_pb2.HighsOptionsProto:
    """Return HiGHS's options; two cores are left to the machine, and one thread is reproducible."""
    return highs_pb2.HighsOptionsProto(
        int_options={"threads": 1, "presolve_rule_off": _AGGREGATOR_OFF},
        double_options={"mip_feasibility_tolerance": 1e-7},
        string_options=strings,
    )
