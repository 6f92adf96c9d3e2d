"""Does what the README says, block by block, as somebody does who has just cloned the repository.

Usage: python newcomer.py CLONE, outside of pytest and with no package but Python's own. Shell
blocks run at the root of the clone. The first of them makes the environment and ends by starting
Python; the blocks of Python run there, all in one session with nothing imported beforehand, and
later shell blocks beside it. Extras are there where the page installs them and not before.
"""

from __future__ import annotations

import doctest
import os
import re
import subprocess
import sys
import time
from pathlib import Path

BLOCK = re.compile(r"^```(sh|python)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
FLAGS = doctest.ELLIPSIS | doctest.NORMALIZE_WHITESPACE
PYTHON = "venv/bin/python"


def blocks(page: str) -> list[tuple[int, str, str]]:
    """Return line, language and text of each block."""
    return [(page[: m.start()].count("\n") + 1, m[1], m[2]) for m in BLOCK.finditer(page)]


def shell(commands: str) -> None:
    """Run a shell block; its output is of interest only where it fails."""
    done = subprocess.run(  # the page of this repository
        ["/bin/bash", "-euo", "pipefail", "-c", commands],
        stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        check=False,
    )
    if done.returncode != 0:
        sys.exit(f"{commands}\n{done.stdout}")


def session(page: Path, rest: list[tuple[int, str, str]]) -> int:
    """Go through the blocks after the first in this very session; returns failed examples."""
    names: dict[str, object] = {"__name__": "__main__"}
    runner = doctest.DocTestRunner(optionflags=FLAGS)
    before = time.monotonic()
    for number, (line, language, text) in enumerate(rest):
        if language == "sh":
            shell(text)
            continue
        test = doctest.DocTestParser().get_doctest(text, {}, page.name, str(page), line)
        test.globs = names  # no copy: one block builds on the other
        runner.run(test, clear_globs=False)
        if number == 0:
            print(f"first answer {time.monotonic() - before:.1f} s after the start of Python")
    result = runner.summarize(verbose=False)
    print(f"{page.name}: {result.attempted} examples, {result.failed} failed")
    return result.failed


def main() -> int:
    """Install and go through the page."""
    root = Path(sys.argv[1]).resolve()
    page = root / "clients" / "python" / "README.md"
    os.chdir(root)
    (_, language, first), *rest = blocks(page.read_text(encoding="utf-8"))
    if sys.argv[2:] == ["session"]:
        return 1 if session(page, rest) else 0
    if language != "sh" or not first.rstrip().endswith(PYTHON):
        sys.exit(f"the first block of {page} does not end by starting {PYTHON}")
    before = time.monotonic()
    shell(first)
    print(f"installed in {time.monotonic() - before:.0f} s")
    # -P: as at a prompt, nothing beside this file can be imported.
    command = [PYTHON, "-P", str(Path(__file__).resolve()), str(root), "session"]
    return subprocess.run(command, check=False).returncode


if __name__ == "__main__":
    sys.exit(main())
