#!/usr/bin/env python3
"""Holds the static libraries to: nothing but the command line prints or ends the program.

Usage: symbols.py NM LIBRARY...

Looks at what the compiled libraries call, so that macros and inlined headers count too.
"""

import os
import subprocess
import sys

FORBIDDEN = set("""
printf fprintf vprintf vfprintf __printf_chk __fprintf_chk __vprintf_chk __vfprintf_chk puts fputs
putchar putc fputc perror psignal stdout stderr abort exit _exit _Exit quick_exit
_ZSt4cout _ZSt4cerr _ZSt4clog
""".split())


def forbidden_symbols(nm_output):
    """(object file, symbol) of each undefined symbol that is forbidden, from `nm -A -u -P`."""
    for line in nm_output.split("\n"):
        place, _, rest = line.rpartition(": ")
        symbol = rest.split(" ")[0].split("@")[0]
        if symbol in FORBIDDEN:
            yield place, symbol


def main():
    if len(sys.argv) < 3:
        sys.exit(__doc__)
    missing = [library for library in sys.argv[2:] if not os.path.exists(library)]
    if missing:
        sys.exit("not built yet: %s; build everything, then test" % ", ".join(missing))
    found = []
    for library in sys.argv[2:]:
        output = subprocess.run([sys.argv[1], "-A", "-u", "-P", library], capture_output=True,
                                text=True, check=True).stdout
        found += forbidden_symbols(output)
    for place, symbol in found:
        print("%s: calls %s (only cli prints or ends the program; return a status)"
              % (place, symbol))
    if found:
        sys.stdout.flush()
        sys.exit("%d forbidden symbols" % len(found))
    print("%d libraries neither print nor end the program" % len(sys.argv[2:]))


if __name__ == "__main__":
    main()
