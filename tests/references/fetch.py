"""Fetches outside data once: every passport that names an archive gets its files under .testdata/.

A passport names an archive and its files in lines of the form ``- archive: `name==version``` and
``- file: `path or pattern```.  The archive is downloaded without dependencies, only the named
files are unzipped, and nothing of it is ever installed or imported.
"""

from __future__ import annotations

import fnmatch
import re
import subprocess
import sys
import tempfile
import zipfile
from pathlib import Path

REFERENCES = Path(__file__).parent
TARGET = REFERENCES.parents[1] / ".testdata"
NAMED = re.compile(r"^\s*- (archive|file): `([^`]+)`\s*$", re.MULTILINE)


def main() -> int:
    """Fetch what is not there yet."""
    for passport in sorted(REFERENCES.glob("*/passport.md")):
        named = NAMED.findall(passport.read_text(encoding="utf-8"))
        archives = [text for kind, text in named if kind == "archive"]
        patterns = [text for kind, text in named if kind == "file"]
        stamp = TARGET / passport.parent.name / "fetched.txt"
        contents = "\n".join(archives + patterns) + "\n"
        if not archives or (stamp.is_file() and stamp.read_text(encoding="utf-8") == contents):
            continue
        for archive in archives:
            if not fetch(archive, patterns, TARGET / passport.parent.name):
                print(f"{passport}: could not fetch the archive it names", file=sys.stderr)
                return 1
        stamp.write_text(contents, encoding="utf-8")
    return 0


def fetch(archive: str, patterns: list[str], target: Path) -> bool:
    """Download one archive, and put the files that fit a pattern into ``target`` by their names."""
    with tempfile.TemporaryDirectory() as room:
        pip = [sys.executable, "-m", "pip", "download", "--quiet", "--disable-pip-version-check"]
        done = subprocess.run(
            [*pip, "--no-deps", "--only-binary", ":all:", "--dest", room, archive], check=False
        )
        if done.returncode:
            return False
        (wheel,) = Path(room).glob("*.whl")
        target.mkdir(parents=True, exist_ok=True)
        with zipfile.ZipFile(wheel) as box:
            inside = box.namelist()
            for pattern in patterns:
                wanted = fnmatch.filter(inside, pattern)
                if not wanted:
                    print(f"no {pattern} in the archive", file=sys.stderr)
                    return False
                for name in wanted:
                    (target / Path(name).name).write_bytes(box.read(name))
    return True


if __name__ == "__main__":
    sys.exit(main())
