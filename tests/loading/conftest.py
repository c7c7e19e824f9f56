"""The same Hypothesis settings as the planner's tests."""

from tests.planning import conftest as planning  # noqa: F401 - importing it loads them
