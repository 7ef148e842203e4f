"""Makes every table of tests/truth that a script makes, or checks that the committed ones are what the scripts make.

    python tests/truth/make_all.py            rewrites the tables
    python tests/truth/make_all.py --check    makes them in a temporary folder and compares; exit 1 on a difference

The libraries are those of requirements.txt. Nothing is fetched. Tables that say "kept by hand" are inputs or
literal published values and are left alone.
"""

import argparse
import importlib
import os
import subprocess
import sys
import tempfile
import time
from importlib.metadata import version

HERE = os.path.dirname(os.path.abspath(__file__))
sys.path.insert(0, HERE)
import table  # noqa: E402

MAKERS = ["make_times", "make_days", "make_frames", "make_sky", "make_ion", "make_conic", "make_grain", "make_season", "make_night"]

# The ephemeris rows are JPL positions read back by another library: 1e-12 relative, 1e-13 au.
EPHEMERIS = os.path.join(HERE, "ephemeris", "make_rows.py")
EPHEMERIS_TOLERANCE = (1e-12, 1e-13)


def warn_of_other_versions():
    with open(os.path.join(HERE, "requirements.txt")) as wanted:
        for line in wanted:
            if "==" in line:
                name, pinned = line.strip().split("==")
                if version(name) != pinned:
                    print(f"  note: {name} is {version(name)}, the tables were made with {pinned}")


def run(name, folder, job):
    start = time.monotonic()
    print(f"{name} ...", end=" ", flush=True)
    job(folder)
    print(f"{time.monotonic() - start:.1f} s", flush=True)


def ephemeris(folder):
    subprocess.run([sys.executable, EPHEMERIS, folder], check=True, stdout=subprocess.DEVNULL)


def compare(committed, made, tolerance):
    """Prints what differs; the number of tables that do."""
    if not os.path.exists(committed):
        print(f"  {os.path.relpath(committed, HERE)} is not committed")
        return 1
    found = table.differences(committed, made, *tolerance)
    for line in found[:10]:
        print(f"  {os.path.relpath(committed, HERE)}: {line}")
    if len(found) > 10:
        print(f"  ... and {len(found) - 10} more")
    return int(bool(found))


def check():
    wrong = compared = 0
    with tempfile.TemporaryDirectory() as folder:
        for name in MAKERS:
            maker = importlib.import_module(name)
            run(name, folder, maker.make)
            for file, tolerance in maker.CHECKS.items():
                wrong += compare(os.path.join(HERE, file), os.path.join(folder, file), tolerance)
                compared += 1
            left = {file for file in os.listdir(folder) if file.endswith(".csv")} - set(maker.CHECKS)
            assert not left, f"{name} made tables that it names no tolerance for: {left}"
            for file in os.listdir(folder):
                os.remove(os.path.join(folder, file))
        if os.path.exists(EPHEMERIS):
            run("ephemeris/make_rows", folder, ephemeris)
            for file in sorted(os.listdir(folder)):
                wrong += compare(os.path.join(HERE, "ephemeris", file), os.path.join(folder, file), EPHEMERIS_TOLERANCE)
                compared += 1
    print(f"{compared} tables made again, {wrong} differ from the committed ones")
    return 1 if wrong else 0


def rewrite():
    for name in MAKERS:
        run(name, HERE, importlib.import_module(name).make)
    if os.path.exists(EPHEMERIS):
        run("ephemeris/make_rows", os.path.dirname(EPHEMERIS), ephemeris)
    return 0


if __name__ == "__main__":
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--check", action="store_true", help="compare instead of rewriting")
    arguments = parser.parse_args()
    warn_of_other_versions()
    sys.exit(check() if arguments.check else rewrite())
