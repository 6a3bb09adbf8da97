#!/usr/bin/env python3
"""Turns the unpacked files of Debian packages into plain text, JSON Lines and lists of phrases.

Usage: lay_out_real_text.py PART TREE FOLDER

Called by fetch-real-text.sh, which says what each part holds. TREE is where the packages were
unpacked; FOLDER is made.
"""

import gzip
import html.parser
import json
import os
import re
import sys

DIGITS = {character: value for value, character in enumerate(
    "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/")}

# Elements whose text is no running text, and those that end a paragraph.
UNREAD = {"script", "style", "head", "header", "nav", "aside", "footer", "button", "svg"}
BLOCKS = {"p", "div", "h1", "h2", "h3", "h4", "h5", "h6", "li", "ul", "ol", "dl", "dt", "dd",
          "table", "tr", "td", "th", "pre", "blockquote", "section", "article", "body", "hr",
          "caption"}


def read(path):
    """The text of a file, plain or gzip; a file that is not UTF-8 is taken for Latin-1."""
    opener = gzip.open if path.endswith((".gz", ".dz")) else open
    with opener(path, "rb") as file:
        data = file.read()
    return decode(data)


def decode(data):
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError:
        return data.decode("latin-1")


def walk(top, suffixes):
    """Paths below top that end in one of the suffixes, in byte order."""
    found = []
    for folder, _, names in os.walk(top):
        found += [os.path.join(folder, name) for name in names if name.endswith(suffixes)]
    return sorted(found, key=os.fsencode)


def write(path, text):
    os.makedirs(os.path.dirname(path), exist_ok=True)
    with open(path, "w", encoding="utf-8", newline="\n") as file:
        file.write(text)


def join_texts(texts):
    """Texts one after another, a blank line between them."""
    return "\n\n".join(text.strip("\n") for text in texts if text.strip()) + "\n"


class Paragraphs(html.parser.HTMLParser):
    """The text of a page, a paragraph an element that a browser starts on a new line."""

    def __init__(self):
        super().__init__(convert_charrefs=True)
        self.unread_depth = 0
        self.pieces = []
        self.paragraphs = []

    def end_paragraph(self):
        text = " ".join("".join(self.pieces).split())
        self.pieces = []
        if text:
            self.paragraphs.append(text)

    def handle_starttag(self, tag, attrs):
        if tag in UNREAD:
            self.unread_depth += 1
        if tag in BLOCKS:
            self.end_paragraph()
        elif tag == "br":
            self.pieces.append("\n")

    def handle_endtag(self, tag):
        if tag in UNREAD and self.unread_depth:
            self.unread_depth -= 1
        if tag in BLOCKS:
            self.end_paragraph()

    def handle_data(self, data):
        if not self.unread_depth:
            self.pieces.append(data)


def strip_html(page):
    parser = Paragraphs()
    parser.feed(page)
    parser.close()
    parser.end_paragraph()
    return "\n\n".join(parser.paragraphs)


def strip_pages(top):
    return join_texts(strip_html(read(path)) for path in walk(top, (".html",)))


def lay_out_kernel(tree, folder):
    top = os.path.join(tree, "usr/share/doc/linux-doc-6.1/Documentation")
    by_folder = {}
    for path in walk(top, (".rst", ".rst.gz", ".txt", ".txt.gz")):
        inner = os.path.relpath(path, top).split(os.sep)
        if inner[0] != "translations":  # the rest is in English
            by_folder.setdefault(inner[0] if len(inner) > 1 else "top", []).append(path)
    for name, paths in by_folder.items():
        write(os.path.join(folder, name + ".txt"), join_texts(map(read, paths)))


def from_base64(text):
    """A number of a dictd index: base 64, most significant digit first."""
    value = 0
    for character in text:
        value = value * 64 + DIGITS[character]
    return value


def lay_out_dictionary(tree, folder, name):
    """A dictd dictionary: an entry a line, named by its first headword in the index."""
    base = os.path.join(tree, "usr/share/dictd", name)
    with gzip.open(base + ".dict.dz") as file:
        data = file.read()
    headwords = {}  # by place in the dictionary
    with open(base + ".index", "rb") as file:
        for line in file.read().splitlines():
            headword, offset, size = decode(line).split("\t")[:3]
            if not headword.startswith("00-database"):
                headwords.setdefault((from_base64(offset), from_base64(size)), []).append(headword)
    seen = {}
    lines = []
    for (offset, size), words in sorted(headwords.items()):
        seen[words[0]] = seen.get(words[0], 0) + 1
        count = seen[words[0]]
        lines.append(json.dumps({
            "id": words[0] if count == 1 else f"{words[0]} ({count})",
            "title": words[0],
            "body": decode(data[offset:offset + size]).strip("\n"),
        }, ensure_ascii=False, separators=(",", ":")) + "\n")
    write(os.path.join(folder, name + ".jsonl"), "".join(lines))
    write_list(os.path.join(folder, name + "-headwords.txt"),
               (word for words in headwords.values() for word in words))


def write_list(path, phrases):
    """A phrase a line, in byte order, each once."""
    write(path, "".join(sorted({phrase + "\n" for phrase in phrases}, key=str.encode)))


def lay_out_dictionaries(tree, folder):
    for name in ("gcide", "foldoc"):
        lay_out_dictionary(tree, folder, name)


def lay_out_git(tree, folder):
    top = os.path.join(tree, "usr/share/doc/git-doc")
    for path in walk(top, (".txt",)):
        name = os.path.relpath(path, top).replace(os.sep, "-")
        write(os.path.join(folder, "text", name), read(path))
    glossary = read(os.path.join(top, "glossary-content.txt"))
    terms = re.findall(r"^\[\[def_\w+\]\](.+)::$", glossary, re.MULTILINE)
    write_list(os.path.join(folder, "glossary.txt"), terms)


def lay_out_lists(tree, folder):
    nouns = read(os.path.join(tree, "usr/share/wordnet/index.noun")).splitlines()
    lemmas = (line.split(" ", 1)[0] for line in nouns if not line.startswith(" "))
    write_list(os.path.join(folder, "wordnet-nouns.txt"),
               (lemma.replace("_", " ") for lemma in lemmas if "_" in lemma))
    compounds = read(os.path.join(tree, "usr/share/dict/web2a.gz")).splitlines()
    write_list(os.path.join(folder, "web2a.txt"),
               (line.strip() for line in compounds if line.strip()))


def lay_out_languages(tree, folder):
    for folder_name, name in (("en-US", "en"), ("de", "de"), ("fr", "fr"), ("vi", "vi"),
                              ("zh-CN", "zh")):
        top = os.path.join(tree, "usr/share/libreoffice/help", folder_name, "text")
        write(os.path.join(folder, name + ".txt"), strip_pages(top))


def lay_out_manuals(tree, folder):
    documents = os.path.join(tree, "usr/share/doc")
    write(os.path.join(folder, "postgresql.txt"),
          strip_pages(os.path.join(documents, "postgresql-doc-15")))
    python = walk(os.path.join(documents, "python3.11/html/_sources"), (".txt",))
    write(os.path.join(folder, "python.txt"), join_texts(map(read, python)))
    perl = walk(os.path.join(tree, "usr/share/perl"), (".pod",))
    write(os.path.join(folder, "perl.txt"), join_texts(map(read, perl)))
    glosses = []
    for kind in ("noun", "verb", "adj", "adv"):
        for line in read(os.path.join(tree, "usr/share/wordnet/data." + kind)).splitlines():
            if " | " in line and not line.startswith(" "):
                glosses.append(line.split(" | ", 1)[1].strip())
    write(os.path.join(folder, "wordnet.txt"), join_texts(glosses))


PARTS = {
    "kernel": lay_out_kernel,
    "dictionaries": lay_out_dictionaries,
    "git": lay_out_git,
    "lists": lay_out_lists,
    "languages": lay_out_languages,
    "manuals": lay_out_manuals,
}


def main():
    if len(sys.argv) != 4 or sys.argv[1] not in PARTS:
        sys.exit(__doc__)
    os.makedirs(sys.argv[3])
    PARTS[sys.argv[1]](sys.argv[2], sys.argv[3])


if __name__ == "__main__":
    main()
