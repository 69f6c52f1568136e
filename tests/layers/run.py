#!/usr/bin/python3
"""The house's own rules, held on the source tree: which folder may know which, what the library never does,
what stands at the top, how long lines, files and functions are, and that what the code cites is there.

usage: run.py

Every function whose name begins with `rule_` yields what is wrong, a line each. The last line printed is
`N passed, N failed`; the exit status is 0 only where none failed.
"""
import functools
import os
import re
import shutil
import subprocess
import sys

TOP = os.path.realpath(os.path.join(os.path.dirname(os.path.abspath(__file__)), "..", ".."))

# A folder of lib/ may include its own headers, those of these folders, and what those may include.
NEEDS = {
    "base": [],
    "language": ["base"],
    "data": ["base"],
    "network": ["language", "data"],
    "parts": ["network"],
    "solve": ["base"],
    "sweep": ["parts", "solve", "data"],
    "measure": ["sweep"],
    "design": ["measure"],
    "draw": ["measure"],
}
NOT_ROOMS = {"package"}                 # lib/package: what is installed beside the library, no code
AT_THE_TOP = {"lib", "cli", "grammar", "tests", "netlists", "docs",
              "CMakeLists.txt", "README.md", "DEVELOPERS.md"}

LINE_COLUMNS = 110
FILE_LINES = 600
LONG_FILES = {}                         # path: the reason why it may be longer
FUNCTION_LINES = 60
FUNCTION_MEDIAN = 12
LONG_FUNCTIONS = {}                     # (path, name): the reason

# What the library never does: ends the program, prints, looks at the locale or makes text of a double by it.
FORBIDDEN_CALLS = """exit _Exit quick_exit abort assert
    printf vprintf fprintf vfprintf puts putchar fputs fputc perror
    setlocale localeconv newlocale uselocale strtod strtof strtold atof scanf sscanf fscanf vsscanf
    rand srand random drand48 system strtok strerror""".split()
FORBIDDEN_HEADERS = {"locale.h", "assert.h", "err.h", "xlocale.h"}
FLOAT_DIRECTIVE = re.compile(r"%[-+ #0']*[\d*]*(?:\.[\d*]*)?[lL]?[aefgAEFG]")


# ---- reading the tree ---------------------------------------------------------------------------


def is_built(name):
    return name.startswith("build") or name == "__pycache__"


@functools.cache
def files(folder, *endings):
    """Paths from the top, sorted, of what stands below a folder; what was built is left out."""
    out = []
    for place, folders, names in os.walk(os.path.join(TOP, folder)):
        folders[:] = sorted(f for f in folders if f != ".git" and not is_built(f))
        wanted = [n for n in names if not endings or n.endswith(endings)]
        out += [os.path.relpath(os.path.join(place, n), TOP) for n in wanted]
    return sorted(out)


@functools.cache
def read(path):
    with open(os.path.join(TOP, path), encoding="utf-8") as fh:
        return fh.read()


PIECES = re.compile(r'//[^\n]*|/\*.*?\*/|"(?:\\.|[^"\\\n])*"|\'(?:\\.|[^\'\\\n])*\'', re.S)


@functools.cache
def without_comments(path):
    """The text with blanks in place of comments, line ends kept."""
    return PIECES.sub(lambda m: re.sub(r"[^\n]", " ", m[0]) if m[0][0] == "/" else m[0], read(path))


@functools.cache
def code(path):
    """Without comments, and strings emptied."""
    emptied = {'"': '""', "'": "' '"}
    return PIECES.sub(lambda m: emptied.get(m[0][0], m[0]), without_comments(path))


def line_of(text, offset):
    return text.count("\n", 0, offset) + 1


def sources():
    return files("lib", ".c", ".h")


def library():
    """Without the programs that make tables in the build."""
    return [p for p in sources() if "/make/" not in p]


def room(path):
    """The folder of lib/ that a path belongs to; None for the files that stand in lib/ itself."""
    parts = path.split("/")
    if parts[0] == "grammar":
        return "language" if "netlist" in path or "token" in path else "data"
    return parts[1] if len(parts) > 2 else None


def may_know(name):
    out = {name}
    for other in NEEDS[name]:
        out |= may_know(other)
    return out


def includes(path):
    """-> (line, header, whether in quotes)"""
    for m in re.finditer(r'^[ \t]*#[ \t]*include[ \t]*(["<])([^">]+)[">]', without_comments(path), re.M):
        yield line_of(read(path), m.start()), m[2], m[1] == '"'


def resolve(path, header, *roots):
    """The header's path from the top: beside the file, or below one of the roots."""
    for root in (os.path.dirname(path), *roots):
        candidate = os.path.normpath(os.path.join(root, header))
        if os.path.isfile(os.path.join(TOP, candidate)):
            return candidate
    return None


# ---- layers -----------------------------------------------------------------------------------


def rule_folders_are_known():
    for name in sorted(os.listdir(os.path.join(TOP, "lib"))):
        if os.path.isdir(os.path.join(TOP, "lib", name)) and name not in NEEDS and name not in NOT_ROOMS:
            yield f"lib/{name} has no place in the order of the layers"


def rule_layers():
    for path, own in [(p, room(p)) for p in library() + files("grammar", ".re", ".h")]:
        for line, header, quoted in includes(path):
            target = resolve(path, header, "lib", "grammar")
            if not quoted or own is None:
                continue
            if target is None:
                yield f"{path}:{line}: {header} is not there"
            elif target != "lib/anabranch.h" and (room(target) is None or room(target) not in may_know(own)):
                yield f"{path}:{line}: {own} may not know {target}"


def rule_the_command_is_a_front():
    for path in files("cli", ".c", ".h"):
        for line, header, quoted in includes(path):
            target = resolve(path, header, "lib")
            if quoted and (target is None or not target.startswith("cli/") and target != "lib/anabranch.h"):
                yield f"{path}:{line}: {header} is neither the command's own nor anabranch.h"


def rule_the_public_header_stands_alone():
    for line, header, quoted in includes("lib/anabranch.h"):
        if quoted:
            yield f"lib/anabranch.h:{line}: {header}"


# ---- what the library never does -----------------------------------------------------------------


def rule_forbidden_calls():
    pattern = re.compile(r"(?<![\w.>])(" + "|".join(FORBIDDEN_CALLS) + r")\s*\(")
    for path in library():
        text = code(path)
        for m in pattern.finditer(text):
            if "__attribute__" not in text[text.rfind("\n", 0, m.start()):m.start()]:
                yield f"{path}:{line_of(text, m.start())}: {m[1]} in the library"


def rule_forbidden_headers():
    for path in library():
        for line, header, _ in includes(path):
            if header in FORBIDDEN_HEADERS:
                yield f"{path}:{line}: <{header}> in the library"


def rule_no_double_by_printf():
    """In the command too: numbers look the same in every locale."""
    for path in library() + files("cli", ".c", ".h"):
        text = without_comments(path)
        for m in PIECES.finditer(text):
            if m[0][0] == '"' and FLOAT_DIRECTIVE.search(m[0].replace("%%", "")):
                yield f"{path}:{line_of(text, m.start())}: {m[0]} would print a double by the locale"


def rule_no_state():
    """No variable of a file or of a function outlives a call, constants aside."""
    pattern = re.compile(r"^[ \t]*static\s+(?!inline\b|const\b|_Noreturn\b|void\b)"
                         r"([^;{}=()]*?)[\w\]\[]+\s*(=|;)", re.M)
    for path in library():
        text = code(path)
        for m in pattern.finditer(text):
            if not re.search(r"\bconst\b", m[1]):
                yield f"{path}:{line_of(text, m.start())}: {m[0].strip()} is state outside a context"


# ---- names -------------------------------------------------------------------------------------


def rule_public_names():
    text = re.sub(r"^#.*$", "", code("lib/anabranch.h"), flags=re.M)
    for m in re.finditer(r"ANB_API[^;(]*?(\w+)\(", text):
        if not re.fullmatch(r"anb_[a-z][a-z0-9]*(_[a-z0-9]+)*", m[1]):
            yield f"lib/anabranch.h:{line_of(text, m.start())}: {m[1]}"


def rule_private_names():
    """What a private header declares for other files begins with anb__ or ANB__."""
    pattern = re.compile(r"^(?!static|typedef|#)[a-z][\w \t*]*?[ *](\w+)\([^;{]*\)[^;{]*;", re.M)
    for path in sources():
        if path.endswith(".h") and path != "lib/anabranch.h":
            text = code(path)
            for m in pattern.finditer(text):
                if not m[1].lower().startswith("anb__"):
                    yield f"{path}:{line_of(text, m.start())}: {m[1]}"


def rule_grammar_names_the_parser():
    """Every rule of the grammar is a function of the parser."""
    if "grammar/netlist.ebnf" not in files("grammar"):
        yield "grammar/netlist.ebnf is not there"
        return
    text = re.sub(r"\(\*.*?\*\)", "", read("grammar/netlist.ebnf"), flags=re.S)
    parser = "".join(code(p) for p in files("lib/language", ".c"))
    rules = re.findall(r"^(\w+)\s*=", text, re.M)
    for rule in rules:
        if not re.search(rf"\b(?:parse_|anb__parse_)?{rule}\(", parser):
            yield f"grammar/netlist.ebnf: no function for the rule {rule}"
    if len(rules) < 20:
        yield f"grammar/netlist.ebnf: {len(rules)} rules found"


# ---- size and layout -------------------------------------------------------------------------------


def own_code():
    return files("lib", ".c", ".h") + files("cli", ".c", ".h") + files("grammar", ".re")


def rule_lines():
    for path in own_code() + files("tests", ".c", ".h", ".cpp", ".sh") + files("netlists"):
        for number, line in enumerate(read(path).split("\n"), 1):
            if len(line) > LINE_COLUMNS:
                yield f"{path}:{number}: {len(line)} columns"
            if "\t" in line or line != line.rstrip():
                yield f"{path}:{number}: a tab, or blanks at the end"


def rule_files():
    for path in own_code():
        lines = read(path).count("\n")
        if lines > FILE_LINES and path not in LONG_FILES:
            yield f"{path}: {lines} lines"
    for path in LONG_FILES:
        if path not in own_code() or read(path).count("\n") <= FILE_LINES:
            yield f"{path}: listed as long, and is not"


def functions(path):
    """-> (name, lines) of each function, by the layout: a head at the margin, `}` at the margin."""
    head, start = "", 0
    for number, line in enumerate(code(path).split("\n"), 1):
        if line.startswith("}"):
            if start and head:
                yield head, number - start + 1
            head, start = "", 0
        elif re.match(r"[a-zA-Z_]", line) and not line.startswith("typedef"):
            m = re.search(r"(\w+)\(", line)
            head, start = (m[1], number) if m else ("", 0)
            if m and re.search(r"\{.*\}$", line):
                yield head, 1
                head, start = "", 0
            elif line.endswith(";"):
                head, start = "", 0


def rule_functions():
    lengths = [(n, p, name) for p in own_code() if p.endswith((".c", ".h")) for name, n in functions(p)]
    for n, path, name in lengths:
        if n > FUNCTION_LINES and (path, name) not in LONG_FUNCTIONS:
            yield f"{path}: {name} has {n} lines"
    median = sorted(lengths)[len(lengths) // 2][0]
    if median > FUNCTION_MEDIAN:
        yield f"half of the functions have more than {median - 1} lines"


def rule_nothing_unfinished():
    words = re.compile(r"\b(TODO|FIXME|XXX|HACK|WIP)\b|#\s*if\s+0\b")
    tests = files("tests", ".c", ".h", ".py", ".sh", ".txt")
    for path in own_code() + tests + files("docs") + files("netlists"):
        if path != "tests/layers/run.py":
            for m in words.finditer(read(path)):
                yield f"{path}:{line_of(read(path), m.start())}: {m[0]}"


# ---- the tree --------------------------------------------------------------------------------------


def rule_top():
    for name in sorted(os.listdir(TOP)):
        if name not in AT_THE_TOP and not name.startswith(".") and not is_built(name):
            yield f"{name} does not belong at the top"
    for name in sorted(AT_THE_TOP - set(os.listdir(TOP))):
        yield f"{name} is not there"


def rule_nothing_generated():
    made = re.compile(r"^/\* (Generated by re2c|Made by )", re.M)
    for path in files("."):
        name = os.path.basename(path)
        if name.endswith((".o", ".a", ".so", ".d", ".pyc", ".orig", ".rej")) or "CMakeFiles" in path:
            yield f"{path} was built"
        elif name.endswith((".c", ".h")) and made.search(read(path)):
            yield f"{path} was generated"


def rule_git_holds_nothing_built():
    """Only where this is a repository and git is there."""
    if not shutil.which("git") or not os.path.isdir(os.path.join(TOP, ".git")):
        return
    out = subprocess.run(["git", "-C", TOP, "ls-files"], capture_output=True, text=True, check=False).stdout
    for path in out.splitlines():
        if is_built(path.split("/")[0]) or "__pycache__" in path:
            yield path


def rule_no_places_of_one_machine():
    pattern = re.compile(r"(?<![\w.])/(?:work|home|root|farm)/")
    for path in files("."):
        if path.endswith((".c", ".h", ".re", ".py", ".sh", ".md", ".txt", ".anab", ".scd", ".toml", ".in")):
            for m in pattern.finditer(read(path)):
                yield f"{path}:{line_of(read(path), m.start())}: {m[0]}"


# ---- what is cited is there ----------------------------------------------------------------------------


def cited(kind, text):
    """The numbers of `eq. 3`, `eq. 10 to 12`, `eq. 3, 5 and 7` that follow a mention of the theory page."""
    more = r"(?:\s+to\s+(\d+)|((?:(?:,|\s+and)\s+\d+)+))?"
    for m in re.finditer(rf"theory\.md[^.;)]*?\b{kind}\s+(\d+){more}", text):
        last = int(m[2] or m[1])
        yield from ((m.start(), n) for n in range(int(m[1]), last + 1))
        yield from ((m.start(), int(n)) for n in re.findall(r"\d+", m[3] or ""))


def rule_citations():
    theory = read("docs/theory.md")
    there = {"eq\\.": set(map(int, re.findall(r"\((\d+)\)\s*$", theory, re.M))),
             "sections?": set(map(int, re.findall(r"^## (\d+)\.", theory, re.M)))}
    for path in sources() + files("grammar"):
        # A comment's lines are put on one, with every offset kept.
        text = re.sub(r"\n[ \t]*(?:\*|//) ?", lambda m: " ".ljust(len(m[0])), read(path))
        for kind, known in there.items():
            for offset, number in cited(kind, text):
                if number not in known:
                    word = kind.replace("\\", "").rstrip("s?")
                    yield f"{path}:{line_of(read(path), offset)}: {word} {number} is not in docs/theory.md"


def rule_links():
    """Files that the documents link to are there."""
    for path in [p for p in files(".") if p.endswith(".md")]:
        for m in re.finditer(r"\]\(([^)#:]+)(?:#[^)]*)?\)", read(path)):
            target = os.path.normpath(os.path.join(TOP, os.path.dirname(path), m[1]))
            if not os.path.exists(target):
                yield f"{path}:{line_of(read(path), m.start())}: {m[1]} is not there"


# ---- all of them ------------------------------------------------------------------------------------


def main():
    failed = 0
    rules = {name[5:]: f for name, f in globals().items() if name.startswith("rule_")}
    for name, rule in rules.items():
        wrong = list(rule())
        if wrong:
            failed += 1
            print(f"FAILED {name.replace('_', ' ')} ({len(wrong)})")
            for text in wrong[:40]:
                print(f"    {text}")
    print(f"{len(rules) - failed} passed, {failed} failed")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
