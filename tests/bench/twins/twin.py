"""What all twins share: arrays come and go as raw files, times as one line of JSON.

A twin is the best single-threaded NumPy or SciPy that we could write for a task; an honest rival.
The thread count of BLAS is set by the environment that starts it.
"""
import json
import os
import sys
import time

import numpy as np

FOLDER = sys.argv[1]
REPEATS = int(sys.argv[2])


def read(name, dtype, shape):
    return np.fromfile(os.path.join(FOLDER, name), dtype).reshape(shape)


def settings():
    with open(os.path.join(FOLDER, "settings.json")) as file:
        return json.load(file)


def report(work):
    """Warms up, repeats, writes the last result of `work` and prints its times in seconds."""
    result = work()
    times = []
    for _ in range(REPEATS):
        start = time.perf_counter()
        cpu = time.process_time()
        result = work()
        times.append([time.perf_counter() - start, time.process_time() - cpu])
    np.asarray(result, np.float64).tofile(os.path.join(FOLDER, "twin.f64"))
    print(json.dumps({"times": times, "numpy": np.__version__}))
