"""Time and memory of `goniosim plan`, as a user meets them: first run ever, cold start, warm, and import.

    python tests/bench/bench_plan.py [SCENE]

Whole processes are timed from outside; the compile cache lies in a temporary folder, so that the first run is one.
"""

from __future__ import annotations

import os
import resource
import subprocess
import sys
import tempfile
import time

RUNS = 5
WARM = """
import time, goniosim
scene = goniosim.load_scene({scene!r})
goniosim.plan(scene)
best = 1e9
for _ in range({runs}):
    start = time.perf_counter()
    goniosim.plan(goniosim.load_scene({scene!r}))
    best = min(best, time.perf_counter() - start)
print(best)
"""


def seconds(arguments: list[str], environment: dict[str, str]) -> float:
    """Wall time of one process, in seconds."""
    start = time.perf_counter()
    subprocess.run(arguments, env=environment, check=True, capture_output=True)
    return time.perf_counter() - start


def main() -> None:
    """Measure and print."""
    scene = sys.argv[1] if len(sys.argv) > 1 else "right-eye-temporal"
    plan = [sys.executable, "-m", "goniosim.cli.main", "plan", scene, "--json"]
    with tempfile.TemporaryDirectory() as cache:
        environment = {**os.environ, "GONIOSIM_CACHE": cache}
        print(f"first run ever, compiling included   {seconds(plan, environment):6.2f} s")
        cold = [seconds(plan, environment) for _ in range(RUNS)]
        print(f"cold start to answer                 {sorted(cold)[RUNS // 2]:6.2f} s (middle of {RUNS})")
        warm = subprocess.run([sys.executable, "-c", WARM.format(scene=scene, runs=RUNS)], env=environment, check=True,
                              capture_output=True, text=True)
        print(f"warm: load, plan                     {float(warm.stdout):6.2f} s (best of {RUNS})")
        bare = [seconds([sys.executable, "-c", "pass"], environment) for _ in range(RUNS)]
        loaded = [seconds([sys.executable, "-c", "import goniosim"], environment) for _ in range(RUNS)]
        print(f"import goniosim, beyond Python's own {min(loaded) - min(bare):6.3f} s (best of {RUNS})")
    print(f"peak memory of any of these          {resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024:6.0f} MB")


if __name__ == "__main__":
    main()
