"""One peer's answers: `solver_peer.py PEER FOLDER` reads the system in the folder and answers every line it reads with the times of one
run from analysis to solution, in the words of our own program. Convention: seconds of the library's calls; memory in bytes.
"""

import importlib
import json
import sys
from pathlib import Path

from system import System

PEERS = {
    "pardiso": ("pardiso", "Pardiso"),
    "mumps": ("mumps_library", "Mumps"),
    "umfpack": ("umfpack", "Umfpack"),
    "superlu": ("superlu", "SuperLu"),
}


def status(key):
    lines = Path("/proc/self/status").read_text().splitlines()
    return 1024 * next(int(line.split()[1]) for line in lines if line.startswith(key))


def run(peer, system):
    """Times, memory and errors of one run."""
    solver = peer(system)
    # 5: reset the peak of resident memory, see proc(5).
    Path("/proc/self/clear_refs").write_text("5")
    before = status("VmRSS:")
    answer = {"unknowns": system.n, "analysis_s": solver.analyse(), "factor_s": solver.factor()}
    answer["solve_s"], x = solver.solve(system.rhs[:, :1])
    answer["memory_bytes"] = status("VmHWM:") - before
    answer["refactor_s"] = solver.refactor()
    answer["solve_many_s"], many = solver.solve(system.rhs)
    answer.update(solver.facts())
    answer["backward_error"] = system.backward_error(x, system.rhs[:, :1])
    answer["backward_error_many"] = system.backward_error(many, system.rhs)
    solver.close()
    return answer


def main(name, folder):
    module, kind = PEERS[name]
    peer = getattr(importlib.import_module(module), kind)
    system = System(folder)
    for _ in sys.stdin:
        print(json.dumps(run(peer, system)), flush=True)


if __name__ == "__main__":
    main(*sys.argv[1:])
