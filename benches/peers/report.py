"""Medians, tables and the files they go to. Convention: seconds; a table is a list of rows of equal length, the first its heading."""

import json
import platform
import statistics
from importlib import metadata
from pathlib import Path

RESULTS = Path(__file__).resolve().parent.parent / "results"


def median(values):
    return statistics.median(values)


def spread(values):
    """Largest over smallest: how quiet the machine was."""
    return max(values) / min(values)


def table(rows):
    """The rows as a Markdown table."""
    lines = [" | ".join(str(cell) for cell in row) for row in rows]
    rule = " | ".join("---" for _ in rows[0])
    return "\n".join(f"| {line} |" for line in [lines[0], rule, *lines[1:]])


def machine():
    """What the figures were measured on."""
    cpu = next((l.split(":")[1].strip() for l in open("/proc/cpuinfo") if l.startswith("model name")), platform.machine())
    flags = next((l.split(":")[1].split() for l in open("/proc/cpuinfo") if l.startswith("flags")), [])
    widest = next((f for f in ("avx512f", "avx2") if f in flags), "neither AVX2 nor AVX-512")
    return {"processor": cpu, "widest_vector_unit": widest, "load_average_1_min": float(open("/proc/loadavg").read().split()[0])}


def versions(*packages):
    return {package: metadata.version(package) for package in packages}


def write(name, data, text):
    """Writes `results/NAME.json` and `results/NAME.md`, and prints the text."""
    RESULTS.mkdir(exist_ok=True)
    (RESULTS / f"{name}.json").write_text(json.dumps(data, indent=1) + "\n")
    (RESULTS / f"{name}.md").write_text(text + "\n")
    print(text)
