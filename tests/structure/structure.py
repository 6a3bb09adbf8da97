#!/usr/bin/env python3
"""Holds the source tree to the rules of DEVELOPERS.md: rooms, file lengths, no printing, paths.

Usage: structure.py SOURCE_DIR

Every break is one line "file:line: what is wrong (rule)"; the exit status is 1 when there is one.
"""

import os
import re
import subprocess
import sys

SIDE_BY_SIDE = ("config", "read", "words", "count", "score", "merge", "audit", "deliver")
ROOMS = ("base", "files") + SIDE_BY_SIDE + ("run", "cli")

# Whose headers a room may include beside its own.
BELOW = {room: {"base", "files"} for room in SIDE_BY_SIDE}
BELOW.update({
    "base": set(),
    "files": {"base"},
    "run": {"base", "files", "phraseweld"} | set(SIDE_BY_SIDE),
    "cli": {"base", "files", "config", "run", "phraseweld"},
    "phraseweld": set(),  # include/phraseweld, the headers for C++ programs
})

# Headers that stand behind the rooms named; the first pattern that matches decides.
FENCED = (
    (r"yaml-cpp/", ("config",)),
    (r"simdjson(\.h$|/)", ("read",)),
    (r"unicode/", ("words",)),
    (r"(oneapi/)?tbb(\.h$|/)", ("run",)),
    (r"CLI/", ("cli",)),
    (r"(zstd\w*|zdict|zlib|xxhash)\.h$", ("files",)),
    (r"(\w*intrin|arm_neon|cpuid)\.h$", ("words", "count")),  # SIMD
    (r"sys/mman\.h$", ("base", "files")),  # memory by the page
    (r"(unistd|termios|signal|sys/ioctl)\.h$", ("files", "cli")),  # the terminal
    (r"iostream$", ("cli",)),
    (r"(thread|future|condition_variable|barrier|latch|semaphore|stop_token)$",
     ("base", "files", "run", "cli")),  # step code holds no threads
    (r"[\w/]+\.h$", ("files",)),  # whatever else ends in .h comes from the operating system
)

STANDARD = set("""
algorithm any array atomic barrier bit bitset cassert cctype cerrno cfenv cfloat charconv chrono
cinttypes climits clocale cmath compare complex concepts condition_variable coroutine csetjmp
csignal cstdarg cstddef cstdint cstdio cstdlib cstring ctime cuchar cwchar cwctype deque exception
execution filesystem forward_list fstream functional future initializer_list iomanip ios iosfwd
iostream istream iterator latch limits list locale map memory memory_resource mutex new numbers
numeric optional ostream queue random ranges ratio regex scoped_allocator semaphore set
shared_mutex source_location span sstream stack stdexcept stop_token streambuf string string_view
system_error thread tuple type_traits typeindex typeinfo unordered_map unordered_set utility
valarray variant vector version
""".split())

LONGEST_FILE = 600

TOP_LEVEL = {"CMakeLists.txt", "README.md", "DEVELOPERS.md", "LICENSE", "pipeline", "include",
             "configs", "tests", "demo-corpus"}

INCLUDE = re.compile(r'\s*#\s*include\s*[<"]([^>"]+)[>"]')

PRINTS = re.compile(
    r"(?<![\w.>:])(?:std::|absl::|::)?"
    r"(?:(?:cout|cerr|clog)\b(?=\s*(?:<<|[.;,)]))"
    r"|(?:v?f?printf|F?PrintF|f?puts|f?putc|putchar|perror|psignal)\s*\("
    r"|(?:abort|_?exit|_Exit|quick_exit|terminate|__builtin_trap)\s*\()")

# The first folder of an absolute path that exists on somebody's machine only.
MACHINE_PATH = re.compile(r"(?<![\w./$}>*-])/(?:home|root|tmp|Users|mnt|work|farm)/[\w.]")


def list_files(root):
    """Paths under root that belong to the project: what git tracks or would, else all."""
    git = subprocess.run(
        ["git", "-c", "safe.directory=*", "-C", root, "ls-files", "-z", "--cached", "--others",
         "--exclude-standard"], capture_output=True, check=False)
    if git.returncode == 0:
        names = {name for name in git.stdout.decode().split("\0") if name}
        return sorted(name for name in names if os.path.isfile(os.path.join(root, name)))
    found = []  # an unpacked archive, not a checkout
    for folder, folders, files in os.walk(root):
        folders[:] = [name for name in folders if not name.startswith(("build", ".git"))]
        found += [os.path.relpath(os.path.join(folder, name), root) for name in files]
    return sorted(found)


def without_comments_and_strings(text):
    """C++ text with the insides of comments and literals blanked; lines stay where they are."""
    token = re.compile(
        r"//(?:\\\n|[^\n])*|/\*.*?\*/"
        r'|R"(?P<mark>[^()\s\\]{0,16})\(.*?\)(?P=mark)"'
        r'|"(?:\\.|[^"\\\n])*"'
        r"|(?<![0-9A-Za-z_])'(?:\\.|[^'\\\n])+'", re.DOTALL)
    return token.sub(lambda match: " " + re.sub(r"[^\n]", "", match.group(0)), text)


def room_of(path):
    """The room that a file belongs to, "phraseweld" for include/phraseweld, else None."""
    parts = path.split("/")
    if parts[0] == "pipeline" and len(parts) > 2:
        return parts[1]
    if parts[:2] == ["include", "phraseweld"]:
        return "phraseweld"
    return None


def fault_of_include(room, header):
    """What is wrong with a header in a file of this room, or None."""
    first = header.split("/")[0]
    if "/" in header and (first in ROOMS or first == "phraseweld"):
        if first == room or first in BELOW[room]:
            return None
        if first in SIDE_BY_SIDE and room in SIDE_BY_SIDE:
            return "rooms side by side do not include each other; they meet in structs of base"
        if room == "cli":
            return "cli reaches %s through run only" % first
        if room == "phraseweld":
            return "include/phraseweld uses the standard library and Abseil only"
        return "includes run downward only, and %s stands above %s" % (first, room)
    if first == "absl":
        return None
    if room == "phraseweld":
        return (None if header in STANDARD and header != "iostream"
                else "include/phraseweld uses the standard library and Abseil only")
    for pattern, rooms in FENCED:
        if re.match(pattern, header):
            return None if room in rooms else "this header is for %s only" % " and ".join(rooms)
    return None if header in STANDARD else "no room is known for this header"


def check_code(path, text):
    """Breaks of the rules for C++ files in pipeline/ and include/."""
    room = room_of(path)
    if room not in BELOW:
        yield path, 1, "code stands in a room of pipeline/ or in include/phraseweld", path
        return
    for number, line in enumerate(text.split("\n"), 1):
        match = INCLUDE.match(line)
        if match:
            fault = fault_of_include(room, match.group(1))
            if fault:
                yield path, number, fault, match.group(1)
    if room != "cli":
        for number, line in enumerate(without_comments_and_strings(text).split("\n"), 1):
            match = PRINTS.search(line)
            if match:
                yield (path, number, "only cli prints or ends the program; return a status",
                       match.group(0).rstrip("( "))


def check_text(path, text):
    """Breaks of the rules for every text file."""
    lines = text.count("\n") + (0 if text.endswith("\n") else 1)
    if path.split("/")[0] in ("pipeline", "include") and lines > LONGEST_FILE:
        yield (path, LONGEST_FILE + 1, "a file has at most %d lines; split it by noun"
               % LONGEST_FILE, "%d lines" % lines)
    for number, line in enumerate(text.split("\n"), 1):
        match = MACHINE_PATH.search(line)
        if match:
            yield (path, number, "a path of somebody's machine means nothing to others",
                   line[match.start():match.start() + 40])


def check_top_level(paths):
    """Breaks of the fixed top level."""
    present = {path.split("/")[0] for path in paths}
    for name in sorted(present - TOP_LEVEL):
        if not name.startswith("."):
            yield name, 1, "nothing else stands at the top level", name
    for name in sorted(TOP_LEVEL - present):
        yield name, 1, "the top level is fixed", name + " is missing"


def check_tree(root):
    """All breaks of a tree, as (path, line, rule, what)."""
    paths = list_files(root)
    yield from check_top_level(paths)
    for path in paths:
        with open(os.path.join(root, path), "rb") as file:
            data = file.read()
        if b"\0" in data:
            continue
        text = data.decode(errors="replace")
        yield from check_text(path, text)
        if path.startswith(("pipeline/", "include/")) and re.search(r"\.(cc|h)(\.in)?$", path):
            yield from check_code(path, text)


def main():
    if len(sys.argv) != 2:
        sys.exit(__doc__)
    breaks = list(check_tree(sys.argv[1]))
    for path, line, rule, what in breaks:
        print("%s:%d: %s (%s)" % (path, line, what, rule))
    if breaks:
        sys.stdout.flush()
        sys.exit("%d breaks of the tree's rules" % len(breaks))
    print("the tree keeps its rules")


if __name__ == "__main__":
    main()
