"""All the rows of a week in one model, or all but one group of them."""

from collections.abc import Callable

from passplan.domain.problem import Problem
from passplan.schedule.model import Model
from passplan.schedule.rows_charge import charge_rows
from passplan.schedule.rows_contacts import contact_rows
from passplan.schedule.rows_people import people_rows
from passplan.schedule.rows_requests import request_rows
from passplan.schedule.rows_store import store_rows
from passplan.schedule.variables import Variables, variables

Rows = Callable[[Problem, Model, Variables], None]

_GROUPS: tuple[Rows, ...] = (contact_rows, request_rows, people_rows, store_rows, charge_rows)


def build(problem: Problem, *, left_out: Rows | None = None) -> tuple[Model, Variables]:
    """Return the model of a problem with every row but those of the steps.

    Args:
        problem: what to write down.
        left_out: a group of rows that is not to be there.
    """
    model = Model()
    names = variables(problem, model)
    for rows in _GROUPS:
        if rows is not left_out:
            rows(problem, model, names)
    return model, names
