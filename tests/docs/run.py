#!/usr/bin/env python3
"""Runs what the documents show, and holds the output that they print against the real one.

usage: ANABRANCH=path/to/anabranch run.py [--update] [FILE.md ...]

In README.md and docs/*.md
  - a block ```anab after a line `<!-- file: NAME -->` is written to NAME in an empty folder;
  - any other block ```anab has to be a netlist that is read without an error (one with `...` is an
    excerpt, and is passed over);
  - in a block ```console, a line `$ COMMAND` is run by a shell in that folder, where `anabranch` is the
    program and netlists/ are the examples, and what follows it is what it prints, both streams together.
    A line `...` stands for any number of lines. The plain kernel is used, whose last digits no machine changes.
`--update` writes the real output into the documents instead. The last line is `N passed, N failed`.
"""
import os, re, shutil, subprocess, sys, tempfile

TOP = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
BLOCK = re.compile(r"(?:<!-- file: (?P<name>\S+) -->\n)?^```(?P<kind>anab|console)\n(?P<body>.*?)^```$", re.S | re.M)


def run(command, folder):
    env = dict(os.environ, PATH=os.path.join(folder, ".bin") + ":" + os.environ["PATH"], NO_COLOR="1", LC_ALL="C", ANB_KERNEL="plain")
    done = subprocess.run(["bash", "-c", command], cwd=folder, env=env, stdin=subprocess.DEVNULL,
                          stdout=subprocess.PIPE, stderr=subprocess.STDOUT, timeout=120)
    return done.stdout.decode("utf-8", "replace")


def commands_of(body):
    """-> list of [command, output]"""
    out = []
    for line in body.splitlines(keepends=True):
        if line.startswith("$ "):
            out.append([line[2:].rstrip("\n"), ""])
        elif out:
            out[-1][1] += line
    return out


def matches(want, got):
    parts = [re.escape(p) for p in re.split(r"^\.\.\.\n", want, flags=re.M)]
    return re.fullmatch("(?:.*\n)*?".join(parts), got) is not None


def shortened(want, got):
    """The real output, cut where the document cuts it: lines before and after its `...`."""
    pieces = re.split(r"^\.\.\.\n", want, flags=re.M)
    if len(pieces) != 2:
        return got
    lines, head, tail = got.splitlines(keepends=True), pieces[0].count("\n"), pieces[1].count("\n")
    return got if len(lines) <= head + tail else "".join(lines[:head] + ["...\n"] + lines[len(lines) - tail:])


class Document:
    def __init__(self, path, binary, update):
        self.path, self.update, self.passed, self.failed = path, update, 0, 0
        self.folder = tempfile.mkdtemp()
        os.mkdir(os.path.join(self.folder, ".bin"))
        os.symlink(os.path.abspath(binary), os.path.join(self.folder, ".bin", "anabranch"))
        os.symlink(os.path.join(TOP, "netlists"), os.path.join(self.folder, "netlists"))

    def note(self, good, what):
        self.passed += good
        self.failed += not good
        if not good:
            print(f"{os.path.relpath(self.path, TOP)}: {what}", flush=True)

    def netlist(self, name, body):
        if name:
            with open(os.path.join(self.folder, name), "w", encoding="utf-8") as file:
                file.write(body)
        elif "..." not in body:
            with open(os.path.join(self.folder, "excerpt.anab"), "w", encoding="utf-8") as file:
                file.write(body)
            got = run("anabranch show excerpt.anab > /dev/null", self.folder)
            self.note("error:" not in got, f"a netlist is wrong:\n{body}{got}")

    def console(self, body):
        out = ""
        for command, want in commands_of(body):
            got = run(command, self.folder)
            if self.update:
                got = shortened(want, got)
            else:
                self.note(matches(want, got), f"`{command}` prints now\n{got}and not\n{want}")
            out += f"$ {command}\n{got}"
        return out

    def block(self, match):
        if match["kind"] == "anab":
            self.netlist(match["name"], match["body"])
            return match[0]
        body = self.console(match["body"])
        return match[0].replace(match["body"], body) if self.update else match[0]

    def check(self):
        with open(self.path, encoding="utf-8") as file:
            text = file.read()
        new = BLOCK.sub(self.block, text)
        if self.update and new != text:
            with open(self.path, "w", encoding="utf-8") as file:
                file.write(new)
        shutil.rmtree(self.folder)


def main(argv):
    binary, update = os.environ.get("ANABRANCH"), "--update" in argv
    paths = [a for a in argv if not a.startswith("--")]
    if not binary:
        sys.stderr.write(__doc__)
        return 2
    if not paths:
        docs = os.path.join(TOP, "docs")
        paths = [os.path.join(TOP, "README.md")] + sorted(os.path.join(docs, f) for f in os.listdir(docs) if f.endswith(".md"))
    passed = failed = 0
    for path in paths:
        document = Document(path, binary, update)
        document.check()
        passed += document.passed
        failed += document.failed
    print(f"{passed} passed, {failed} failed")
    return 1 if failed or not (passed or update) else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
