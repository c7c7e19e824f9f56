"""Peak memory in MB of a fresh process that plans one case once, all that it imports included."""

import sys
from pathlib import Path

from app.planning import plan
from tests.benchmarks.instances import CASES

plan(CASES[sys.argv[1]]())
# Not getrusage: Linux lets a child inherit the peak of the process that started it.
status = Path("/proc/self/status").read_text().split("VmHWM:")[1]
print(int(status.split()[0]) // 1024)
