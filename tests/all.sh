#!/usr/bin/env bash
# Installs what the tests need and runs every test. From a fresh clone on a Debian-like machine with rustup:
#
#     bash tests/all.sh
#
# What is there already is used as it is. System packages are installed only as root or with sudo that asks nothing;
# otherwise the script says which command to run. Stops at nothing: every part runs, and the last line counts.
set -u
cd "$(dirname "$0")/.." || exit 1

began=$(date +%s)
passed=()
failed=()

say() { printf '\n== [%4ds] %s\n' "$(($(date +%s) - began))" "$*"; }

# part NAME COMMAND...: runs a part and notes how it ended.
part() {
    local name=$1
    shift
    say "$name"
    if "$@"; then
        passed+=("$name")
    else
        failed+=("$name")
        printf -- '-- failed: %s\n' "$name"
    fi
}

# skip NAME WHY: a part that cannot run here counts as failed, since its tests did not run.
skip() {
    say "$1"
    printf -- '-- cannot run: %s\n' "$2"
    failed+=("$1")
}

have() { command -v "$1" >/dev/null 2>&1; }

# ---- What is needed ----

# Debian packages that are missing.
missing_packages() {
    have chromium || have chromium-browser || have google-chrome || echo chromium
    have firefox-esr || have firefox || echo firefox-esr
    have node || echo nodejs
    have npm || echo npm
    have python3 || echo python3
    python3 -c 'import venv, ensurepip' 2>/dev/null || echo python3-venv
    have cc || echo build-essential
}

install_packages() {
    local wanted
    wanted=$(missing_packages | tr '\n' ' ')
    if [ -z "${wanted// /}" ]; then
        echo "system packages: all there"
        return 0
    fi
    local root=""
    if [ "$(id -u)" -ne 0 ]; then root="sudo -n"; fi
    local by_hand="sudo apt-get update && sudo apt-get install -y --no-install-recommends $wanted"
    if ! have apt-get || { [ -n "$root" ] && ! sudo -n true 2>/dev/null; }; then
        echo "missing: $wanted"
        echo "They cannot be installed from here. On Debian or Ubuntu run:"
        echo "    $by_hand"
        return 1
    fi
    echo "installing: $wanted"
    # The words are package names, one each.
    # shellcheck disable=SC2086
    if $root apt-get update -q && $root env DEBIAN_FRONTEND=noninteractive apt-get install -y -q --no-install-recommends $wanted; then
        return 0
    fi
    echo "The packages could not be installed. Run: $by_hand"
    return 1
}

install_rust() {
    if have cargo; then
        cargo --version
        return 0
    fi
    echo "Rust is missing. Install it with rustup, see https://rustup.rs, then run this again."
    return 1
}

WASM=wasm32-unknown-unknown
install_wasm_target() {
    if [ -d "$(rustc --print target-libdir --target $WASM 2>/dev/null)" ]; then
        echo "compiler's part for the browser: there"
        return 0
    fi
    have rustup && rustup target add $WASM
}

install_node_modules() {
    local stamp=tests/browser/node_modules/.package-lock.json
    if [ -f "$stamp" ] && [ ! tests/browser/package-lock.json -nt "$stamp" ]; then
        echo "node packages: all there"
        return 0
    fi
    (cd tests/browser && npm ci --no-audit --no-fund)
}

# The reference libraries live in a virtual environment of their own, made anew only when their list changes.
VENV=target/truth-venv
install_truth() {
    local wanted=tests/truth/requirements.txt
    if [ -f "$VENV/installed.txt" ] && cmp -s "$wanted" "$VENV/installed.txt"; then
        echo "reference libraries: all there"
        return 0
    fi
    echo "installing the reference libraries (about 150 MB with the JPL ephemeris) ..."
    python3 -m venv "$VENV" &&
        "$VENV/bin/python" -m pip install --disable-pip-version-check --progress-bar off -r "$wanted" &&
        cp "$wanted" "$VENV/installed.txt"
}

say "What the tests need"
install_packages
install_rust || exit 1
install_wasm_target || echo "The compiler's part for the browser could not be installed; run: rustup target add $WASM"
install_node_modules || echo "The node packages could not be installed; run: (cd tests/browser && npm ci)"
install_truth || echo "The reference libraries could not be installed; see the messages above."

# ---- Tests ----

format() {
    cargo fmt --version >/dev/null 2>&1 || { echo "rustfmt is not installed here; layout is not checked"; return 0; }
    cargo fmt --all -- --check
}

lint() {
    cargo clippy --version >/dev/null 2>&1 || { echo "clippy is not installed here; lints are not checked"; return 0; }
    # Tests may use std's mathematics, which the core may not.
    cargo clippy --workspace --lib --bins --quiet -- -D warnings &&
        cargo clippy --lib --target $WASM --quiet -- -D warnings &&
        cargo clippy --workspace --tests --benches --quiet -- -D warnings -A clippy::disallowed_methods
}

rust_tests() { cargo test --workspace --no-fail-fast 2>&1 | tee target/cargo-test.log; return "${PIPESTATUS[0]}"; }

# Runs beside the builds: it is Python on one core, and most of a release build is one compiler on another.
begin_truth() { "$VENV/bin/python" tests/truth/make_all.py --check >target/truth.log 2>&1 & truth_job=$!; }
end_truth() {
    wait "$truth_job"
    local code=$?
    cat target/truth.log
    return $code
}

browser_tests() { (cd tests/browser && node --test --test-reporter=spec page.test.mjs 2>&1) | tee target/browser-test.log; return "${PIPESTATUS[0]}"; }

mkdir -p target
part "Layout of the sources (cargo fmt)" format
part "Lints (cargo clippy)" lint
part "Core, notations, rules, scene (cargo test)" rust_tests
truth_job=""
if [ -x "$VENV/bin/python" ]; then begin_truth; fi
part "The command line (release build)" cargo build --release --bin tailvane
part "The page (cargo page)" cargo page
if [ -n "$truth_job" ]; then
    part "Outside truth made anew and compared" end_truth
else
    skip "Outside truth made anew and compared" "no Python environment"
fi
if [ -d tests/browser/node_modules ] && have node; then
    part "The page in real browsers" browser_tests
else
    skip "The page in real browsers" "no node packages"
fi

# ---- Totals ----

count() { grep -Eo "$2" "$1" 2>/dev/null | grep -Eo '[0-9]+' | awk '{ sum += $1 } END { print sum + 0 }'; }
rust_passed=$(count target/cargo-test.log '[0-9]+ passed')
rust_failed=$(count target/cargo-test.log '[0-9]+ failed')
browser_passed=$(count target/browser-test.log '^ℹ pass [0-9]+')
browser_failed=$(count target/browser-test.log '^ℹ fail [0-9]+')

say "Done"
for name in ${failed[@]+"${failed[@]}"}; do echo "failed: $name"; done
echo "parts: ${#passed[@]} passed, ${#failed[@]} failed; Rust tests: $rust_passed passed, $rust_failed failed; browser tests: $browser_passed passed, $browser_failed failed; $(($(date +%s) - began)) s"
[ ${#failed[@]} -eq 0 ]
