"""A program or script that answers one line of text with one line of JSON, again and again.

Convention: the other side measures the time it answers with; this side only waits, so that it costs nothing meanwhile.
"""

import json
import subprocess


class Served:
    """A child process; use it in a `with` statement."""

    def __init__(self, command, environment):
        self.command = [str(word) for word in command]
        self.process = subprocess.Popen(
            self.command, env=environment, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True
        )

    def __enter__(self):
        return self

    def __exit__(self, *_):
        self.process.stdin.close()
        self.process.wait()

    def ask(self, line):
        """Sends a line and waits for the answer."""
        self.process.stdin.write(line + "\n")
        self.process.stdin.flush()
        answer = self.process.stdout.readline()
        if not answer:
            raise RuntimeError(f"{' '.join(self.command)}: ended with {self.process.wait()} on `{line}`")
        return json.loads(answer)
