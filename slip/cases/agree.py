"""Rows that do not go together with the others of their case."""

from __future__ import annotations

import numpy as np
import polars as pl

from slip.cases.form import Form

Array = np.ndarray


def second_rows(good: pl.DataFrame, key: Array) -> list[tuple[Array, str]]:
    """Rows whose case, bolt and end have a row already."""
    if not key.size or np.bincount(key).max() < 2:
        return []
    _, first = np.unique(key, return_index=True)
    return [(np.setdiff1d(np.arange(len(key)), first), "a second row for this case, bolt and end")]


def contradictions(form: Form, good: pl.DataFrame, case: Array, reasons: Array) -> list[tuple[Array, str]]:
    """Rows whose kind or ratio is not that of the first row of their case, or goes against its other end."""
    found = []
    for name, typed in (
        ("kind", good["kind"].fill_null("") if "kind" in form.columns else None),
        ("ratio", good["=ratio"] if "ratio" in form.columns else None),
    ):
        if typed is not None and good.height:
            column = typed.fill_null(2.0) if name == "ratio" else typed  # no ratio is 2
            first = column.gather(_first_of(case))
            wrong = np.flatnonzero((column != first).to_numpy())
            found.append((wrong, f"{name} is not that of the first row of the case"))
    if "end" in form.columns and good.height:
        two = np.isin(case, case[(good["end"] == "other").fill_null(False).to_numpy()])
        if "ratio" in form.columns:
            found.append(
                (np.flatnonzero(two & good["ratio"].is_not_null().to_numpy()), "a ratio and rows for the other end")
            )
        if "kind" in form.columns:
            static = (good["kind"] == "static").fill_null(False).to_numpy()
            found.append((np.flatnonzero(two & static), "kind static and rows for the other end"))
    if {"kind", "ratio"} <= form.columns.keys() and good.height:
        static = ((good["kind"] == "static") & good["ratio"].is_not_null()).fill_null(False).to_numpy()
        found.append((np.flatnonzero(static), "kind static and a ratio"))
    taken: Array = np.empty(0, dtype=np.int64)
    result = []
    for rows, said in found:
        rows = np.setdiff1d(rows, taken)
        taken = np.union1d(taken, rows)
        if rows.size:
            result.append((rows, said))
    return result


def _first_of(case: Array) -> Array:
    """Index of the first row of each row's case; cases stand together."""
    starts = np.flatnonzero(np.diff(case, prepend=-1))
    return np.repeat(starts, np.diff(np.append(starts, len(case))))
