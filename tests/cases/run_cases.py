#!/usr/bin/env python3
"""Command-line cases kept as files: what is typed, what comes out on which stream, how it ends.

usage: run_cases.py PHRASEWELD [--update] [CASE...]

A case file has sections, each begun by a line "=== NAME":
  === file PATH   a file to have in the (empty, temporary) working directory; its text follows.
                  Escapes \\xNN and \\n in a section "=== bytes PATH" give any bytes (line ends do not count).
  === run         command lines for sh; `phraseweld` is the program. All but the last must succeed.
  === exit        the exit code of the last one
  === stdout, === stderr   what it printed; "<any>" in a line stands for anything in that line.
--update writes what came out into the case files, to be read before it is committed.
"""
import os
import re
import subprocess
import sys
import tempfile


def read_case(path):
    sections, name = [], None
    with open(path, encoding="utf-8") as f:
        for line in f:
            if line.startswith("=== "):
                name = line[4:].rstrip("\n")
                sections.append([name, ""])
            elif name is not None:
                sections[-1][1] += line
    return sections


def section(sections, name):
    return next((text for key, text in sections if key == name), "")


def matches(expected, actual):
    if expected == actual:
        return True
    pattern = "".join(".*" if part == "<any>" else re.escape(part)
                      for part in re.split("(<any>)", expected))
    return re.fullmatch(pattern, actual) is not None


def run_case(path, program):
    sections = read_case(path)
    with tempfile.TemporaryDirectory() as folder:
        for key, text in sections:
            kind, _, name = key.partition(" ")
            if kind not in ("file", "bytes"):
                continue
            target = os.path.join(folder, name)
            os.makedirs(os.path.dirname(target), exist_ok=True)
            data = text.encode()
            if kind == "bytes":
                data = text.replace("\n", "").encode().decode("unicode_escape").encode("latin-1")
            with open(target, "wb") as f:
                f.write(data)
        lines = [line for line in section(sections, "run").splitlines() if line.strip()]
        env = dict(os.environ, PATH=os.path.dirname(os.path.abspath(program)) + ":" + os.environ["PATH"],
                   LC_ALL="C.UTF-8")
        for number, line in enumerate(lines):
            done = subprocess.run(["sh", "-c", line], cwd=folder, env=env, capture_output=True,
                                  stdin=subprocess.DEVNULL, check=False)
            if number + 1 < len(lines) and done.returncode != 0:
                return {"exit": f"{line}: {done.returncode}\n", "stdout": "",
                        "stderr": done.stderr.decode(errors="replace")}, sections
    return {"exit": f"{done.returncode}\n", "stdout": done.stdout.decode(errors="replace"),
            "stderr": done.stderr.decode(errors="replace")}, sections


def main():
    arguments = [a for a in sys.argv[1:] if a != "--update"]
    update = "--update" in sys.argv
    program, names = arguments[0], arguments[1:]
    here = os.path.dirname(os.path.abspath(__file__))
    paths = names or sorted(os.path.join(here, n) for n in os.listdir(here) if n.endswith(".case"))
    failed = 0
    for path in paths:
        actual, sections = run_case(path, program)
        if update:
            kept = [s for s in sections if s[0] not in actual]
            old = dict((k, v) for k, v in sections)
            with open(path, "w", encoding="utf-8") as f:
                for key, text in kept + [[k, old[k] if k in old and matches(old[k], v) else v]
                                         for k, v in actual.items()]:
                    f.write(f"=== {key}\n{text}")
            continue
        wrong = [k for k in actual if not matches(section(sections, k), actual[k])]
        if wrong:
            failed += 1
            print(f"FAILED {os.path.basename(path)}")
            for key in wrong:
                print(f"--- expected {key}\n{section(sections, key)}--- actual {key}\n{actual[key]}")
    print(f"{len(paths) - failed} of {len(paths)} cases as written")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
