#!/usr/bin/env python3
"""Measures the program against what a person would use instead, and against itself.

Called by run.sh, which builds the program and fetches the text; see there for the settings.
Ratios are of medians of alternating runs of whole processes with the input in memory. A peak below
some 25 MiB is this script's own, which a process starts from.
"""

import argparse
import json
import os
import re
import shutil
import statistics
import subprocess
import sys
import threading

import corpora
import runner

MEBIBYTE = 1 << 20

JOB = """job: {name}
run_folder: "{folder}"
corpus:
  files: ["{corpus}"]
  layout: {layout}
words:
  function_words: {function_words}
passes:
  - name: pairs
    rank_by: pmi
    accept: {{occurrences: {first}, documents: 3, pmi: 4.0}}
  - name: longer
    repeat: 4
    rank_by: pmi
    accept: {{occurrences: {later}, documents: 3, pmi: 4.0}}
deliver:
  corpus: source
  report: false
  spans: false
limits:
  memory: {memory}
  threads: {threads}
"""


class Job(runner.Measured):
    """A whole job of five passes; keeps the timings of each run's manifest."""

    def __init__(self, settings, name, corpus, layout, threads=2, memory="2 GiB",
                 function_words="english", gates=(8, 5)):
        self.run_folder = os.path.join(settings.work, "runs", name)
        self.corpus = corpus
        self.timings = []
        path = os.path.join(settings.work, "jobs", name + ".yaml")
        os.makedirs(os.path.dirname(path), exist_ok=True)
        with open(path, "w", encoding="utf-8") as file:
            file.write(JOB.format(name=name, folder=self.run_folder, corpus=corpus, layout=layout,
                                  threads=threads, memory=memory, function_words=function_words,
                                  first=gates[0], later=gates[1]))
        super().__init__(name, [settings.program, "run", path], before=self.clear,
                         after=self.keep_timings)

    def clear(self):
        shutil.rmtree(self.run_folder, ignore_errors=True)

    def manifest(self):
        with open(os.path.join(self.run_folder, "manifest.json"), encoding="utf-8") as file:
            return json.load(file)

    def keep_timings(self):
        self.timings.append(self.manifest()["timings"])

    def stage_seconds(self):
        """The median of each stage, in the order of the job."""
        return {stage: statistics.median(run.get(stage, 0.0) for run in self.timings)
                for stage in self.timings[0]}

    def tokens_in(self):
        """Tokens at the start of each pass, by its number."""
        tokens = {}
        folder = os.path.join(self.run_folder, "audit")
        for name in sorted(os.listdir(folder)):
            with open(os.path.join(folder, name), encoding="utf-8") as file:
                line = json.loads(file.readline())
            tokens[line["pass"]] = line["tokens_in"]
        return tokens

    def record(self):
        return {**super().record(), "corpus_bytes": os.path.getsize(self.corpus),
                "totals": self.manifest()["totals"], "stage_seconds": self.timings}


def heading(text):
    print(f"\n## {text}\n", flush=True)


def row(*cells):
    widths = (44, 12, 12, 12, 14)
    print("  ".join(str(cell).ljust(width) if i == 0 else str(cell).rjust(width)
                    for i, (cell, width) in enumerate(zip(cells, widths))), flush=True)


def mebibytes(size):
    return f"{size / MEBIBYTE:.0f} MiB"


def measure_whole(settings):
    """The whole job against wc -w, one pass of DuckDB, and sort | uniq -c."""
    text = settings.english
    runner.warm(text)
    job = Job(settings, "whole", text, "paragraphs")
    words = runner.Measured("wc -w", ["wc", "-w", text], environment={"LC_ALL": "C.UTF-8"})
    others = []
    if settings.duckdb:
        others.append(runner.Measured(
            "DuckDB, one pass",
            ["node", os.path.join(settings.here, "duckdb_pairs.mjs"), text, "2"],
            folder=settings.duckdb))
    counts = os.path.join(settings.work, "words.txt")
    others.append(runner.Measured(
        "tr | sort | uniq -c, pairs",
        f"tr -sc 'A-Za-z0-9' '\\n' < '{text}' | tr A-Z a-z > '{counts}' && "
        f"tail -n +2 '{counts}' | paste -d ' ' '{counts}' - | sort --parallel=2 -S 2G | uniq -c",
        environment={"LC_ALL": "C"}))
    runner.alternate([job, words] + others, settings.repeats)
    os.unlink(counts)
    heading(f"The whole job, {mebibytes(os.path.getsize(text))} of English, 2 threads")
    row("", "seconds", "job / this", "this / job", "peak memory")
    for one in [job, words] + others:
        row(one.name if one is not job else "the whole job", f"{one.seconds():.2f}",
            f"{job.seconds() / one.seconds():.2f}", f"{one.seconds() / job.seconds():.2f}",
            mebibytes(one.most_memory()))
    print_stages(job)
    return [one.record() for one in [job, words] + others]


def print_stages(job):
    size = os.path.getsize(job.corpus)
    tokens = job.tokens_in()
    heading("Stage by stage")
    row("", "ms", "share", "MB/s", "ns per token")
    stages = job.stage_seconds()
    total = sum(stages.values())
    by_pass = {}
    for stage, seconds in stages.items():
        number = int(stage.split()[1]) if stage.startswith("pass ") else 1
        of_pass = tokens.get(number, tokens[1])
        row(stage, f"{seconds * 1e3:.0f}", f"{seconds / total:.1%}",
            f"{size / max(seconds, 1e-9) / 1e6:.0f}", f"{seconds * 1e9 / of_pass:.1f}")
        if stage.startswith("pass "):
            by_pass[number] = by_pass.get(number, 0.0) + seconds
    for number, seconds in by_pass.items():
        if number > 1:
            row(f"pass {number}, and its share of pass 1", f"{seconds * 1e3:.0f}",
                f"{seconds / by_pass[1]:.1%}")


def measure_threads(settings):
    """The same job on one thread and on two."""
    runner.warm(settings.english)
    jobs = {threads: Job(settings, f"threads-{threads}", settings.english, "paragraphs",
                         threads=threads) for threads in (1, 2)}
    runner.alternate(list(jobs.values()), settings.repeats)
    heading("Threads, the same English text")
    row("", "seconds", "speed-up", "", "peak memory")
    for threads, job in jobs.items():
        row(f"{threads} thread{'s' if threads > 1 else ''}", f"{job.seconds():.2f}",
            f"{jobs[1].seconds() / job.seconds():.2f}", "", mebibytes(job.most_memory()))
    one, two = (jobs[threads].stage_seconds() for threads in (1, 2))
    for stage in one:
        if one[stage] > 0.02 * sum(one.values()):
            row("  " + stage, f"{two[stage]:.3f}", f"{one[stage] / max(two[stage], 1e-9):.2f}")
    return [job.record() for job in jobs.values()]


def check_planted(settings, job, planted):
    """Whether the run's counts are those of the list of planted phrases; prints what is wrong."""
    answer = subprocess.run([sys.executable, "-B", os.path.join(settings.here, "check_planted.py"),
                             job.run_folder, planted], capture_output=True, text=True, check=False)
    if answer.returncode != 0:
        print(answer.stdout + answer.stderr)
    return answer.returncode == 0


def measure_sizes(settings):
    """Made text of 1, 4, 16 and 64 times the base size: time a byte, exact counts."""
    jobs = []
    for factor in (1, 4, 16, 64):
        text, planted = corpora.make(settings, settings.base_size * factor)
        job = Job(settings, f"size-{factor}", text, "lines", memory="1 TiB")
        job.planted = planted
        jobs.append(job)
    for job in jobs:
        runner.warm(job.corpus)
    runner.alternate(jobs, settings.repeats)
    heading(f"Size, made text, from {mebibytes(settings.base_size)}, 2 threads")
    row("", "seconds", "time a byte", "counts", "peak memory")
    first = jobs[0].seconds() / os.path.getsize(jobs[0].corpus)
    records = []
    for factor, job in zip((1, 4, 16, 64), jobs):
        exact = check_planted(settings, job, job.planted)
        a_byte = job.seconds() / os.path.getsize(job.corpus)
        row(f"{factor} x, {mebibytes(os.path.getsize(job.corpus))}", f"{job.seconds():.2f}",
            f"{a_byte / first:.2f}", "exact" if exact else "WRONG", mebibytes(job.most_memory()))
        records.append({**job.record(), "planted_counts_exact": exact})
        job.clear()
    return records


def measure_memory(settings):
    """The same made text under three limits of memory."""
    text, planted = corpora.make(settings, settings.memory_size)
    runner.warm(text)
    # Phrases have to be in memory: gates that rise with the text keep them to some ten thousand.
    first = max(8, settings.memory_size // MEBIBYTE * 200 // 256)
    jobs = [Job(settings, "memory-" + limit.replace(" ", ""), text, "lines", memory=limit,
                gates=(first, max(5, first // 2)))
            for limit in ("1 TiB", "2 GiB", "256 MiB")]
    runner.alternate(jobs, settings.memory_repeats)
    heading(f"Memory, {mebibytes(os.path.getsize(text))} of made text, 2 threads, "
            f"{settings.memory_repeats} runs each")
    row("limits.memory", "seconds", "time", "counts", "peak memory")
    records = []
    for job, limit in zip(jobs, ("none", "2 GiB", "256 MiB")):
        exact = check_planted(settings, job, planted)
        row(limit, f"{job.seconds():.2f}", f"{job.seconds() / jobs[0].seconds():.2f}",
            "exact" if exact else "WRONG", mebibytes(job.most_memory()))
        records.append({**job.record(), "planted_counts_exact": exact})
        job.clear()
    return records


def measure_languages(settings):
    """The same number of bytes in five languages, no function words."""
    names = {"en": "English", "de": "German", "fr": "French", "vi": "Vietnamese", "zh": "Chinese"}
    texts = {name: os.path.join(settings.work, name + ".txt") for name in corpora.LANGUAGES}
    jobs = {name: Job(settings, "language-" + name, path, "paragraphs", function_words="none")
            for name, path in texts.items()}
    for path in texts.values():
        runner.warm(path)
    runner.alternate(list(jobs.values()), settings.repeats)
    size = os.path.getsize(texts["en"])
    heading(f"Languages, {mebibytes(size)} each, 2 threads")
    print("(all that these packages hold: starting the process weighs more than on a large file)\n")
    row("", "seconds", "speed", "reading", "words")
    read = jobs["en"].stage_seconds()["read"]
    for name, job in jobs.items():
        row(names[name], f"{job.seconds():.3f}", f"{jobs['en'].seconds() / job.seconds():.0%}",
            f"{read / job.stage_seconds()['read']:.0%}", f"{job.manifest()['totals']['words']:,}")
    return [job.record() for job in jobs.values()]


def folder_bytes(folder):
    """Bytes on disk below a folder whose files may go while they are looked at."""
    size = 0
    for place, _, names in os.walk(folder):
        for name in names:
            try:
                size += os.stat(os.path.join(place, name)).st_blocks * 512
            except OSError:
                pass
    return size


class Foreseen(Job):
    """A job, what `check` says it will take, and what it takes."""

    def foresee(self, program):
        told = subprocess.run([program, "check", self.command[-1]], capture_output=True, text=True,
                              check=True).stdout
        number = r"([0-9.]+) (B|KiB|MiB|GiB)"
        memory = re.search(f"# memory +about {number}", told)
        disk = re.search(f"# disk +about {number} for the results and {number}", told)
        size = lambda value, unit: float(value) * 1024 ** ("B", "KiB", "MiB", "GiB").index(unit)
        self.told = {"memory": size(*memory.groups()), "results": size(*disk.groups()[:2]),
                     "scratch": size(*disk.groups()[2:])}

    def run_watched(self):
        scratch, ended = [0], threading.Event()

        def watch():
            while not ended.wait(0.02):
                scratch.append(folder_bytes(os.path.join(self.run_folder + ".partial", "scratch")))

        watcher = threading.Thread(target=watch)
        watcher.start()
        try:
            self.run_once()
        finally:
            ended.set()
            watcher.join()
        self.took = {"memory": self.most_memory(), "scratch": max(scratch),
                     "results": sum(file["bytes"] for file in self.manifest()["outputs"])}


def measure_foresight(settings):
    """What `check` says beside what `run` takes."""
    text, _ = corpora.make(settings, settings.memory_size)
    texts = {name: os.path.join(settings.work, name + ".txt") for name in corpora.LANGUAGES}
    jobs = [Foreseen(settings, "foreseen-english", settings.english, "paragraphs"),
            Foreseen(settings, "foreseen-english-on-disk", settings.english, "paragraphs",
                     memory="256 MiB"),
            Foreseen(settings, "foreseen-made", text, "lines", memory="1 TiB"),
            Foreseen(settings, "foreseen-made-on-disk", text, "lines", memory="256 MiB",
                     gates=(50, 50))]
    jobs += [Foreseen(settings, "foreseen-" + name, path, "paragraphs", function_words="none")
             for name, path in texts.items()]
    heading("What check foresees, against what run takes")
    row("", "memory", "results", "scratch")
    records = []
    for job in jobs:
        job.foresee(settings.program)
        job.run_watched()
        row(job.name[len("foreseen-"):],
            *(f"{job.told[what] / job.took[what] - 1:+.0%}" if job.took[what] else "0"
              for what in ("memory", "results", "scratch")))
        records.append({**job.record(), "foreseen": job.told, "took": job.took})
        job.clear()
    return records


SECTIONS = {"whole": measure_whole, "threads": measure_threads, "sizes": measure_sizes,
            "memory": measure_memory, "languages": measure_languages,
            "foresight": measure_foresight}


def parse():
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--program", required=True)
    parser.add_argument("--maker", required=True)
    parser.add_argument("--text", required=True, help="the folder of fetch-real-text.sh")
    parser.add_argument("--work", required=True, help="a folder for corpora and runs")
    parser.add_argument("--duckdb", default="", help="a folder with the npm package")
    parser.add_argument("--results", required=True)
    parser.add_argument("--repeats", type=int, default=5)
    parser.add_argument("--memory-repeats", type=int, default=5)
    parser.add_argument("--base-size", type=int, default=16 * MEBIBYTE, help="bytes")
    parser.add_argument("--memory-size", type=int, default=256 * MEBIBYTE, help="bytes")
    parser.add_argument("sections", nargs="*", metavar="SECTION", help=", ".join(SECTIONS))
    settings = parser.parse_args()
    for name in settings.sections:
        if name not in SECTIONS:
            parser.error(f'there is no section "{name}"; the sections are ' + ", ".join(SECTIONS))
    settings.here = os.path.dirname(os.path.abspath(__file__))
    return settings


def main():
    settings = parse()
    subprocess.run([sys.executable, "-B", os.path.join(settings.here, "corpora.py"), settings.text,
                    settings.work], check=True)
    settings.english = os.path.join(settings.work, "english.txt")
    results = {"machine": runner.machine(),
               "settings": {key: getattr(settings, key) for key in
                            ("repeats", "memory_repeats", "base_size", "memory_size")},
               "sections": {}}
    print(json.dumps(results["machine"]))
    for name in settings.sections or SECTIONS:
        results["sections"][name] = SECTIONS[name](settings)
    path = runner.write_results(settings.results, settings.here, results,
                                {"WORK": settings.work, "BENCHMARKS": settings.here})
    print(f"\nraw results: {path}")


if __name__ == "__main__":
    main()
