"""Runs commands alternately and measures each: wall time, processor time, peak memory."""

import datetime
import json
import os
import platform
import shutil
import statistics
import subprocess
import time


class Measured:
    """The runs of one command: seconds and bytes, one entry a run, in the order they were made."""

    def __init__(self, name, command, before=None, after=None, environment=None, folder=None):
        self.name = name
        self.command = command          # a list of arguments, or a line for the shell
        self.before = before            # called before each run, not timed
        self.after = after              # called after each run, not timed
        self.environment = environment
        self.folder = folder
        self.wall = []
        self.processor = []
        self.peak = []

    def run_once(self):
        if self.before:
            self.before()
        start = time.perf_counter()
        process = subprocess.Popen(
            self.command, shell=isinstance(self.command, str), cwd=self.folder,
            stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL, stderr=subprocess.PIPE,
            env={**os.environ, **(self.environment or {})})
        complaint = process.stderr.read()
        _, status, usage = os.wait4(process.pid, 0)
        process.returncode = os.waitstatus_to_exitcode(status)
        wall = time.perf_counter() - start
        if process.returncode != 0:
            raise RuntimeError(f"{self.name} ended with {process.returncode}: "
                               f"{complaint.decode(errors='replace')[-2000:]}")
        self.wall.append(wall)
        self.processor.append(usage.ru_utime + usage.ru_stime)
        self.peak.append(usage.ru_maxrss * 1024)  # the kernel counts in KiB
        if self.after:
            self.after()

    def seconds(self):
        return statistics.median(self.wall)

    def most_memory(self):
        return max(self.peak)

    def record(self):
        command = self.command if isinstance(self.command, str) else " ".join(self.command)
        return {"name": self.name, "command": command, "wall_seconds": self.wall,
                "processor_seconds": self.processor, "peak_bytes": self.peak}


def alternate(measured, repeats):
    """Runs each in turn, round after round, so that a change of the machine meets all of them."""
    for _ in range(repeats):
        for one in measured:
            one.run_once()


def warm(path):
    """Reads a file so that the first run finds it in memory like the others."""
    with open(path, "rb") as file:
        while file.read(1 << 24):
            pass


def machine():
    """What the figures were taken on."""
    model = "unknown"
    with open("/proc/cpuinfo", encoding="utf-8") as file:
        for line in file:
            if line.startswith("model name"):
                model = line.split(":", 1)[1].strip()
                break
    return {"processor": model, "cores": len(os.sched_getaffinity(0)),
            "memory_bytes": os.sysconf("SC_PAGE_SIZE") * os.sysconf("SC_PHYS_PAGES"),
            "kernel": platform.release(), "load_at_start": os.getloadavg()[0]}


def commit(source):
    """The commit that was measured, "+" behind it when the tree differs from it."""
    git = ["git", "-c", "safe.directory=*", "-C", source]
    if not shutil.which("git"):
        return "unknown"
    head = subprocess.run(git + ["rev-parse", "--short=12", "HEAD"], capture_output=True, text=True,
                          check=False)
    if head.returncode != 0:
        return "unknown"
    changes = subprocess.run(git + ["status", "--porcelain"], capture_output=True, text=True,
                             check=False)
    return head.stdout.strip() + ("+" if changes.stdout.strip() else "")


def write_results(folder, source, results, places):
    """Writes all single times as JSON and returns the path.

    places: the folders of this machine, by the name that stands for each in what is written.
    """
    os.makedirs(folder, exist_ok=True)
    now = datetime.datetime.now(datetime.timezone.utc)
    name = f"{now:%Y-%m-%d-%H%M}-{commit(source).rstrip('+')}.json"
    path = os.path.join(folder, name)
    head = {"date": now.isoformat(timespec="seconds"), "commit": commit(source)}
    text = json.dumps({**head, **results}, indent=1)
    for name, place in places.items():
        text = text.replace(place, name)
    with open(path, "w", encoding="utf-8") as file:
        file.write(text + "\n")
    return path
