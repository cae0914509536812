"""The second opinion: starts again from mission and elements and reads a plan rule by rule.

Nothing here shares a formula with `sky`, `budgets` or `schedule`. Where a textbook line
stands in both, that is on purpose: two people wrote it down from the same page.
"""

from passplan.verify.opinion import check

__all__ = ["check"]
