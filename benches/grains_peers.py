"""How fast are exact grains and dust pictures, here and in a browser, against general-purpose libraries, in one run?

Usage: python benches/grains_peers.py

Needs Rust with the wasm target, a C compiler and Chromium. The peers (numpy, REBOUND, SPICE through spiceypy) are
installed into target/bench-venv at the first run; REBOUND is GPL and is called here for timing only, it is no part of
Tailvane. Every peer gets the same grains (scene A, beta below 0.95, ages to 100 d) and propagates each over its own time
with its own gravity parameter, in a C loop over its function; ours also includes the place on the picture. One core.

Prints figures S1 to S5: grains against peers, orbits behind a picture, time of a frame, grain of the picture.
"""

import ctypes
import http.server
import json
import os
import shutil
import subprocess
import sys
import tempfile
import threading
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
TARGET = ROOT / "target"
VENV = TARGET / "bench-venv"
PEERS = ["numpy", "rebound==5.2.2", "spiceypy==8.3.0"]

LOOP = r"""
#include <stddef.h>
typedef void (*kepler)(void *particle, double mu, double days, const void *simulation);
typedef void (*twobody)(double mu, const double state[6], double days, double end[6]);
/* The particles' places and velocities are their first six doubles; the solver moves them in place. */
void run_kepler(kepler solve, char *particles, size_t size, const double *mu, const double *days, unsigned count, const void *simulation) {
    for (unsigned k = 0; k < count; k++) solve(particles + k * size, mu[k], days[k], simulation);
}
void run_twobody(twobody solve, const double *states, const double *mu, const double *days, double *ends, unsigned count) {
    for (unsigned k = 0; k < count; k++) solve(mu[k], states + 6 * (size_t)k, days[k], ends + 6 * (size_t)k);
}
"""


def in_own_environment():
    """Runs this script again in an environment that has the peers."""
    python = VENV / "bin" / "python"
    if Path(sys.prefix).resolve() == VENV.resolve():
        return
    if not (VENV / "installed").exists():
        print("installing the peers into", VENV)
        subprocess.run([sys.executable, "-m", "venv", VENV], check=True)
        subprocess.run([python, "-m", "pip", "install", "--quiet", "--disable-pip-version-check", *PEERS], check=True)
        (VENV / "installed").write_text("\n".join(PEERS))
    os.execv(python, [str(python), *sys.argv])


def native(folder):
    """Our figures natively, and the grains."""
    import numpy as np
    path = folder / "grains.bin"
    done = subprocess.run(["cargo", "bench", "--quiet", "--bench", "grains", "--", "--grains", str(path)], cwd=ROOT,
                          check=True, capture_output=True, text=True)
    figures = {name: float(value) for name, value in (line.split() for line in done.stdout.split("\n") if line.strip())}
    return figures, np.fromfile(path).reshape(-1, 11)


def build_wasm(folder):
    subprocess.run(["cargo", "build", "--quiet", "--release", "--package", "tailvane-grains-bench", "--target",
                    "wasm32-unknown-unknown", "--config", 'profile.release.opt-level="z"'], cwd=ROOT, check=True)
    shutil.copy(TARGET / "wasm32-unknown-unknown/release/tailvane_grains_bench.wasm", folder / "grains.wasm")
    shutil.copy(ROOT / "benches/grains/page.html", folder / "page.html")


def browser(folder):
    """The same jobs in headless Chromium, from a loopback server that lives as long as the run."""
    found, ready = {}, threading.Event()

    class Handler(http.server.SimpleHTTPRequestHandler):
        extensions_map = {**http.server.SimpleHTTPRequestHandler.extensions_map, ".wasm": "application/wasm"}

        def __init__(self, *arguments):
            super().__init__(*arguments, directory=str(folder))

        def end_headers(self):
            # An isolated page gets the fine clock.
            self.send_header("Cross-Origin-Opener-Policy", "same-origin")
            self.send_header("Cross-Origin-Embedder-Policy", "require-corp")
            super().end_headers()

        def do_POST(self):
            found.update(json.loads(self.rfile.read(int(self.headers["Content-Length"]))))
            self.send_response(204)
            self.end_headers()
            ready.set()

        def log_message(self, *_):
            pass

    server = http.server.ThreadingHTTPServer(("127.0.0.1", 0), Handler)
    threading.Thread(target=server.serve_forever, daemon=True).start()
    chromium = next((path for name in ("chromium", "chromium-browser", "google-chrome") if (path := shutil.which(name))), None)
    if chromium is None:
        sys.exit("Chromium is missing; on Debian: apt-get install chromium")
    page = f"http://127.0.0.1:{server.server_port}/page.html"
    process = subprocess.Popen([chromium, "--headless", "--no-sandbox", "--disable-gpu", "--no-first-run",
                                "--disable-features=TranslateUI", f"--user-data-dir={folder / 'profile'}", page],
                               stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
    try:
        if not ready.wait(240):
            sys.exit("the browser did not answer within four minutes")
    finally:
        process.terminate()
        process.wait()
        server.shutdown()
    if "error" in found:
        sys.exit(f"the browser part failed: {found['error']}")
    return found


def loop(folder):
    source, library = folder / "loop.c", folder / "loop.so"
    source.write_text(LOOP)
    subprocess.run(["cc", "-O2", "-shared", "-fPIC", "-o", library, source], check=True)
    return ctypes.CDLL(str(library))


def timed(work, repeats=31):
    """Third best of the repeats, seconds of CPU time: as ours are taken."""
    times = []
    for _ in range(repeats):
        begin = time.process_time()
        work()
        times.append(time.process_time() - begin)
    return sorted(times)[2]


def pointer(array):
    return ctypes.c_void_p(array.ctypes.data)


def rebound_ns(run, grains):
    """REBOUND's Kepler solver (of its WHFast integrator), and the worst difference from our slow solver."""
    import numpy as np
    import rebound
    solve = ctypes.cast(rebound.clibrebound.reb_integrator_whfast_kepler_solver, ctypes.c_void_p)
    simulation = rebound.Simulation()
    size = ctypes.sizeof(rebound.Particle)
    start = np.zeros((len(grains), size // 8))
    start[:, :6] = grains[:, 2:8]
    mu, days = np.ascontiguousarray(grains[:, 0]), np.ascontiguousarray(grains[:, 1])
    moved = start.copy()

    def work():
        # The particles are moved in place: each pass starts from a fresh copy, whose own time is taken off below.
        np.copyto(moved, start)
        run.run_kepler(solve, pointer(moved), ctypes.c_size_t(size), pointer(mu), pointer(days), len(grains),
                       ctypes.byref(simulation))

    taken = timed(work) - timed(lambda: np.copyto(moved, start))
    work()
    return taken / len(grains) * 1e9, worst(moved[:, :3], grains)


def spice_ns(run, grains):
    """CSPICE prop2b, and the worst difference from our slow solver."""
    import numpy as np
    from spiceypy.utils.libspicehelper import libspice
    solve = ctypes.cast(libspice.prop2b_c, ctypes.c_void_p)
    mu, days = np.ascontiguousarray(grains[:, 0]), np.ascontiguousarray(grains[:, 1])
    states, ends = np.ascontiguousarray(grains[:, 2:8]), np.zeros((len(grains), 6))
    taken = timed(lambda: run.run_twobody(solve, pointer(states), pointer(mu), pointer(days), pointer(ends), len(grains)))
    return taken / len(grains) * 1e9, worst(ends[:, :3], grains)


def worst(ends, grains):
    import numpy as np
    off = np.linalg.norm(ends - grains[:, 8:11], axis=1) / np.linalg.norm(grains[:, 8:11], axis=1)
    return off.max()


def main():
    in_own_environment()
    TARGET.mkdir(exist_ok=True)
    with tempfile.TemporaryDirectory(dir=TARGET, ignore_cleanup_errors=True) as name:
        folder = Path(name)
        print("building and timing natively ...", flush=True)
        ours, grains = native(folder)
        print("building the wasm and timing it in Chromium ...", flush=True)
        build_wasm(folder)
        page = browser(folder)
        run = loop(folder)
        peers = {"REBOUND Kepler solver": rebound_ns(run, grains), "CSPICE prop2b": spice_ns(run, grains)}

    print(f"\nS1  one exact grain, scene A{'':16} {'ns':>8}  {'peer / ours in Chromium':>24} {'natively':>9}")
    print(f"    ours, Chromium{'':26} {page['solve_ns']:8.1f}  {1:24.1f}")
    print(f"    ours, native{'':28} {ours['solve_ns']:8.1f}  {'':24} {1:9.1f}")
    print(f"    ours with filling and slow lanes, Chromium  {page['see_ns']:8.1f}")
    for name, (ns, off) in peers.items():
        print(f"    {name:39} {ns:9.1f}  {ns / page['solve_ns']:24.1f} {ns / ours['solve_ns']:9.1f}"
              f"   (its worst relative difference from our slow solver {off:.0e})")
    print(f"\n{'scene':8} {'S4 solves, 0.1 px':>18} {'S3 frame, 200k ms':>19} {'1M ms':>8} {'picture, colours ms':>22} "
          f"{'native 200k, 1M':>18} {'S5 noise / random':>18} {'same bits':>10}")
    for letter, row in zip("ABCD", page["scenes"]):
        solves = f"{ours[f'solves_dragging_{letter}']:.0f}, {ours[f'solves_still_{letter}']:.0f}"
        parts = f"{row['dragging_ms']:.1f} + {row['dragging_tone_ms']:.1f}"
        times = f"{ours[f'dragging_ms_{letter}']:.1f}, {ours[f'still_ms_{letter}']:.1f}"
        noise = ours[f"noise_{letter}"] / ours[f"noise_random_{letter}"]
        same = "yes" if int(row["print"]) == int(ours[f"print_{letter}"]) else "NO"
        print(f"{letter:8} {solves:>18} {row['dragging_frame_ms']:19.1f} {row['still_frame_ms']:8.1f} {parts:>22} "
              f"{times:>18} {noise:18.2f} {same:>10}")
        if os.environ.get("DETAILS"):
            print("        ", row)


if __name__ == "__main__":
    main()
