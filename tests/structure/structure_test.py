#!/usr/bin/env python3
"""Shows that each rule of structure.py and symbols.py finds its break, and no more than that.

Usage: structure_test.py
"""

import os
import tempfile
import unittest

import structure
import symbols


def code_faults(path, text):
    return ["%d: %s" % (line, what) for _, line, _, what in structure.check_code(path, text)]


class Includes(unittest.TestCase):
    def fault(self, room, header):
        return structure.fault_of_include(room, header)

    def test_a_room_may_include_itself_and_what_is_below(self):
        for room, headers in {
                "base": ("base/table.h", "vector", "absl/status/status.h"),
                "files": ("files/streams.h", "base/status.h", "zstd.h", "sys/stat.h", "xxhash.h"),
                "config": ("config/keys.h", "files/streams.h", "yaml-cpp/yaml.h"),
                "read": ("simdjson.h", "base/utf8.h"),
                "words": ("unicode/brkiter.h", "immintrin.h"),
                "run": ("score/measures.h", "tbb/parallel_pipeline.h", "oneapi/tbb/task_arena.h",
                        "thread", "deliver/page.h", "phraseweld/phraseweld.h"),
                "cli": ("run/run.h", "CLI/CLI.hpp", "config/job_file.h", "iostream", "unistd.h"),
                "phraseweld": ("phraseweld/job.h", "string", "absl/status/statusor.h"),
        }.items():
            for header in headers:
                self.assertIsNone(self.fault(room, header), "%s in %s" % (header, room))

    def test_rooms_side_by_side_do_not_include_each_other(self):
        for room in structure.SIDE_BY_SIDE:
            for other in structure.SIDE_BY_SIDE:
                fault = self.fault(room, other + "/x.h")
                if room == other:
                    self.assertIsNone(fault)
                else:
                    self.assertIn("side by side", fault)

    def test_includes_run_downward(self):
        for room, header in (("base", "files/streams.h"), ("files", "score/measures.h"),
                             ("score", "run/run.h"), ("run", "cli/help.h"),
                             ("count", "cli/help.h"), ("base", "phraseweld/job.h")):
            self.assertIn("downward", self.fault(room, header))

    def test_the_command_line_reaches_the_steps_through_run(self):
        for room in ("audit", "deliver", "words"):
            self.assertIn("through run", self.fault("cli", room + "/x.h"))

    def test_each_library_stands_behind_one_room(self):
        owners = {"yaml-cpp/yaml.h": "config", "simdjson.h": "read", "unicode/utf8.h": "words",
                  "tbb/task_arena.h": "run", "oneapi/tbb/info.h": "run", "CLI/App.hpp": "cli",
                  "zstd.h": "files", "zstd_errors.h": "files", "zlib.h": "files",
                  "xxhash.h": "files"}
        for header, owner in owners.items():
            for room in structure.ROOMS:
                fault = self.fault(room, header)
                self.assertEqual(fault is None, room == owner, "%s in %s" % (header, room))
            self.assertIn("Abseil only", self.fault("phraseweld", header))

    def test_the_operating_system_stands_behind_files(self):
        self.assertIsNotNone(self.fault("read", "fcntl.h"))
        self.assertIsNotNone(self.fault("run", "unistd.h"))
        self.assertIsNotNone(self.fault("cli", "sys/mman.h"))

    def test_steps_hold_no_threads(self):
        self.assertIsNotNone(self.fault("count", "thread"))
        self.assertIsNotNone(self.fault("words", "future"))

    def test_the_public_headers_use_no_room(self):
        self.assertIn("Abseil only", self.fault("phraseweld", "base/job.h"))
        self.assertIn("Abseil only", self.fault("phraseweld", "stdio.h"))

    def test_an_unknown_header_is_a_break(self):
        self.assertIn("no room", self.fault("run", "boost/math.hpp"))

    def test_the_line_is_told(self):
        self.assertEqual(code_faults("pipeline/score/x.cc", '#include "score/x.h"\n\n'
                                     '  #  include "run/run.h"\n'), ["3: run/run.h"])


class Printing(unittest.TestCase):
    def test_prints_and_ends_are_found_outside_cli(self):
        for line in ("std::cout << 1;", "cerr << x;", "std::clog.flush();", "printf(x);",
                     "std::fprintf(stderr, x);", "vfprintf (f, x, y);", "puts(x);", "::exit(1);",
                     "std::abort();", "absl::PrintF(x);", "perror(x);", "_exit(1);",
                     "std::terminate();", "if (a) exit(2);", "std::quick_exit(1);"):
            self.assertEqual(len(code_faults("pipeline/words/x.cc", line)), 1, line)
            self.assertEqual(len(code_faults("include/phraseweld/x.h", line)), 1, line)
            self.assertEqual(code_faults("pipeline/cli/main/x.cc", line), [], line)

    def test_other_names_comments_and_literals_are_not(self):
        for line in ("snprintf(x);", "at_exit(1);", "assert(x);", "static_assert(x);",
                     "loop.exit(1);",
                     "// printf(x)", "/* std::cout << \n abort() */", 'Say("abort() printf(x)");',
                     "Shop::exit(1);", "int exit_code = 1;", "Sprintf(x);", "absl::StrFormat(x);",
                     'R"(printf(x) " )"; int a;', "char c = '\"'; // exit(1)"):
            self.assertEqual(code_faults("pipeline/words/x.cc", line), [], line)

    def test_lines_are_counted_past_comments_and_raw_strings(self):
        text = '/* a\n b */\nR"x(\n)" \n)x";\n1\'000; printf(x);\n'
        self.assertEqual(code_faults("pipeline/words/x.cc", text), ["6: printf"])


class Symbols(unittest.TestCase):
    def test_undefined_printing_symbols_are_found(self):
        output = ("lib.a[x.o]: printf U         \nlib.a[x.o]: snprintf U         \n"
                  "lib.a[y.o]: _ZSt4cerr U         \nlib.a[y.o]: exit@GLIBC_2.2.5 U\n")
        self.assertEqual(list(symbols.forbidden_symbols(output)),
                         [("lib.a[x.o]", "printf"), ("lib.a[y.o]", "_ZSt4cerr"),
                          ("lib.a[y.o]", "exit")])


class Tree(unittest.TestCase):
    def breaks(self, extra):
        files = {name: "" for name in ("CMakeLists.txt", "README.md", "DEVELOPERS.md", "LICENSE",
                                       "configs/a.yaml", "tests/a.cc", "demo-corpus/a.txt")}
        files.update({"pipeline/base/a.cc": "#include <vector>\n", ".gitignore": "x\n",
                      "include/phraseweld/a.h": "#include <string>\n"})
        files.update(extra)
        with tempfile.TemporaryDirectory() as root:
            for name, text in files.items():
                if text is None:
                    continue
                path = os.path.join(root, name)
                os.makedirs(os.path.dirname(path), exist_ok=True)
                with open(path, "w", encoding="utf-8") as file:
                    file.write(text)
            return [(path, line) for path, line, _, _ in structure.check_tree(root)]

    def test_a_tidy_tree_has_no_break(self):
        self.assertEqual(self.breaks({}), [])

    def test_the_top_level_holds_its_names_and_no_other(self):
        self.assertEqual(self.breaks({"notes.txt": ""}), [("notes.txt", 1)])
        self.assertEqual(self.breaks({"LICENSE": None}), [("LICENSE", 1)])

    def test_code_stands_in_a_known_room(self):
        self.assertEqual(self.breaks({"pipeline/misc/a.cc": ""}), [("pipeline/misc/a.cc", 1)])
        self.assertEqual(self.breaks({"pipeline/a.cc": ""}), [("pipeline/a.cc", 1)])

    def test_files_of_the_pipeline_end_by_line_600(self):
        self.assertEqual(self.breaks({"pipeline/base/b.cc": "\n" * 600}), [])
        self.assertEqual(self.breaks({"pipeline/base/b.cc": "\n" * 601}),
                         [("pipeline/base/b.cc", 601)])
        self.assertEqual(self.breaks({"tests/b.cc": "\n" * 601}), [])

    def test_paths_of_a_machine_are_found_everywhere(self):
        for folder in ("home", "tmp", "work"):
            path = "/%s/somebody" % folder
            for text in ("x\n%s\n", 'x\n"%s"\n', "x\n(see %s/b)\n", "x\nA=%s\n"):
                self.assertEqual(self.breaks({"README.md": text % path}), [("README.md", 2)])
        harmless = "/usr/share/x, https://a.org/home/x, a/tmp/b\n"
        self.assertEqual(self.breaks({"README.md": harmless}), [])


if __name__ == "__main__":
    unittest.main()
