"""The one file that knows python-mip: warm relaxations, and whole solves by CBC or HiGHS.

Settings and their reasons were measured with python-mip 2.0.0 and cbcbox 2.935.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from enum import Enum, StrEnum
from math import inf, isfinite
from typing import Any

import cffi
import highsbox
import mip
import numpy as np
from mip.cbc import cbc_set_parameter, cbclib, ffi

from solver.matrix import Floats, Matrix, Row, RowSense

# CBC's own defaults are 1e-6; head counts of thousands times hours need more
PRIMAL_TOLERANCE = 1e-9
DUAL_TOLERANCE = 1e-9


class EngineFailure(RuntimeError):
    """An engine answered something its documentation does not allow."""

    def __init__(self, engine: str, said: object) -> None:
        super().__init__(f"{engine} answered {said}")
        self.engine = engine
        self.said = said


class LpStatus(Enum):
    """What a relaxation can be."""

    OPTIMAL = 0
    INFEASIBLE = 2
    UNBOUNDED = 3


class WholeStatus(StrEnum):
    """What a whole solve can be; FEASIBLE and NOTHING are those cut short by the time limit."""

    OPTIMAL = "optimal"
    FEASIBLE = "feasible"
    INFEASIBLE = "infeasible"
    NOTHING = "nothing"


class EngineName(StrEnum):
    """The two engines of a proof, both through python-mip."""

    CBC = "CBC"
    HIGHS = "HIGHS"


Heard = Callable[[float, float, Floats | None], None]


@dataclass(frozen=True)
class WholeResult:
    """A whole solve: `x` None unless OPTIMAL or FEASIBLE; `bound` a lower bound on every objective."""

    status: WholeStatus
    objective: float
    bound: float
    x: Floats | None


class Relaxation:
    """One linear program kept warm in CLP. Bounds, costs, right-hand sides and rows may change.

    Columns keep their place; integrality is ignored here. Not safe for threads.
    """

    def __init__(self, matrix: Matrix) -> None:
        self._model = mip.Model(solver_name=mip.CBC)
        self._model.verbose = 0
        self._c = self._model.solver._model
        cbclib.Cbc_storeNameIndexes(self._c, b"\x00")
        self._width = matrix.width
        self._height = 0
        for cost, lower, upper in zip(matrix.cost, matrix.lower, matrix.upper, strict=True):
            cbclib.Cbc_addCol(self._c, b"", lower, upper, cost, b"\x00", 0, ffi.NULL, ffi.NULL)
        # CBC's interface loses rows without entries: those get a column fixed at nothing
        cbclib.Cbc_addCol(self._c, b"", 0.0, 0.0, 0.0, b"\x00", 0, ffi.NULL, ffi.NULL)
        for row in matrix.rows:
            self.add_row(row)
        cbclib.Cbc_setPrimalTolerance(self._c, PRIMAL_TOLERANCE)
        cbclib.Cbc_setDualTolerance(self._c, DUAL_TOLERANCE)

    def add_row(self, row: Row) -> int:
        """Append a row; returns its index."""
        columns, coefs = (row.columns, row.coefs) if row.columns else ((self._width,), (1.0,))
        cbclib.Cbc_addRow(self._c, b"", len(columns), columns, coefs, row.sense.value.encode(), row.rhs)
        self._height += 1
        return self._height - 1

    def set_bounds(self, column: int, lower: float, upper: float) -> None:
        """Change the bounds of one column."""
        cbclib.Cbc_setColLower(self._c, column, lower)
        cbclib.Cbc_setColUpper(self._c, column, upper)

    def set_cost(self, column: int, cost: float) -> None:
        """Change the objective coefficient of one column."""
        cbclib.Cbc_setObjCoeff(self._c, column, cost)

    def set_rhs(self, row: int, rhs: float) -> None:
        """Change the right-hand side of one row."""
        cbclib.Cbc_setRowRHS(self._c, row, rhs)

    def solve(self) -> LpStatus:
        """Solve from the last basis. Raises EngineFailure on anything but the three statuses."""
        code = cbclib.Cbc_resolve(self._c)
        try:
            return LpStatus(code)
        except ValueError:
            raise EngineFailure("CLP", f"status {code}") from None

    # x, prices and the objective are live C memory: copied at once, before the model changes

    @property
    def objective(self) -> float:
        """Objective of the last solve."""
        return float(cbclib.Cbc_getObjValue(self._c))

    @property
    def x(self) -> Floats:
        """A copy of the columns' values."""
        return _copy(cbclib.Cbc_getColSolution(self._c), self._width)

    @property
    def prices(self) -> Floats:
        """A copy of the rows' dual prices, d objective / d rhs."""
        return _copy(cbclib.Cbc_getRowPrice(self._c), self._height)


def _copy(pointer: object, count: int) -> Floats:
    if count == 0:
        return np.zeros(0)
    return np.frombuffer(ffi.buffer(pointer, 8 * count), dtype=np.float64).copy()


def whole(
    matrix: Matrix,
    engine: EngineName,
    *,
    seconds: float,
    start: Sequence[float] | None = None,
    threads: int = 1,
    heard: Heard | None = None,
) -> WholeResult:
    """Solve the mixed integer program with one engine, at most `seconds` long.

    Every integer column needs finite bounds. `start` is a whole solution, every column, or None.
    `heard(bound, objective, x)` hears of better bounds and (x not None) solutions on the way, from
    HiGHS only: CBC's callbacks end the process (python-mip 2.0.0).
    """
    if not matrix.cost:  # python-mip answers OTHER for a program without columns
        return _without_columns(matrix)
    model, columns = _python_mip_model(matrix, engine)
    model.threads = threads
    if start is not None:
        model.start = list(zip(columns, (float(v) for v in start), strict=True))
    listening = _listen(model, len(columns), heard) if heard and engine is EngineName.HIGHS else None
    status = model.optimize(max_seconds=max(seconds, 0.01))  # sticks to later calls: always given
    del listening  # C held it until here
    return _whole_result(model, columns, status, engine)


def _listen(model: mip.Model, width: int, heard: Heard) -> object:
    """Have HiGHS call back; the result must live as long as the solve."""
    from mip import highs

    reader = cffi.FFI()
    reader.cdef("const void* Highs_getCallbackDataOutItem(const void* out, const char* name);")
    library = reader.dlopen(os.environ["PMIP_HIGHS_LIBRARY"])

    def item(out: object, name: bytes) -> Any:
        # python-mip declares an older layout of this structure: its fields are asked for by name
        pointer = reader.cast("void*", int(highs.ffi.cast("uintptr_t", out)))
        return reader.cast("double*", library.Highs_getCallbackDataOutItem(pointer, name))

    signature = "void(int, const char*, const HighsCallbackDataOut*, HighsCallbackDataIn*, void*)"

    @highs.ffi.callback(signature)  # type: ignore[untyped-decorator] # cffi has no types for it
    def told(kind: int, _message: object, out: object, _in: object, _user: object) -> None:
        bound = item(out, b"mip_dual_bound")[0]
        bound = bound if isfinite(bound) else -inf
        if kind == highs.highslib.kHighsCallbackMipImprovingSolution:
            x = np.frombuffer(reader.buffer(item(out, b"mip_solution"), 8 * width)).copy()
            heard(bound, item(out, b"objective_function_value")[0], x)
        else:
            heard(bound, inf, None)

    solver = model.solver._model
    highs.highslib.Highs_setCallback(solver, told, highs.ffi.NULL)
    for kind in ("kHighsCallbackMipImprovingSolution", "kHighsCallbackMipLogging"):
        highs.highslib.Highs_startCallback(solver, getattr(highs.highslib, kind))
    return told


def _without_columns(matrix: Matrix) -> WholeResult:
    holds = {
        RowSense.AT_LEAST: lambda rhs: rhs <= 0,
        RowSense.AT_MOST: lambda rhs: rhs >= 0,
        RowSense.EQUAL: lambda rhs: rhs == 0,
    }
    if all(holds[row.sense](row.rhs) for row in matrix.rows):
        return WholeResult(WholeStatus.OPTIMAL, 0.0, 0.0, np.zeros(0))
    return WholeResult(WholeStatus.INFEASIBLE, inf, inf, None)


def _point_to_highs() -> None:
    """python-mip would first try another package's copy, which need not offer the C interface."""
    library = {"win32": ("bin", "highs.dll"), "darwin": ("lib", "libhighs.dylib")}
    folder, name = library.get(sys.platform, ("lib", "libhighs.so"))
    os.environ.setdefault("PMIP_HIGHS_LIBRARY", os.path.join(highsbox.highs_dist_dir(), folder, name))


def _python_mip_model(matrix: Matrix, engine: EngineName) -> tuple[mip.Model, list[mip.Var]]:
    if engine is EngineName.HIGHS:
        _point_to_highs()
    model = mip.Model(solver_name=engine.value)
    model.verbose = 0
    model.max_mip_gap = 0.0  # the defaults stop at 1e-4
    model.max_mip_gap_abs = 0.0
    model.infeas_tol = PRIMAL_TOLERANCE
    model.integer_tol = 1e-7
    columns = [
        model.add_var(lb=lower, ub=upper, obj=cost, var_type=mip.INTEGER if integer else mip.CONTINUOUS)
        for cost, lower, upper, integer in zip(
            matrix.cost, matrix.lower, matrix.upper, matrix.integer, strict=True
        )
    ]
    senses = {RowSense.AT_LEAST: ">", RowSense.AT_MOST: "<", RowSense.EQUAL: "="}
    for row in matrix.rows:
        model.add_constr(
            mip.LinExpr([columns[c] for c in row.columns], list(row.coefs), -row.rhs, senses[row.sense])
        )
    if engine is EngineName.CBC:
        # without these two CBC calls 1.6 % of plans with ratio rows infeasible that are not
        cbc_set_parameter(model.solver, "boundPropLevel", "off")
        cbc_set_parameter(model.solver, "nodeBoundProp", "off")
    return model, columns


def _whole_result(
    model: mip.Model, columns: list[mip.Var], status: mip.OptimizationStatus, engine: EngineName
) -> WholeResult:
    if status in (mip.OptimizationStatus.INFEASIBLE, mip.OptimizationStatus.INT_INFEASIBLE):
        return WholeResult(WholeStatus.INFEASIBLE, inf, inf, None)
    bound = model.objective_bound
    bound = -inf if bound is None or not isfinite(bound) or abs(bound) > 1e300 else float(bound)
    if status is mip.OptimizationStatus.NO_SOLUTION_FOUND:
        return WholeResult(WholeStatus.NOTHING, inf, bound, None)
    if status not in (mip.OptimizationStatus.OPTIMAL, mip.OptimizationStatus.FEASIBLE):
        raise EngineFailure(engine.value, status)
    x = np.array([column.x for column in columns], dtype=np.float64)
    objective = float(model.objective_value)
    if status is mip.OptimizationStatus.OPTIMAL:
        return WholeResult(WholeStatus.OPTIMAL, objective, objective, x)
    return WholeResult(WholeStatus.FEASIBLE, objective, min(bound, objective), x)


def quiet_native_output() -> int:
    """Send what native code prints to nowhere; returns a descriptor of the real standard output.

    CLP prints on cold relaxations although told not to. On Windows native code has its own table of
    descriptors and the noise stays; readers skip what is not framed.
    """
    kept = os.dup(1)
    nowhere = os.open(os.devnull, os.O_WRONLY)
    os.dup2(nowhere, 1)
    os.close(nowhere)
    return kept
