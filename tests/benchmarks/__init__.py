"""Speed and memory of the planner, as ratios taken in one run: ``uv run python -m tests.benchmarks``."""
