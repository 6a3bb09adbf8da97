#!/usr/bin/env python3
"""The demo job under 1, 2, 3 and 8 threads, in memory and on disk: the same bytes each time.

usage: same_bytes.py PHRASEWELD SOURCE
"""
import json
import os
import subprocess
import sys
import tempfile


def run_folder(program, source, folder, settings):
    command = [program, "run", "configs/demo.yaml", "--quiet", "--fresh", "--set", f"run_folder={folder}"]
    for setting in settings:
        command += ["--set", setting]
    subprocess.run(command, cwd=source, check=True, stdout=subprocess.DEVNULL)
    files = {}
    for root, _, names in os.walk(folder):
        for name in names:
            path = os.path.join(root, name)
            with open(path, "rb") as f:
                files[os.path.relpath(path, folder)] = f.read()
    # What differs by right: the limits and the folder in job.yaml, hence its hash, and the timings.
    del files["job.yaml"]
    manifest = json.loads(files["manifest.json"])
    del manifest["timings"]
    manifest["outputs"] = [o for o in manifest["outputs"] if o["path"] != "job.yaml"]
    files["manifest.json"] = json.dumps(manifest).encode()
    return files


def main():
    program, source = os.path.abspath(sys.argv[1]), sys.argv[2]
    with tempfile.TemporaryDirectory() as work:
        first = None
        for threads in (1, 2, 3, 8):
            for memory in ("2 GiB", "16 MiB"):
                settings = [f"limits.threads={threads}", f"limits.memory={memory}"]
                files = run_folder(program, source, os.path.join(work, "run"), settings)
                first = first or files
                for name in sorted(set(first) | set(files)):
                    if first.get(name) != files.get(name):
                        print(f"{name} differs under {settings}")
                        return 1
        print(f"{len(first)} files, the same under 4 numbers of threads and 2 memory limits")
    return 0


if __name__ == "__main__":
    sys.exit(main())
