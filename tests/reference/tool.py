"""Runs the tool on a netlist and reads the Touchstone text that it prints (`sweep FILE`, RI, full matrix)."""
import os
import subprocess


class Failed(Exception):
    pass


def binary():
    path = os.environ.get("ANABRANCH")
    if not path:
        raise SystemExit("set ANABRANCH to the tool's path")
    return path


def sweep(text, arguments=()):
    """-> (frequencies in Hz, references in ohm, matrices[point][to][from])"""
    try:
        p = subprocess.run([binary(), "sweep", "-", *arguments], input=text.encode(), capture_output=True,
                           timeout=600)
    except (OSError, subprocess.TimeoutExpired) as e:
        raise Failed(str(e)) from e
    if p.returncode:
        raise Failed(f"exit status {p.returncode}: {p.stderr.decode('utf-8', 'replace').strip()[:400]}")
    try:
        return parse(p.stdout.decode())
    except (ValueError, IndexError) as e:
        raise Failed(f"output: {e}") from e


def parse(text):
    references, words, version2, data, ports, upper = [50.0], [], False, True, None, "21_12"
    for line in text.splitlines():
        line = line.split("!")[0].strip()
        if line.startswith("#"):
            option = line[1:].split()
            if [w.upper() for w in option[:4]] != ["HZ", "S", "RI", "R"]:
                raise Failed(f"option line {line!r}")
            references = [float(w) for w in option[4:]]
        elif line.startswith("["):
            key, rest = line[1:].split("]", 1)
            data = key == "Network Data"
            version2 = True
            if key == "Number of Ports":
                ports = int(rest)
            elif key == "Reference":
                references = [float(w) for w in rest.split()]
            elif key == "Two-Port Data Order":
                upper = rest.strip()
            elif key == "End":
                break
        elif version2 and not data:
            references += [float(w) for w in line.split()]
        elif line:
            words.append([float(w) for w in line.split()])
    ports = ports or _ports(words)
    return _matrices([w for line in words for w in line], ports, references, version2 and upper == "12_21")


def _ports(lines):
    """Version 1 does not say how many: a point begins where the count of numbers is odd."""
    count = len(lines[0])
    for line in lines[1:]:
        if len(line) % 2:
            break
        count += len(line)
    ports = round(((count - 1) / 2) ** 0.5)
    if 1 + 2 * ports * ports != count:
        raise Failed(f"{count} numbers to a point")
    return ports


def _matrices(words, ports, references, by_rows):
    size = 1 + 2 * ports * ports
    if not words or len(words) % size:
        raise Failed(f"{len(words)} numbers with {ports} ports")
    frequencies, out = [], []
    for k in range(0, len(words), size):
        frequencies.append(words[k])
        values = [complex(words[i], words[i + 1]) for i in range(k + 1, k + size, 2)]
        m = [values[i * ports:(i + 1) * ports] for i in range(ports)]
        if ports == 2 and not by_rows:
            m[0][1], m[1][0] = m[1][0], m[0][1]
        out.append(m)
    return frequencies, (references * ports)[:ports] if len(references) == 1 else references, out
