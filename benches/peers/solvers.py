"""Our sparse solver beside MKL PARDISO, MUMPS, UMFPACK and SuperLU on our own matrices, in turns; and a whole field solve beside
scikit-fem with PARDISO on the same mesh. Two threads, but one for UMFPACK and SuperLU, which a threaded BLAS makes slower (SuperLU by
far). Writes results/solvers.{json,md}.

Every solver runs in a process of its own that waits while the others run, is given the same matrix and right-hand sides, and times its
library's calls alone. A solution must satisfy its equations to 1e-10, componentwise; losses must agree to 1e-8.

Usage: solvers.py PROGRAM [SYSTEM...], PROGRAM being the built `systems`; UMFPACK is left out where its library is not found.
"""

import ctypes
import math
import os
import subprocess
import sys
import tempfile
from contextlib import ExitStack
from pathlib import Path

from report import machine, median, spread, table, versions, write
from served import Served

HERE = Path(__file__).resolve().parent
OURS = "coilwright"
PEERS = {"pardiso": "MKL PARDISO", "mumps": "MUMPS", "umfpack": "UMFPACK", "superlu": "SuperLU"}
STEPS = ["analysis_s", "factor_s", "refactor_s", "solve_s", "solve_many_s"]
BACKWARD_ERROR_LIMIT = 1e-10
LOSS_LIMIT = 1e-8
SERIAL = ("umfpack", "superlu")
LARGEST_FOR_SUPERLU = 250_000


def environment(threads=2):
    """As many threads for all libraries; nothing that keeps a BLAS from its best kernels."""
    kept = {key: value for key, value in os.environ.items() if key not in ("OPENBLAS_CORETYPE", "OPENBLAS_L2_SIZE")}
    names = ["RAYON_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS", "OPENBLAS_NUM_THREADS"]
    return {**kept, **dict.fromkeys(names, str(threads)), "MKL_DYNAMIC": "FALSE"}


def has_umfpack():
    try:
        ctypes.CDLL("libumfpack.so.5")
    except OSError:
        return False
    return True


def repeats(unknowns):
    return 9 if unknowns < 100_000 else 5 if unknowns < 500_000 else 3


def summary(runs):
    """Medians of the times, the largest memory, the last of everything else."""
    steps = {step: [run[step] for run in runs if run.get(step) is not None] for step in [*STEPS, "checked_solve_s", "assembly_s"]}
    medians = {step: median(times) for step, times in steps.items() if times}
    first = [sum(run.get(step) or 0.0 for step in ("analysis_s", "factor_s", "solve_s")) for run in runs]
    return {
        **{key: value for key, value in runs[-1].items() if key not in steps},
        **medians,
        "first_solve_s": median(first),
        "spread": spread(first),
        "runs": len(runs),
        "memory_bytes": max(run["memory_bytes"] or 0 for run in runs),
    }


def compare(program, name, folder, peers):
    """All solvers on one system, in turns."""
    with ExitStack() as stack:
        solvers = {OURS: stack.enter_context(Served([program, "serve", name], environment()))}
        runs = {OURS: [solvers[OURS].ask("run")]}
        unknowns = runs[OURS][0]["unknowns"]
        for peer in peers:
            if peer != "superlu" or unknowns <= LARGEST_FOR_SUPERLU:
                command = [sys.executable, HERE / "solver_peer.py", peer, folder]
                threads = environment(1 if peer in SERIAL else 2)
                solvers[PEERS[peer]] = stack.enter_context(Served(command, threads))
                runs[PEERS[peer]] = [solvers[PEERS[peer]].ask("run")]
        # The first run of each warms up the libraries, and alone shows how much memory is new.
        warm = {solver: [] for solver in runs}
        for _ in range(repeats(unknowns)):
            for solver in solvers:
                warm[solver].append(solvers[solver].ask("run"))
    results = {}
    for solver, own in runs.items():
        results[solver] = summary(warm[solver])
        results[solver]["memory_bytes"] = own[0]["memory_bytes"]
        worst = max(results[solver]["backward_error"], results[solver]["backward_error_many"])
        assert worst < BACKWARD_ERROR_LIMIT, f"{solver} on {name}: backward error {worst}"
    return results


def whole(program, folder, runs=5):
    """Field solves from the mesh to the losses, in turns."""
    with ExitStack() as stack:
        ours = stack.enter_context(Served([program, "serve", "whole"], environment()))
        peer = stack.enter_context(Served([sys.executable, HERE / "field_peer.py", folder], environment()))
        ours.ask("run"), peer.ask("run")
        pairs = [(ours.ask("run"), peer.ask("run")) for _ in range(runs)]
    for own, other in pairs:
        for loss in ("bar_w", "coil_w"):
            off = abs(own[loss] - other[loss]) / other[loss]
            assert off < LOSS_LIMIT, f"{loss}: {own[loss]} W here, {other[loss]} W there, {off:.1e} apart"
    own, other = pairs[-1]
    times = [[pair[k]["seconds"] for pair in pairs] for k in (0, 1)]
    return {
        "unknowns": own["unknowns"],
        "ours_s": median(times[0]),
        "peer_s": median(times[1]),
        "mesh_s": median([pair[0]["mesh_s"] for pair in pairs]),
        "loss_difference": max(abs(own[k] - other[k]) / other[k] for k in ("bar_w", "coil_w")),
    }


def seconds(value):
    return "-" if value is None else f"{value:.4f}"


def ratio(peer, ours):
    return "-" if peer is None or ours is None else f"{peer / ours:.2f}"


def megabytes(value):
    return "-" if not value else f"{value / 1e6:.0f}"


def times_table(results):
    rows = [[
        "system", "unknowns", "solver", "analysis", "factor", "refactor", "solve", "solve 8", "spread", "fill /1e6", "memory MB",
        "own count MB", "backward error", "of 8", "peer/ours: first", "refactor", "solve", "solve 8", "memory",
    ]]  # fmt: skip
    for name, solvers in results.items():
        ours = solvers[OURS]
        for solver, s in solvers.items():
            keys = ("first_solve_s", "refactor_s", "solve_s", "solve_many_s", "memory_bytes")
            ratios = [ratio(s.get(k), ours.get(k)) if solver != OURS else "" for k in keys]
            rows.append([
                name, s["unknowns"], solver, *(seconds(s.get(step)) for step in STEPS), f"{s['spread']:.2f}",
                f"{s['fill'] / 1e6:.2f}", megabytes(s["memory_bytes"]), megabytes(s.get("own_memory_bytes")),
                f"{s['backward_error']:.1e}", f"{s['backward_error_many']:.1e}", *ratios,
            ])  # fmt: skip
    return table(rows)


def growth_table(results):
    """Exponent x of a cost that grows as n^x, from the smallest to the largest field system of second order."""
    ends = sorted((s[OURS]["unknowns"], name) for name, s in results.items() if name.startswith("field-") and "p1" not in name)
    if len(ends) < 2:
        return "(needs two field systems)"
    (small, first), (large, last) = ends[0], ends[-1]
    rows = [["solver", f"from {small} to {large}: analysis", "factor", "refactor", "solve", "solve 8", "memory"]]
    for solver in results[first]:
        if solver in results[last]:
            a, b = results[first][solver], results[last][solver]
            pairs = [(a.get(key), b.get(key)) for key in [*STEPS, "memory_bytes"]]
            exponents = [math.log(y / x) / math.log(large / small) if x and y else None for x, y in pairs]
            rows.append([solver, *("-" if e is None else f"{e:.2f}" for e in exponents)])
    return table(rows)


def ours_table(results):
    rows = [["system", "assembly", "assembly/factor", "checked solve", "error after refinement"]]
    for name, solvers in results.items():
        s = solvers[OURS]
        share = ratio(s.get("assembly_s"), s["factor_s"])
        rows.append([name, seconds(s.get("assembly_s")), share, seconds(s["checked_solve_s"]), f"{s['checked_error']:.1e}"])
    return table(rows)


def whole_table(w):
    rows = [
        ["unknowns", "ours, mesh to losses", "scikit-fem + PARDISO", "peer/ours", "our mesh besides", "losses differ by"],
        [
            w["unknowns"], seconds(w["ours_s"]), seconds(w["peer_s"]), ratio(w["peer_s"], w["ours_s"]), seconds(w["mesh_s"]),
            f"{w['loss_difference']:.1e}",
        ],
    ]  # fmt: skip
    return table(rows)


def report(data):
    results = data["results"]
    mkl = next((s[PEERS["pardiso"]] for s in results.values() if PEERS["pardiso"] in s), {})
    facts = {**data["machine"], **data["versions"], "MKL vector unit": mkl.get("vector_unit", "-")}
    parts = [
        "# Sparse solvers",
        "Seconds, two threads (UMFPACK and SuperLU: one), medians of runs in turns; spread is the slowest first solve over the fastest. `first` is analysis, "
        "factor and solve together. `memory` is the growth of resident memory up to the first solution, `own count` what the solver "
        "itself reports. Errors are componentwise backward errors of plain solves. " + data["left_out"],
        ", ".join(f"{key} {value}" for key, value in facts.items()),
        times_table(results),
        "## Growth with the number of unknowns",
        growth_table(results),
        "## Ours alone",
        ours_table(results),
    ]
    if "whole" in data:
        parts += ["## A whole field solve", whole_table(data["whole"])]
    return "\n\n".join(parts)


def main(program, *wanted):
    listed = subprocess.run([program, "list"], check=True, capture_output=True, text=True).stdout.split()
    peers = [peer for peer in PEERS if peer != "umfpack" or has_umfpack()]
    data = {
        "machine": machine(),
        "versions": versions("mkl", "python-mumps", "scipy", "scikit-fem"),
        "left_out": "" if "umfpack" in peers else "UMFPACK could not be installed on this system.",
        "results": {},
    }
    with tempfile.TemporaryDirectory() as scratch:
        for name in [*listed, "whole"]:
            if wanted and name not in wanted:
                continue
            folder = Path(scratch) / name
            subprocess.run([program, "write", name, folder], check=True)
            if name == "whole":
                data["whole"] = whole(program, folder)
            else:
                data["results"][name] = compare(program, name, folder, peers)
    write("solvers", data, report(data))


if __name__ == "__main__":
    main(*sys.argv[1:])
