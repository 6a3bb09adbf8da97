"""The corpora of the benchmark, from the fetched text and from the generator."""

import glob
import json
import os
import subprocess


def read(path):
    with open(path, encoding="utf-8") as file:
        return file.read()


def write_whole(path, text):
    """Writes a file under another name first, so that an interrupted run leaves no half of one."""
    with open(path + ".partial", "w", encoding="utf-8", newline="\n") as file:
        file.write(text)
    os.replace(path + ".partial", path)
    return path


def join_english(settings):
    """All the English text in one file of paragraphs: 114 MB."""
    path = os.path.join(settings.work, "english.txt")
    if os.path.exists(path):
        return path
    texts = []
    for pattern in ("kernel/*.txt", "git/text/*.txt", "manuals/*.txt", "languages/en.txt"):
        texts += [read(name) for name in sorted(glob.glob(os.path.join(settings.text, pattern)))]
    for name in ("gcide", "foldoc"):
        with open(os.path.join(settings.text, "dictionaries", name + ".jsonl"),
                  encoding="utf-8") as file:
            texts += [json.loads(line)["body"] + "\n" for line in file]
    return write_whole(path, "\n".join(texts))


def cut_languages(settings, names):
    """One file a language, all cut at the end of a line to the size of the smallest."""
    sources = {name: os.path.join(settings.text, "languages", name + ".txt") for name in names}
    size = min(os.path.getsize(path) for path in sources.values())
    cut = {}
    for name, source in sources.items():
        with open(source, "rb") as file:
            data = file.read(size)
        text = data[:data.rfind(b"\n") + 1].decode("utf-8")
        cut[name] = write_whole(os.path.join(settings.work, name + ".txt"), text)
    return cut


def make(settings, size):
    """Made text of at least that many bytes and the list of what was planted in it."""
    text = os.path.join(settings.work, f"made-{size}.txt")
    planted = os.path.join(settings.work, f"made-{size}-planted.jsonl")
    if not (os.path.exists(text) and os.path.exists(planted)):
        subprocess.run([settings.maker, f"--bytes={size}", f"--text={text}.partial",
                        f"--planted={planted}"], check=True)
        os.replace(text + ".partial", text)
    return text, planted
