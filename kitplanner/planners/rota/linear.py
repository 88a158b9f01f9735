"""A linear program held open in the solver, so that each aim of the order is one warm restart."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]

INFINITE = 1e30
# HiGHS refuses a second object with another thread count; one everywhere also keeps answers repeatable.
THREADS = 1


class LinearModelError(RuntimeError):
    """The solver stopped without an optimum."""


def _silent_solver() -> Any:
    """Return a solver that writes nothing, its greeting included."""
    import highspy

    class Silent(highspy.Highs):
        """The solver greets on standard output in its own constructor unless it is silenced inside it."""

        def enableCallbacks(self) -> Any:  # noqa: N802 - the solver's name
            self.setOptionValue("output_flag", False)
            return super().enableCallbacks()  # type: ignore[no-untyped-call]

    return Silent()  # type: ignore[no-untyped-call]


class LinearModel:
    """Columns and rows collected as triplets, then minimised for one cost after another."""

    def __init__(self) -> None:
        """Start without columns and rows."""
        self._lower: list[float] = []
        self._upper: list[float] = []
        self._row_lower: list[float] = []
        self._row_upper: list[float] = []
        self._starts: list[int] = [0]
        self._index: list[npt.NDArray[np.int32]] = []
        self._value: list[FloatArray] = []
        self._highs: Any = None

    @property
    def columns(self) -> int:
        """Columns so far."""
        return len(self._lower)

    def add_columns(self, upper: Sequence[float] | FloatArray) -> npt.NDArray[np.int32]:
        """Add columns from 0 to the given bounds; return their places."""
        place = np.arange(self.columns, self.columns + len(upper), dtype=np.int32)
        self._lower.extend([0.0] * len(upper))
        self._upper.extend(float(each) for each in upper)
        return place

    def add_row(
        self, columns: npt.NDArray[np.int32], values: FloatArray | Sequence[float], low: float, high: float
    ) -> int:
        """Add low <= values . columns <= high; return the row's place."""
        self._index.append(np.asarray(columns, dtype=np.int32))
        self._value.append(np.asarray(values, dtype=float))
        self._starts.append(self._starts[-1] + len(columns))
        self._row_lower.append(low)
        self._row_upper.append(high)
        return len(self._row_lower) - 1

    def load(self) -> None:
        """Hand everything to the solver."""
        # The solver loads late: the window paints before it.
        import highspy

        lp = highspy.HighsLp()
        lp.num_col_, lp.num_row_ = self.columns, len(self._row_lower)
        lp.col_cost_ = np.zeros(self.columns)
        lp.col_lower_, lp.col_upper_ = np.array(self._lower), np.array(self._upper)
        lp.row_lower_, lp.row_upper_ = np.array(self._row_lower), np.array(self._row_upper)
        lp.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
        lp.a_matrix_.start_ = np.array(self._starts, dtype=np.int32)
        lp.a_matrix_.index_ = np.concatenate(self._index) if self._index else np.zeros(0, dtype=np.int32)
        lp.a_matrix_.value_ = np.concatenate(self._value) if self._value else np.zeros(0)
        highs = _silent_solver()
        highs.setOptionValue("threads", THREADS)
        highs.passModel(lp)
        self._highs = highs

    def set_column_upper(self, column: int, upper: float) -> None:
        """Change the upper bound of a column."""
        self._highs.changeColBounds(int(column), 0.0, float(upper))

    def set_row(self, row: int, low: float, high: float) -> None:
        """Change the bounds of a row."""
        self._highs.changeRowBounds(int(row), float(low), float(high))

    def minimise(self, costs: dict[int, float]) -> FloatArray | None:
        """Return the columns at the least cost, None where no point fits all rows.

        Raises
        ------
        LinearModelError
            The solver ended in any other way.
        """
        import highspy

        cost = np.zeros(self.columns)
        for column, value in costs.items():
            cost[column] = value
        self._highs.changeColsCost(self.columns, np.arange(self.columns, dtype=np.int32), cost)
        self._highs.run()
        status = self._highs.getModelStatus()
        if status == highspy.HighsModelStatus.kModelEmpty:
            return np.zeros(self.columns)
        if status == highspy.HighsModelStatus.kUnknown:
            # A warm start can get stuck in rounding; a cold one without presolve does not carry it over.
            self._highs.clearSolver()
            self._highs.setOptionValue("presolve", "off")
            self._highs.run()
            self._highs.setOptionValue("presolve", "choose")
            status = self._highs.getModelStatus()
        if status == highspy.HighsModelStatus.kOptimal:
            return np.array(self._highs.getSolution().col_value)
        if status in (highspy.HighsModelStatus.kInfeasible, highspy.HighsModelStatus.kUnboundedOrInfeasible):
            return None
        raise LinearModelError(f"the linear solver stopped with {self._highs.modelStatusToString(status)}")
