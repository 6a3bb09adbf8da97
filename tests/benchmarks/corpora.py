#!/usr/bin/env python3
"""The corpora of the benchmark, from the fetched text and from the generator.

Usage: corpora.py TEXT WORK     lays out english.txt and {en,de,fr,vi,zh}.txt in WORK

TEXT is the folder of fetch-real-text.sh. A process of its own does this, for what it holds in
memory would count as memory of the programs that the same process starts later.
"""

import glob
import json
import os
import subprocess
import sys

LANGUAGES = ("en", "de", "fr", "vi", "zh")


def read(path):
    with open(path, encoding="utf-8") as file:
        return file.read()


def write_whole(path, text):
    """Writes a file under another name first, so that an interrupted run leaves no half of one."""
    with open(path + ".partial", "w", encoding="utf-8", newline="\n") as file:
        file.write(text)
    os.replace(path + ".partial", path)


def join_english(folder, work):
    """All the English text in one file of paragraphs: 114 MB."""
    path = os.path.join(work, "english.txt")
    if os.path.exists(path):
        return
    texts = []
    for pattern in ("kernel/*.txt", "git/text/*.txt", "manuals/*.txt", "languages/en.txt"):
        texts += [read(name) for name in sorted(glob.glob(os.path.join(folder, pattern)))]
    for name in ("gcide", "foldoc"):
        with open(os.path.join(folder, "dictionaries", name + ".jsonl"), encoding="utf-8") as file:
            texts += [json.loads(line)["body"] + "\n" for line in file]
    write_whole(path, "\n".join(texts))


def cut_languages(folder, work):
    """One file a language, all cut at the end of a line to the size of the smallest."""
    sources = {name: os.path.join(folder, "languages", name + ".txt") for name in LANGUAGES}
    size = min(os.path.getsize(path) for path in sources.values())
    for name, source in sources.items():
        with open(source, "rb") as file:
            data = file.read(size)
        text = data[:data.rfind(b"\n") + 1].decode("utf-8")
        write_whole(os.path.join(work, name + ".txt"), text)


def make(settings, size):
    """Made text of at least that many bytes and the list of what was planted in it."""
    text = os.path.join(settings.work, f"made-{size}.txt")
    planted = os.path.join(settings.work, f"made-{size}-planted.jsonl")
    if not (os.path.exists(text) and os.path.exists(planted)):
        subprocess.run([settings.maker, f"--bytes={size}", f"--text={text}.partial",
                        f"--planted={planted}"], check=True)
        os.replace(text + ".partial", text)
    return text, planted


def main():
    if len(sys.argv) != 3:
        sys.exit(__doc__)
    join_english(sys.argv[1], sys.argv[2])
    cut_languages(sys.argv[1], sys.argv[2])


if __name__ == "__main__":
    main()
