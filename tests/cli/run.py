#!/usr/bin/python3
"""The command's ways: what it prints where, its exit statuses, its files, its signals.

usage: ANABRANCH=path/to/anabranch run.py [NAME...]

Every function here whose name begins with `test_` is a test; a NAME runs those that hold it.
The last line is `N passed, N failed`; the exit status is 0 only where none failed.
"""
import csv
import io
import json
import os
import pty
import re
import select
import shutil
import signal
import stat
import subprocess
import sys
import tempfile
import time

ANABRANCH = os.path.abspath(os.environ.get("ANABRANCH", "build/anabranch"))
DOCS = os.path.join(os.path.dirname(os.path.abspath(__file__)), "../../docs")
TIMEOUT = 120  # seconds; a command that hangs fails its test

SPLITTER = """title "Two-way splitter, quarter-wave sections"

z0 = 50 ohm
f0 = 1 GHz
arm = line(sqrt(2)*z0, 90 deg @ f0)

port common, left, right: z0

common -- arm -- left
common -- arm -- right
left -- iso: 2*z0 -- right # the isolation resistor

sweep 500 MHz .. 1500 MHz points 41
"""
TWO_PORT = "port a, b: 50 ohm\na -- 10 nH -- b\nsweep at 1 GHz\n"
CASES = "cases l = [1 nH, 2.2 nH, 10 nH]\nport a, b: 50 ohm\na -- l -- b\nsweep at 1 GHz\n"
MANY_POINTS = "1 MHz .. 1 GHz points 10000000"  # several seconds of work


class Failed(Exception):
    pass


def check(condition, text):
    if not condition:
        raise Failed(text)


def same(got, wanted, what):
    check(got == wanted, f"{what}: {got!r}, {wanted!r} expected")


def holds(text, word, what="output"):
    check(word in text, f"{what} lacks {word!r}:\n{text}")


def lacks(text, word, what="output"):
    check(word not in text, f"{what} holds {word!r}:\n{text}")


# ---- running ------------------------------------------------------------------


def environment(**changes):
    out = {k: v for k, v in os.environ.items() if k not in ("NO_COLOR", "ANB_KERNEL", "LC_ALL", "LANG")}
    out["TERM"] = "xterm"
    out.update(changes)
    return out


class Result:
    def __init__(self, status, out, err):
        self.status, self.out, self.err = status, out, err


def run(*words, given="", status=None, env=None, **more):
    """Runs the command; where `status` is given, that must be its exit status."""
    p = subprocess.run([ANABRANCH, *words], input=given.encode(), stdout=more.pop("stdout", subprocess.PIPE),
                       stderr=subprocess.PIPE, env=env or environment(), timeout=TIMEOUT, **more)
    result = Result(p.returncode, (p.stdout or b"").decode(), p.stderr.decode())
    if status is not None:
        check(result.status == status, f"exit status {result.status}, {status} expected\n{result.err}")
    return result


def start(*words, **more):
    return subprocess.Popen([ANABRANCH, *words], stdin=subprocess.DEVNULL,
                            stdout=more.pop("stdout", subprocess.DEVNULL), stderr=subprocess.PIPE,
                            env=environment(), **more)


def run_on_terminal(*words, env=None, columns=80, stdout_too=False):
    """Runs with standard error (and standard output) on a terminal; returns status and what it showed."""
    master, slave = pty.openpty()
    subprocess.run(["stty", "cols", str(columns), "rows", "24"], stdin=slave, check=True)
    p = subprocess.Popen([ANABRANCH, *words], stdin=subprocess.DEVNULL, stderr=slave,
                         stdout=slave if stdout_too else subprocess.DEVNULL, env=env or environment())
    os.close(slave)
    shown, end = b"", time.monotonic() + TIMEOUT
    while time.monotonic() < end:
        if select.select([master], [], [], 0.1)[0]:
            try:
                piece = os.read(master, 65536)
            except OSError:  # the other end has gone
                break
            if not piece:
                break
            shown += piece
    os.close(master)
    return p.wait(timeout=TIMEOUT), shown.decode()


def write(name, text):
    with open(name, "w", encoding="utf-8", newline="") as fh:
        fh.write(text)
    return name


def read(name):
    with open(name, encoding="utf-8", newline="") as fh:
        return fh.read()


def nothing_left(wanted):
    """The folder holds just these files: no temporary ones."""
    same(sorted(os.listdir(".")), sorted(wanted), "files")


def wait_for(condition, what):
    end = time.monotonic() + TIMEOUT
    while not condition():
        check(time.monotonic() < end, f"waited in vain for {what}")
        time.sleep(0.01)


def refused(*words, text, hint=None, given=""):
    """A call that is wrong: status 2, nothing on standard output, this text and hint."""
    result = run(*words, given=given, status=2)
    same(result.out, "", "standard output")
    holds(result.err, "error: ", "standard error")
    holds(result.err, text, "standard error")
    if hint is not None:
        check(re.search(rf"^hint: .*{re.escape(hint)}", result.err, re.M), f"no hint {hint!r}:\n{result.err}")
    return result


def values(touchstone):
    """The numbers of a Touchstone text in the order of the file, comments and option line left out."""
    lines = [line for line in touchstone.splitlines() if line[:1] not in ("!", "#", "[")]
    return [float(word) for line in lines for word in line.split()]


def option_line(touchstone):
    return next(line for line in touchstone.splitlines() if line.startswith("#"))


# ---- help, version, the call ------------------------------------------------------


def fits_a_screen(text):
    lines = text.splitlines()
    check(len(lines) <= 23, f"{len(lines)} lines")  # one is left for the prompt
    for line in lines:
        check(len(line) <= 80, f"{len(line)} columns: {line}")


def test_help_of_the_tool():
    text = run("--help", status=0).out
    fits_a_screen(text)
    for word in ("sweep", "show", "format", "example", "--version"):
        holds(text, word)
    for word in ("check", "compare", "tune", "yield", "plot", "convert", "draft"):
        check(not re.search(rf"^  {word}\b", text, re.M), f"{word} is listed but not built")
    same(run("-h", status=0).out, text, "-h")


def test_help_of_each_command():
    for command in ("sweep", "show", "format"):
        text = run(command, "--help", status=0).out
        fits_a_screen(text)
        holds(text, "example")
        holds(text, f"  anabranch {command} ")
        same(run(command, "-h", status=0).out, text, "-h")
        lacks(text, "--measure")


def test_help_says_what_exists():
    """Each option in a command's help is taken by it."""
    for command in ("sweep", "show", "format"):
        for name in re.findall(r"--[a-z]+", run(command, "--help", status=0).out):
            lacks(run(command, name).err, "has no option", name)


def test_manual_pages():
    """They compile without a complaint, and each option of a command is in its page and the reverse."""
    for command in ("", "sweep", "show", "format"):
        with open(os.path.join(DOCS, f"anabranch{'-' if command else ''}{command}.1.scd"), "rb") as fh:
            source = fh.read()
        page = subprocess.run(["scdoc"], input=source, capture_output=True, check=True).stdout
        lint = subprocess.run(["mandoc", "-T", "lint", "-W", "error"], input=page, capture_output=True)
        same((lint.returncode, lint.stdout), (0, b""), "mandoc")
        if command:
            entries = "".join(re.findall(r"^\*-.*$", source.decode(), re.M))
            help_text = re.sub(r"\n\n(example[^$]*)$", "", run(command, "--help", status=0).out)
            wanted = set(re.findall(r"--[a-z]+", help_text)) - {"--help"}
            same(sorted(set(re.findall(r"--[a-z]+", entries))), sorted(wanted), f"options of {command}")


def test_version():
    check(re.fullmatch(r"anabranch \d+\.\d+\.\d+\n", run("--version", status=0).out), "not a version")


def test_no_command():
    refused(text="which command", hint="--help")


def test_hints_for_mistyped_words():
    refused("swep", "x", text="there is no command `swep`", hint="sweep")
    refused("shwo", "x", text="there is no command `shwo`", hint="show")
    refused("frobnicate", text="there is no command", hint="anabranch --help")
    refused("--verison", text="there is no option", hint="--version")
    refused("sweep", "--treads", "2", "x", text="no option `--treads`", hint="--threads")
    refused("sweep", "--refrence=50ohm", "x", text="no option `--refrence`", hint="--reference")
    refused("show", "--stat", "x", text="no option `--stat`", hint="--statistics")
    refused("show", "-x", "x", text="no option `-x`", hint="anabranch show --help")
    refused("show", "--digits", "3", "x", text="no option `--digits`", hint="`sweep`")
    refused("sweep", "--unit", "mhz", "x", text="`mhz`", hint="MHz")
    refused("sweep", "--format", "dB", "x", text="`dB`", hint="db")
    refused("sweep", "--touchstone", "3", "x", text="`3`", hint="1.1")


def test_calls_that_are_wrong():
    refused("sweep", text="wants a file", hint="anabranch sweep FILE")
    refused("sweep", "a", "b", text="one too many")
    refused("sweep", "x", "--digits", text="wants a value")
    for value in ("0", "18", "x", "-1", "", "99999999999999999999"):
        refused("sweep", "--digits", value, "x", text="whole number")
    refused("sweep", "--threads", "0", "x", text="whole number")
    refused("sweep", "--json=1", "x", text="takes no value")
    refused("sweep", "--unit", "MHz", "--unit", "GHz", "x", text="given twice")
    refused("sweep", "--json", "--csv", "x", text="exclude")
    refused("sweep", "--json", "--touchstone", "2", "x", text="--touchstone")
    refused("show", "--json", "--csv", "x", text="exclude")
    for value in ("50", "50ohms", "0ohm", "-5ohm", "50 ohm,", "50nH", ""):
        refused("sweep", "--reference", value, "x", text="--reference", hint="50ohm")


def test_words_after_two_dashes_are_files():
    write("-o", SPLITTER)
    run("sweep", "--", "-o", status=0)


# ---- sweep: results -----------------------------------------------------------------


def test_sweep_prints_touchstone():
    write("s.anab", SPLITTER)
    result = run("sweep", "s.anab", status=0)
    same(result.err, "", "standard error")
    same(option_line(result.out), "# Hz S RI R 50", "option line")
    holds(result.out, "Two-way splitter, quarter-wave sections")
    holds(result.out, "common")
    same(len(values(result.out)), 41 * 19, "numbers")


def test_sweep_from_standard_input():
    write("s.anab", SPLITTER)
    wanted = values(run("sweep", "s.anab", status=0).out)
    same(values(run("sweep", "-", given=SPLITTER, status=0).out), wanted, "values")


def test_output_file_has_the_same_bytes():
    write("s.anab", SPLITTER)
    printed = run("sweep", "s.anab", status=0).out
    result = run("sweep", "s.anab", "-o", "s.s3p", status=0)
    same(result.out + result.err, "", "output")
    same(read("s.s3p"), printed, "file")
    same(run("sweep", "-os.s3p", "s.anab", status=0).out, "", "-oFILE")
    same(run("sweep", "--output=-", "s.anab", status=0).out, printed, "--output=-")
    nothing_left(["s.anab", "s.s3p"])


def test_set_and_sweep_override():
    write("s.anab", SPLITTER)
    wanted = SPLITTER.replace("z0 = 50 ohm", "z0 = 75 ohm").replace("f0 = 1 GHz", "f0 = 1.1 GHz")
    wanted = wanted.replace("sweep 500 MHz .. 1500 MHz points 41", "sweep at 900 MHz, 1 GHz")
    got = run("sweep", "s.anab", "--set", "z0=75ohm", "--set", "f0 = 1.1 GHz",
              "--sweep", "at 900 MHz, 1 GHz", status=0).out
    same(option_line(got), "# Hz S RI R 75", "option line")
    same(values(got), values(run("sweep", "-", given=wanted, status=0).out), "values")


def test_overrides_that_are_wrong():
    write("s.anab", SPLITTER)
    refused("sweep", "s.anab", "--set", "z1=75ohm", text="z1", hint="z0")
    refused("sweep", "s.anab", "--set", "z0=75 nH", text="error")
    refused("sweep", "s.anab", "--set", "z0", text="error")
    refused("sweep", "s.anab", "--set", "z0=75 ohm +", text="error")
    refused("sweep", "s.anab", "--sweep", "1 GHz .. points 3", text="error")


def test_versions():
    write("s.anab", SPLITTER)
    plain = run("sweep", "s.anab", status=0).out
    for version, word in (("2", "[Version] 2.0"), ("2.1", "[Version] 2.1")):
        text = run("sweep", "s.anab", "--touchstone", version, status=0).out
        for part in (word, "[Number of Ports] 3", "[Network Data]", "[End]"):
            holds(text, part)
    for version in ("1", "1.1"):
        same(values(run("sweep", "s.anab", "--touchstone", version, status=0).out), values(plain), version)


def test_unit_format_digits():
    write("s.anab", TWO_PORT)
    text = run("sweep", "s.anab", "--unit", "MHz", "--format", "db", status=0).out
    same(option_line(text), "# MHz S DB R 50", "option line")
    same(values(text)[0], 1000.0, "frequency")
    text = run("sweep", "s.anab", "--unit", "GHz", "--format", "ma", "--digits", "4", status=0).out
    same(option_line(text), "# GHz S MA R 50", "option line")
    for word in text.splitlines()[-1].split()[1:]:
        digits = re.sub(r"[eE].*|[-.]", "", word).strip("0")
        check(len(digits) <= 4, f"{word} has more than 4 digits")


def test_reference():
    write("s.anab", SPLITTER)
    same(option_line(run("sweep", "s.anab", "--reference", "75ohm", status=0).out), "# Hz S RI R 75", "line")
    plain = run("sweep", "s.anab", status=0).out
    same(run("sweep", "s.anab", "--reference", "0.05 kohm", status=0).out, plain, "50 ohm")
    text = run("sweep", "s.anab", "--reference", "50ohm,75 Ω,100ohm", status=0).out
    holds(text, "[Version] 2.0")
    check(re.search(r"\[Reference\]\s+50\s+75\s+100", text), f"no references:\n{text[:400]}")
    refused("sweep", "s.anab", "--reference", "50ohm,75ohm", text="reference")


def test_different_references_need_version_2():
    write("s.anab", "port a: 50 ohm\nport b: 75 ohm\na -- 10 ohm -- b\nsweep at 1 GHz\n")
    holds(run("sweep", "s.anab", status=0).out, "[Version] 2.0")
    refused("sweep", "s.anab", "--touchstone", "1", text="error", hint="")


def test_complex_reference_is_told():
    write("s.anab", "port a, b: 40 ohm - j*10 ohm\na -- 10 ohm -- b\nsweep at 1 GHz\n")
    result = run("sweep", "s.anab", status=0)
    holds(result.err, "warning: ", "standard error")
    same(option_line(result.out), "# Hz S RI R 40", "option line")


def test_sweep_json():
    write("s.anab", SPLITTER)
    data = json.loads(run("sweep", "s.anab", "--json", status=0).out)
    flat = values(run("sweep", "s.anab").out)
    same(data["ports"], 3, "ports")
    same(data["reference_ohm"], [50, 50, 50], "reference")
    same(data["parameter"], "S", "parameter")
    same(len(data["frequencies_hz"]), 41, "frequencies")
    for k in (0, 20, 40):
        record = flat[19 * k:19 * k + 19]
        same(data["frequencies_hz"][k], record[0], "frequency")
        same([x for row in data["matrices"][k] for pair in row for x in pair], record[1:], "matrix")
    for name in ("version", "format", "noise", "mixed_mode_order", "warnings"):
        check(name in data, f"no member {name}")


def test_sweep_csv():
    write("s.anab", SPLITTER)
    rows = list(csv.reader(io.StringIO(run("sweep", "s.anab", "--csv", status=0).out)))
    same(len(rows), 42, "rows")
    same(len(rows[0]), 19, "columns")
    same(rows[0][:4], ["frequency_hz", "s_1_1_re", "s_1_1_im", "s_1_2_re"], "headings")
    check(all(len(row) == 19 for row in rows), "rows of different lengths")
    same([float(x) for x in rows[1]][0], 5e8, "first frequency")


def test_threads_give_the_same_bytes():
    write("s.anab", SPLITTER)
    texts = {run("sweep", "s.anab", "--sweep", "0 Hz .. 3 GHz points 20001", "--threads", n, status=0).out
             for n in ("1", "2", "3", "7")}
    same(len(texts), 1, "different texts")


def test_kernels_agree():
    write("s.anab", SPLITTER)
    best = values(run("sweep", "s.anab", status=0).out)
    plain = values(run("sweep", "s.anab", status=0, env=environment(ANB_KERNEL="plain")).out)
    same(len(plain), len(best), "numbers")
    check(all(abs(a - b) <= 1e-13 * max(1, abs(a)) for a, b in zip(plain, best)), "kernels differ")


def test_locale_does_not_matter():
    """With a locale that has a decimal comma, where one can be made here."""
    write("s.anab", SPLITTER)
    made = subprocess.run(["localedef", "-i", "de_DE", "-f", "UTF-8", "./de_DE.UTF-8"], capture_output=True)
    env = environment(LC_ALL="de_DE.UTF-8", LANG="de_DE.UTF-8")
    if made.returncode == 0:
        env["LOCPATH"] = os.getcwd()
    words = ("sweep", "s.anab", "--set", "z0=50.5ohm")
    same(run(*words, env=env, status=0).out, run(*words).out, "sweep")
    same(run("show", "s.anab", env=env, status=0).out, run("show", "s.anab").out, "show")
    same(run("sweep", "nowhere", env=env, status=2).err, run("sweep", "nowhere").err, "message")


# ---- sweep: cases ----------------------------------------------------------------------


def test_cases_warn_once():
    write("c.anab", CASES)
    result = run("sweep", "c.anab", status=0)
    same(result.err.count("warning: "), 1, "warnings")
    holds(result.err, "`l`", "standard error")
    same(values(result.out), values(run("sweep", "-", given=CASES.replace("[1 nH, 2.2 nH, 10 nH]", "1 nH")
                                        .replace("cases l", "l"), status=0).out), "values of the first case")
    result = run("sweep", "c.anab", "--set", "l=10 nH", status=0)
    same(result.err, "", "standard error")
    same(values(result.out), values(run("sweep", "-", given=TWO_PORT, status=0).out), "values")


def test_a_file_for_each_case():
    write("c.anab", CASES)
    for words, given in ((("c.anab",), ""), (("-",), CASES)):
        result = run("sweep", *words, "-o", "out_{l}.s2p", given=given, status=0)
        same(result.out + result.err, "", "output")
        nothing_left(["c.anab", "out_1nH.s2p", "out_2.2nH.s2p", "out_10nH.s2p"])
        same(values(read("out_10nH.s2p")), values(run("sweep", "-", given=TWO_PORT).out), "values")
        check(read("out_1nH.s2p") != read("out_10nH.s2p"), "the cases do not differ")
        for name in os.listdir("."):
            if name.startswith("out_"):
                os.remove(name)


def test_cases_that_are_refused():
    write("c.anab", CASES)
    refused("sweep", "c.anab", "-o", "out_{ll}.s2p", text="ll", hint="l")
    refused("sweep", "c.anab", "-o", "out_{l}.s3p", text="the name says 3 ports")
    refused("sweep", "c.anab", "-o", "nowhere/out_{l}.s2p", text="cannot be written")
    nothing_left(["c.anab"])
    write("bad.anab", CASES.replace("a -- l -- b", "a -- 1 ohm*(1 nH/(l - 10 nH)) -- b"))
    refused("sweep", "bad.anab", "-o", "out_{l}.s2p", text="bad.anab:")
    nothing_left(["c.anab", "bad.anab"])


def test_cases_combine():
    more = CASES.replace("cases l", "cases r = [1 ohm, 2 ohm]\ncases l")
    write("c.anab", more.replace("l -- b", "l -- r -- b"))
    run("sweep", "c.anab", "-o", "{r}_{l}.s2p", status=0)
    same(len(os.listdir(".")), 7, "files")
    result = run("sweep", "c.anab", "-o", "x{r}.s2p", status=0)
    same(result.err.count("warning: "), 1, "warnings")
    holds(result.err, "`l`", "standard error")


# ---- sweep: files -----------------------------------------------------------------------


def test_names_that_contradict():
    write("s.anab", SPLITTER)
    refused("sweep", "s.anab", "-o", "x.s2p", text="x.s2p: error: the name says 2 ports", hint=".s3p")
    refused("sweep", "s.anab", "-o", "x.S4P", text="the name says 4 ports")
    refused("sweep", "s.anab", "-o", "x.ts", "--touchstone", "1", text="version 2")
    refused("sweep", "s.anab", "-o", "x.json", text="x.json", hint="--json")
    refused("sweep", "s.anab", "-o", "x.s3p", "--json", text="x.s3p")
    refused("sweep", "s.anab", "-o", "x.csv", "--json", text="x.csv")
    refused("sweep", "s.anab", "-o", "s.anab", text="the netlist itself")
    refused("sweep", "s.anab", "-o", "./s.anab", text="the netlist itself")
    same(read("s.anab"), SPLITTER, "the netlist")
    nothing_left(["s.anab"])
    run("sweep", "s.anab", "-o", "x.S3P", status=0)
    run("sweep", "s.anab", "-o", "x.s2p", "--touchstone", "2", status=0)
    run("sweep", "s.anab", "-o", "x.ts", status=0)
    holds(read("x.ts"), "[Version] 2.0")
    run("sweep", "s.anab", "-o", "x.json", "--json", status=0)


def test_a_wrong_netlist_leaves_the_file_alone():
    write("bad.anab", SPLITTER.replace("left -- iso", "left -- 10 mhz -- iso"))
    write("x.s3p", "as it was\n")
    refused("sweep", "bad.anab", "-o", "x.s3p", text="bad.anab:11:")
    same(read("x.s3p"), "as it was\n", "file")
    refused("sweep", "bad.anab", "-o", "new.s3p", text="bad.anab:11:")
    nothing_left(["bad.anab", "x.s3p"])


def test_places_that_cannot_be_written():
    write("s.anab", SPLITTER)
    refused("sweep", "s.anab", "-o", "nowhere/x.s3p", text="nowhere/x.s3p: error: cannot be written")
    refused("sweep", "s.anab", "-o", ".", text="cannot be written")
    refused("sweep", "s.anab", "-o", "", text="cannot be written")
    refused("sweep", "s.anab", "-o", "s.anab/x.s3p", text="cannot be written")


def test_a_file_keeps_its_rights_and_links():
    write("s.anab", SPLITTER)
    os.mkdir("there")
    write("there/x.s3p", "old")
    os.chmod("there/x.s3p", 0o640)
    os.symlink("there/x.s3p", "x.s3p")
    run("sweep", "s.anab", "-o", "x.s3p", status=0)
    check(os.path.islink("x.s3p"), "the link is gone")
    same(stat.S_IMODE(os.stat("there/x.s3p").st_mode), 0o640, "rights")
    same(read("there/x.s3p"), run("sweep", "s.anab").out, "file")
    same(os.listdir("there"), ["x.s3p"], "files")
    before = os.umask(0o027)
    run("sweep", "s.anab", "-o", "new.s3p", status=0)
    os.umask(before)
    same(stat.S_IMODE(os.stat("new.s3p").st_mode), 0o640, "rights of a new file")


def test_full_disk():
    write("s.anab", SPLITTER)
    for points in ("41", "100000"):
        words = ("sweep", "s.anab", "--sweep", f"1 MHz .. 1 GHz points {points}")
        result = run(*words, "-o", "/dev/full", status=3)
        holds(result.err, "/dev/full: error: cannot be written", "standard error")
        with open("/dev/full", "w") as full:
            result = run(*words, stdout=full, status=3)
        holds(result.err, "standard output: error: cannot be written", "standard error")
    for words in (("--help",), ("--version",), ("show", "s.anab"), ("format", "s.anab")):
        with open("/dev/full", "w") as full:
            run(*words, stdout=full, status=3)
    check(stat.S_ISCHR(os.stat("/dev/full").st_mode), "/dev/full has been replaced")


def limit_file_size():
    import resource
    signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
    resource.setrlimit(resource.RLIMIT_FSIZE, (1 << 20, 1 << 20))


def test_a_disk_that_gets_full_on_the_way():
    """A limit on the size of files stands for the disk: what is there is never a part."""
    write("s.anab", SPLITTER)
    words = ("sweep", "s.anab", "--sweep", "1 MHz .. 1 GHz points 100000")
    write("x.s3p", "as it was\n")
    result = run(*words, "-o", "x.s3p", status=3, preexec_fn=limit_file_size)
    holds(result.err, "x.s3p: error: cannot be written", "standard error")
    same(read("x.s3p"), "as it was\n", "file")
    nothing_left(["s.anab", "x.s3p"])


def test_incomplete_is_marked():
    """A failure after the first bytes: here the interrupt, on standard output."""
    write("s.anab", SPLITTER)
    with open("out", "wb") as out:
        p = start("sweep", "s.anab", "--sweep", MANY_POINTS, stdout=out)
        wait_for(lambda: os.path.getsize("out") > 0, "the first bytes")
        p.send_signal(signal.SIGINT)
        same(p.wait(timeout=TIMEOUT), 130, "exit status")
    text = read("out")
    check(text.endswith("\n! incomplete\n"), f"the end is {text[-80:]!r}")


def test_closed_standard_output():
    write("s.anab", SPLITTER)
    code = '"$0" sweep s.anab >&-'
    p = subprocess.run(["sh", "-c", code, ANABRANCH], capture_output=True, env=environment(), timeout=TIMEOUT)
    same(p.returncode, 3, "exit status")
    same(read("s.anab"), SPLITTER, "netlist")


def test_closed_pipe_is_silent():
    write("s.anab", SPLITTER)
    for command in (("sweep", "s.anab"), ("show", "s.anab", "--json")):
        p = start(*command, "--sweep", MANY_POINTS, stdout=subprocess.PIPE)
        p.stdout.read(100)
        p.stdout.close()
        same(p.stderr.read(), b"", "standard error")
        same(p.wait(timeout=TIMEOUT), 0, "exit status")


# ---- signals --------------------------------------------------------------------------------


def test_signals_leave_no_file():
    write("s.anab", SPLITTER)
    write("x.s3p", "as it was\n")
    for name, status in ((signal.SIGINT, 130), (signal.SIGTERM, 143), (signal.SIGHUP, 129)):
        p = start("sweep", "s.anab", "--sweep", MANY_POINTS, "-o", "x.s3p")
        wait_for(lambda: len(os.listdir(".")) == 3, "the unfinished file")
        time.sleep(0.1)
        before = time.monotonic()
        p.send_signal(name)
        same(p.wait(timeout=TIMEOUT), status, "exit status")
        check(time.monotonic() - before < 3, "it took long to stop")
        same(p.stderr.read(), b"", "standard error")
        same(read("x.s3p"), "as it was\n", "file")
        nothing_left(["s.anab", "x.s3p"])


def test_interrupt_between_cases():
    write("c.anab", CASES)
    p = start("sweep", "c.anab", "--sweep", MANY_POINTS, "-o", "out_{l}.s2p")
    wait_for(lambda: any(name.startswith(".") for name in os.listdir(".")), "the unfinished file")
    p.send_signal(signal.SIGINT)
    same(p.wait(timeout=TIMEOUT), 130, "exit status")
    check(not any(name.startswith(".") for name in os.listdir(".")), "an unfinished file is left")


def test_interrupt_while_waiting_for_input():
    for command in ("sweep", "show", "format"):
        p = subprocess.Popen([ANABRANCH, command, "-"], stdin=subprocess.PIPE, stdout=subprocess.PIPE,
                             stderr=subprocess.PIPE, env=environment())
        time.sleep(0.3)
        p.send_signal(signal.SIGINT)
        same(p.wait(timeout=TIMEOUT), 130, "exit status")
        same(p.stdout.read() + p.stderr.read(), b"", "output")


def test_interrupt_while_the_reader_sleeps():
    """The pipe is full and nobody reads: the write that hangs does not keep the command."""
    write("s.anab", SPLITTER)
    p = start("sweep", "s.anab", "--sweep", MANY_POINTS, stdout=subprocess.PIPE)
    time.sleep(1)
    p.send_signal(signal.SIGINT)
    same(p.wait(timeout=TIMEOUT), 130, "exit status")


def test_interrupt_of_a_background_job():
    """A shell without job control starts background jobs with SIGINT ignored."""
    write("s.anab", SPLITTER)
    code = f'"$0" sweep s.anab --sweep "{MANY_POINTS}" -o x.s3p & sleep 1; kill -INT $!; wait $!; echo $?'
    p = subprocess.run(["sh", "-c", code, ANABRANCH], capture_output=True, env=environment(), timeout=TIMEOUT)
    same(p.stdout, b"130\n", "exit status")
    nothing_left(["s.anab"])


# ---- messages --------------------------------------------------------------------------------


def test_layout_of_a_message():
    write("e.anab", SPLITTER.replace("line(sqrt(2)*z0, 90 deg @ f0)", "line(70.7, 90 deg @ f0)"))
    lines = refused("sweep", "e.anab", text="e.anab:5:").err.splitlines()
    head = re.match(r"e\.anab:5:(\d+): error: \S", lines[0])
    check(head, f"first line: {lines[0]}")
    gutter, source = lines[1].split(" | ", 1)
    same(gutter.strip(), "5", "line number")
    same(source, "arm = line(70.7, 90 deg @ f0)", "source line")
    mark = lines[2].split(" | ", 1)[1]
    same(mark.index("^"), int(head[1]) - 1, "place of the mark")
    same(source[mark.index("^"):mark.rindex("^") + 1], "70.7", "what is marked")
    same(lines[2].index("|"), lines[1].index("|"), "the gutters")


def test_second_place():
    write("e.anab", SPLITTER.replace("f0 = 1 GHz", "z0 = 1 GHz"))
    text = refused("sweep", "e.anab", text="e.anab:4:1: error: ").err
    check(re.search(r"^e\.anab:3:1: note: ", text, re.M), f"no second place:\n{text}")
    holds(text, "    3 | z0 = 50 ohm\n")
    holds(text, "    4 | z0 = 1 GHz\n")


def test_all_errors_at_one_go():
    write("e.anab", "port a, b: 50 ohm\na -- 10 mhz -- b\na -- lin(50 ohm, 1 m) -- b\na -- 3,3 pF -- b\n"
                    "sweep at 1 GHz\n")
    text = refused("sweep", "e.anab", text="").err
    same(sorted(re.findall(r"^e\.anab:(\d+):\d+: error: ", text, re.M)), ["2", "3", "4"], "lines with errors")


def test_more_errors_than_are_shown():
    bad = "".join(f"a -- {k} mhz -- b\n" for k in range(1, 31))
    text = run("sweep", "-", given="port a, b: 50 ohm\n" + bad + "sweep at 1 GHz\n", status=2).err
    same(len(re.findall(r"^-:\d+:\d+: error: ", text, re.M)), 20, "errors shown")
    last = text.splitlines()[-1]
    check("30" in last and "20" in last, f"the last line: {last}")


def test_marks_under_wide_characters_and_tabs():
    write("e.anab", 'port a, b: 50 ohm\ntitle "漢字" ;\ta -- 10 mhz -- b\nsweep at 1 GHz\n')
    lines = refused("sweep", "e.anab", text="e.anab:2:19: error: ").err.splitlines()
    source, mark = lines[1].split(" | ", 1)[1], lines[2].split(" | ", 1)[1]
    lacks(source, "\t", "source line")
    cells = source.index("10 mhz") + 2  # two characters are wide
    same(mark.index("^"), cells, "cells before the mark")


def test_long_lines_are_cut():
    many = "1 ohm -- " * 300
    write("e.anab", f"port a, b: 50 ohm\na -- {many}10 mhz -- {many}b\nsweep at 1 GHz\n")
    lines = refused("sweep", "e.anab", text="e.anab:2:").err.splitlines()
    check(len(lines[1]) <= 110, f"{len(lines[1])} columns")
    source, mark = lines[1].split(" | ", 1)[1], lines[2].split(" | ", 1)[1]
    holds(source[mark.index("^"):mark.rindex("^") + 1], "mhz")
    check(source.startswith("...") and source.endswith("..."), "not marked as cut")


def test_control_characters_stay_out_of_the_terminal():
    write("e.anab", "port a, b: 50 ohm\na -- 10 mhz -- b # \x1b[31m\nsweep at 1 GHz\n")
    lacks(refused("sweep", "e.anab", text="e.anab:2:").err, "\x1b", "standard error")


def test_files_that_cannot_be_read():
    os.mkdir("folder")
    refused("sweep", "nowhere.anab", text="nowhere.anab")
    refused("show", "nowhere.anab", text="nowhere.anab")
    refused("format", "nowhere.anab", text="nowhere.anab: error: cannot be read")
    refused("sweep", "folder", text="folder")
    refused("format", "folder", text="folder: error: cannot be read")


def test_warnings_do_not_stop():
    result = run("sweep", "-", given="port a, b: 50 ohm\na -- -10 ohm -- b\nsweep at 1 GHz\n", status=0)
    check(re.search(r"^-:2:\d+: warning: ", result.err, re.M), f"no warning:\n{result.err}")
    holds(result.err, "    2 | a -- -10 ohm -- b\n")
    same(len(values(result.out)), 9, "numbers")


# ---- the terminal ---------------------------------------------------------------------------


def test_colour_only_on_a_terminal():
    write("e.anab", SPLITTER.replace("f0 = 1 GHz", "f0 = 1 mhz"))
    lacks(run("sweep", "e.anab", status=2).err, "\033", "standard error")
    status, shown = run_on_terminal("sweep", "e.anab")
    same(status, 2, "exit status")
    holds(shown, "\033[1;31m")
    bare = re.sub(r"\033\[[0-9;]*m", "", shown).replace("\r\n", "\n")
    same(bare, run("sweep", "e.anab").err, "text without colours")
    for env in (environment(NO_COLOR="1"), environment(TERM="dumb")):
        lacks(run_on_terminal("sweep", "e.anab", env=env)[1], "\033")
    holds(run_on_terminal("sweep", "e.anab", env=environment(NO_COLOR=""))[1], "\033")


def test_narrow_terminal():
    write("e.anab", "port a, b: 50 ohm\na -- " + "1 ohm -- " * 20 + "10 mhz -- b\nsweep at 1 GHz\n")
    shown = run_on_terminal("sweep", "e.anab", columns=60, env=environment(NO_COLOR="1"))[1]
    check(len(shown.splitlines()[1]) <= 60, shown)


def work_for_seconds(run_it):
    """Sweeps more and more points until that takes 2 s, a bar being due after one. Returns the last result."""
    for points in (100000, 300000, 1000000, 3000000, 10000000):
        before = time.monotonic()
        result = run_it("sweep", "s.anab", "--sweep", f"1 MHz .. 1 GHz points {points}", "-o", "/dev/null")
        if time.monotonic() - before > 2:
            break
    return result


def test_progress():
    write("s.anab", SPLITTER)
    status, shown = work_for_seconds(run_on_terminal)
    same(status, 0, "exit status")
    drawn = re.findall(r"sweep \[([= ]*)\] +(\d+) %, (.*?) left", shown)
    check(drawn, f"no progress: {shown!r}")
    shares = [int(share) for _, share, _ in drawn]
    same(shares, sorted(shares), "shares")
    check(shown.endswith("\r\033[K"), f"the bar stays: {shown[-40:]!r}")
    check(all(re.match(r"\d+ (s|min|h)|\?", left) for _, _, left in drawn), "no time left")


def test_no_progress_where_none_is_due():
    write("s.anab", SPLITTER)
    same(run_on_terminal("sweep", "s.anab")[1], "", "terminal, quick work")
    result = work_for_seconds(run)
    same((result.status, result.err), (0, ""), "no terminal")
    lacks(run_on_terminal("sweep", "s.anab", stdout_too=True)[1], "\033")


def test_interrupt_takes_the_bar_away():
    write("s.anab", SPLITTER)
    master, slave = pty.openpty()
    p = subprocess.Popen([ANABRANCH, "sweep", "s.anab", "--sweep", MANY_POINTS, "-o", "/dev/null"],
                         stdin=subprocess.DEVNULL, stderr=slave, env=environment())
    os.close(slave)
    shown = b""
    try:
        while select.select([master], [], [], TIMEOUT)[0]:
            shown += os.read(master, 65536)
            if b" %" in shown:
                p.send_signal(signal.SIGINT)
    except OSError:  # the other end has gone
        os.close(master)
    same(p.wait(timeout=TIMEOUT), 130, "exit status")
    check(shown.endswith(b"\r\033[K"), f"the bar stays: {shown[-60:]!r}")


# ---- show --------------------------------------------------------------------------------------


def test_show():
    write("s.anab", SPLITTER)
    result = run("show", "s.anab", status=0)
    same(result.err, "", "standard error")
    lines = result.out.splitlines()
    same(lines[0], "Two-way splitter, quarter-wave sections", "title")
    holds(result.out, "ports: 3")
    check(re.search(r"^ +1  common +50 ohm +at common$", result.out, re.M), "no first port")
    holds(result.out, "parts: 3 (2 line, 1 resistor)")
    check(re.search(r"^  iso +resistor +left right +s\.anab:11 +100 ohm$", result.out, re.M), "no part `iso`")
    check(re.search(r"^  - +line +common left +s\.anab:9 +70\.7\d+ ohm, 90 deg @ 1 GHz", result.out, re.M),
          f"no line:\n{result.out}")
    holds(result.out, "frequencies: 41, 500 MHz .. 1.5 GHz")


def test_show_needs_no_sweep():
    text = run("show", "-", given="port a, b: 50 ohm\na -- 1 nH -- 2 ohm -- b\n", status=0).out
    holds(text, "frequencies: 0")
    check(re.search(r"#\d+", text), "the node without a name has no number")


def test_show_json():
    write("s.anab", SPLITTER + "left -- 1 ohm -- 1 nH -- right\n")
    data = json.loads(run("show", "s.anab", "--json", status=0).out)
    same(data["title"], "Two-way splitter, quarter-wave sections", "title")
    same([p["name"] for p in data["ports"]], ["common", "left", "right"], "ports")
    same(data["ports"][1], {"name": "left", "reference_ohm": [50, 0], "nodes": ["left", "ground"]}, "a port")
    same(data["nodes"][:1], ["ground"], "ground")
    same(len(data["nodes"]), 5, "nodes")
    same(len(set(data["nodes"])), 5, "different nodes")
    iso = [p for p in data["parts"] if p["label"] == "iso"]
    same(iso, [{"label": "iso", "kind": "resistor", "nodes": ["left", "right"], "values": "100 ohm",
                "file": "s.anab", "line": 11}], "a part")
    same(data["kinds"], {"line": 2, "resistor": 2, "inductor": 1}, "kinds")
    same(len(data["frequencies_hz"]), 41, "frequencies")
    same(data["cases"], [], "cases")
    check("statistics" not in data, "statistics unasked")


def test_show_csv():
    write("s.anab", SPLITTER)
    rows = list(csv.reader(io.StringIO(run("show", "s.anab", "--csv", status=0).out)))
    same(rows[0], ["label", "kind", "nodes", "values", "file", "line"], "head")
    same(rows[3], ["iso", "resistor", "left right", "100 ohm", "s.anab", "11"], "a part")


def test_show_statistics():
    write("s.anab", SPLITTER)
    text = run("show", "s.anab", "--statistics", status=0).out
    for word in ("compiled in", "unknowns", "slots", "operations", "pivoted points", "kernel"):
        holds(text, word)
    check(re.search(r"^  points +41$", text, re.M), f"not 41 points:\n{text}")
    data = json.loads(run("show", "s.anab", "--statistics", "--json", status=0).out)["statistics"]
    same(data["points"], 41, "points")
    check(data["unknowns"] >= 3 and data["compile_seconds"] >= 0, f"{data}")
    plain = run("show", "s.anab", "--statistics", status=0, env=environment(ANB_KERNEL="plain")).out
    check(re.search(r"kernel +plain", plain), "not the kernel that was asked for")
    refused("show", "s.anab", "--statistics", "--csv", text="--csv", hint="--json")


def test_show_overrides_and_cases():
    write("c.anab", CASES)
    holds(run("show", "c.anab", status=0).out, "l = 1 nH, 2.2 nH, 10 nH")
    same(json.loads(run("show", "c.anab", "--json").out)["cases"],
         [{"name": "l", "values": ["1 nH", "2.2 nH", "10 nH"]}], "cases")
    text = run("show", "c.anab", "--set", "l=7 nH", "--sweep", "at 2 GHz", status=0).out
    holds(text, "7 nH")
    holds(text, "frequencies: 1, 2 GHz")


def test_show_to_a_file():
    write("s.anab", SPLITTER)
    run("show", "s.anab", "-o", "x.txt", status=0)
    same(read("x.txt"), run("show", "s.anab").out, "file")
    refused("show", "s.anab", "-o", "s.anab", text="the netlist itself")
    same(read("s.anab"), SPLITTER, "netlist")


def test_show_of_an_error():
    refused("show", "-", given=SPLITTER.replace("f0 = 1 GHz", "f0 = 1 ghz"), text="-:4:")


# ---- format ------------------------------------------------------------------------------------


MANGLED = SPLITTER.replace("z0 = 50 ohm", "z0=50   ohm").replace("common -- arm -- l", "common--arm\t--  l")


def test_format_prints():
    result = run("format", "-", given=MANGLED, status=0)
    same(result.err, "", "standard error")
    same(result.out, run("format", "-", given=SPLITTER).out, "layout of the mangled text")
    holds(result.out, "# the isolation resistor")
    same(run("format", "-", given=result.out).out, result.out, "layout of the layout")


def test_format_changes_no_result():
    laid_out = run("format", "-", given=MANGLED, status=0).out
    same(run("sweep", "-", given=laid_out).out, run("sweep", "-", given=MANGLED).out, "sweep")


def test_format_into_the_same_file():
    write("s.anab", MANGLED)
    wanted = run("format", "s.anab", status=0).out
    run("format", "s.anab", "-o", "s.anab", status=0)
    same(read("s.anab"), wanted, "file")
    nothing_left(["s.anab"])


def test_format_check():
    wanted = run("format", "-", given=MANGLED, status=0).out
    write("good.anab", wanted)
    write("bad.anab", MANGLED)
    result = run("format", "--check", "good.anab", "bad.anab", "good.anab", status=1)
    same(result.out, "bad.anab\n", "list")
    same(run("format", "--check", "good.anab", status=0).out, "", "list")
    same(read("bad.anab"), MANGLED, "file")
    write("wrong.anab", "port a b\n")
    result = run("format", "--check", "wrong.anab", "bad.anab", status=2)
    same(result.out, "bad.anab\n", "list")
    holds(result.err, "wrong.anab:1:", "standard error")


def test_format_write():
    wanted = run("format", "-", given=MANGLED, status=0).out
    write("good.anab", wanted)
    write("bad.anab", MANGLED)
    os.utime("good.anab", (1, 1))
    result = run("format", "--write", "good.anab", "bad.anab", status=0)
    same(result.out + result.err, "", "output")
    same(read("bad.anab"), wanted, "file")
    same(os.stat("good.anab").st_mtime, 1.0, "time of a file that needed nothing")
    nothing_left(["good.anab", "bad.anab"])


def test_format_of_an_error_writes_nothing():
    write("wrong.anab", "port a b\n")
    refused("format", "wrong.anab", "-o", "wrong.anab", text="wrong.anab:1:")
    run("format", "wrong.anab", "--write", status=2)
    same(read("wrong.anab"), "port a b\n", "file")


def test_format_calls_that_are_wrong():
    refused("format", "a", "b", text="several files", hint="--write")
    refused("format", "--check", "--write", "a", text="exclude")
    refused("format", "--check", "-o", "x", "a", text="--check")
    refused("format", "--write", "-", text="standard input")


# ---- all of them -------------------------------------------------------------------------------


def run_test(name, function):
    """In an empty folder of its own. Returns what is wrong, or None."""
    folder = tempfile.mkdtemp(prefix="anabranch-cli-")
    os.chdir(folder)
    try:
        function()
        return None
    except (Failed, OSError, ValueError, LookupError, subprocess.SubprocessError) as e:
        return f"{type(e).__name__}: {e}" if not isinstance(e, Failed) else str(e)
    finally:
        os.chdir("/")
        shutil.rmtree(folder)


def main(wanted):
    tests = {name[5:]: f for name, f in globals().items() if name.startswith("test_")}
    passed = failed = 0
    for name, function in tests.items():
        if wanted and not any(word in name for word in wanted):
            continue
        wrong = run_test(name, function)
        passed, failed = passed + (wrong is None), failed + (wrong is not None)
        if wrong is not None:
            print(f"FAILED {name}\n    " + wrong[:1500].replace("\n", "\n    "), flush=True)
    print(f"{passed} passed, {failed} failed")
    return 0 if passed and not failed else 1


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
