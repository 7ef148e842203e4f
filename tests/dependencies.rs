//! Are the dependencies locked, and under licences that the page may carry?
//!
//! Reads Cargo.lock and asks cargo what it knows offline. Advisories cannot be checked here: their database has to be
//! fetched from outside (`cargo audit`); DEVELOPERS.md says so.

use serde_json::Value;
use std::fs;
use std::path::Path;
use std::process::Command;

/// Licences under which a dependency may come, by SPDX name.
const ALLOWED: [&str; 12] = [
    "MIT",
    "MIT-0",
    "Apache-2.0",
    "Apache-2.0 WITH LLVM-exception",
    "BSD-2-Clause",
    "BSD-3-Clause",
    "ISC",
    "Zlib",
    "0BSD",
    "Unlicense",
    "Unicode-3.0",
    "CC0-1.0",
];

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// Whether a licence expression can be met by allowed licences: one of those joined by OR, all of those joined by AND.
fn allowed(expression: &str) -> bool {
    let plain = expression.replace(['(', ')'], "").replace('/', " OR ");
    plain.split(" AND ").all(|part| part.split(" OR ").any(|name| ALLOWED.contains(&name.trim())))
}

/// Name, version, licence of every package that cargo knows for this workspace.
fn packages() -> Vec<(String, String, String)> {
    let run = Command::new(env!("CARGO"))
        .current_dir(root())
        .args(["metadata", "--format-version", "1", "--locked", "--offline"])
        .output()
        .expect("cargo runs");
    assert!(run.status.success(), "{}", String::from_utf8_lossy(&run.stderr));
    let metadata: Value = serde_json::from_slice(&run.stdout).expect("JSON");
    let text = |package: &Value, key: &str| package[key].as_str().unwrap_or_default().to_owned();
    let list = metadata["packages"].as_array().expect("packages");
    list.iter().map(|package| (text(package, "name"), text(package, "version"), text(package, "license"))).collect()
}

#[test]
fn every_dependency_has_a_licence_that_the_page_may_carry() {
    let packages = packages();
    assert!(packages.len() > 30, "{}", packages.len());
    let wrong: Vec<_> = packages.iter().filter(|(_, _, licence)| !allowed(licence)).collect();
    assert!(wrong.is_empty(), "{wrong:#?}");
    assert!(
        !allowed("GPL-3.0-only") && !allowed("") && !allowed("MIT AND GPL-2.0") && allowed("(MIT OR GPL-2.0) AND Zlib")
    );
}

#[test]
fn every_dependency_is_locked_to_a_version_and_a_check_sum() {
    let lock = fs::read_to_string(root().join("Cargo.lock")).expect("Cargo.lock");
    let mut foreign = 0;
    for package in lock.split("[[package]]").skip(1) {
        let has = |key: &str| package.lines().any(|line| line.starts_with(&format!("{key} = \"")));
        assert!(has("version"), "{package}");
        if has("source") {
            foreign += 1;
            assert!(has("checksum") && package.contains("source = \"registry+"), "{package}");
        }
    }
    assert!(foreign > 30);
    for name in ["wasm-bindgen", "nalgebra", "serde_json"] {
        assert!(lock.contains(&format!("name = \"{name}\"\n")), "{name}");
    }
}
