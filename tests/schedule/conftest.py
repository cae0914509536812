"""Assertions made in the shared checks explain themselves."""

import pytest

pytest.register_assert_rewrite("tests.hold_plans", "tests.by_hand")
