#!/usr/bin/env python3
"""A run that is asked to end ends soon, says so, and leaves nothing behind.

interrupt.py PROGRAM
"""

import os
import random
import signal
import subprocess
import sys
import tempfile
import time

JOB = """corpus:
  files: ["in.txt"]
  layout: lines
run_folder: "out"
passes:
  - accept: {occurrences: 3}
"""


def write_text(path):
    """40 MB, which take a second or more."""
    chance = random.Random(1)
    words = ["w%d" % number for number in range(50000)]
    with open(path, "w", encoding="ascii") as file:
        for _ in range(40):
            picked = chance.choices(words, k=170000)
            for at in range(0, len(picked), 20):
                file.write(" ".join(picked[at:at + 20]) + "\n")


def interrupted(program, folder, number):
    run = subprocess.Popen([program, "run", "job.yaml"], cwd=folder, stdout=subprocess.PIPE,
                           stderr=subprocess.PIPE, text=True)
    while run.poll() is None and not os.path.exists(os.path.join(folder, "out.partial")):
        time.sleep(0.001)
    run.send_signal(number)
    out, err = run.communicate(timeout=60)
    return run.returncode, out, err


def main():
    program = os.path.abspath(sys.argv[1])
    faults = []
    with tempfile.TemporaryDirectory(prefix="phraseweld-") as folder:
        write_text(os.path.join(folder, "in.txt"))
        with open(os.path.join(folder, "job.yaml"), "w", encoding="ascii") as file:
            file.write(JOB)
        before = sorted(os.listdir(folder))
        for number in (signal.SIGINT, signal.SIGTERM):
            code, out, err = interrupted(program, folder, number)
            if code != 130:
                faults.append(f"{number.name}: exit {code}, not 130")
            if "interrupted; nothing was left behind" not in err:
                faults.append(f"{number.name}: says {err!r}")
            if out:
                faults.append(f"{number.name}: printed {out!r}")
            if sorted(os.listdir(folder)) != before:
                faults.append(f"{number.name}: left {sorted(os.listdir(folder))}")
    print("\n".join(faults) or "ended twice, left nothing")
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
