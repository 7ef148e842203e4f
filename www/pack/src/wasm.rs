//! How do the Rust sources become wasm and bindings?
//!
//! The wasm is built with cargo for wasm32-unknown-unknown; the bindings come from the generator of
//! wasm-bindgen, run as a library whose version is pinned to the one the crate uses.

use std::path::Path;
use std::process::{Command, Stdio};
use wasm_bindgen_cli_support::Bindgen;

pub const TARGET: &str = "wasm32-unknown-unknown";

/// The core, ready for a browser.
pub struct Build {
    /// JavaScript that defines the function `tailvaneCore`: each call gives a fresh, empty core.
    pub glue: String,
    pub wasm: Vec<u8>,
}

/// Builds the library for the browser and makes its bindings.
///
/// # Errors
/// A sentence for people: the target that could not be installed, or the build that failed.
pub fn build(root: &Path) -> Result<Build, String> {
    install_target(root)?;
    println!("Building the core for the browser (cargo build --lib --release --target {TARGET}) ...");
    let mut command = Command::new(cargo());
    command
        .current_dir(root)
        .args(["build", "--lib", "--release", "--package", "tailvane", "--target", TARGET])
        .args(["--target-dir".as_ref(), root.join("target").as_os_str()])
        // Measured: 7 % less page than "s". What runs for every grain and pixel is a crate of its own, at level 3.
        .args(["--config", "profile.release.opt-level=\"z\""])
        // Panic messages hold source paths: the same bytes wherever the registry and the project lie.
        .args(["--config", &remapped_paths(root)]);
    let done = command.status().map_err(|e| format!("cargo could not be started: {e}"))?;
    if !done.success() {
        return Err("the core did not compile; cargo's messages stand above".into());
    }
    let input = root.join("target").join(TARGET).join("release/tailvane.wasm");
    bind(&input)
}

pub fn cargo() -> String {
    std::env::var("CARGO").unwrap_or_else(|_| "cargo".into())
}

/// A cargo setting that replaces machine paths in the output; it is added to the flags of .cargo/config.toml.
fn remapped_paths(root: &Path) -> String {
    let mut flags = vec![format!("--remap-path-prefix={}=", root.display())];
    let cargo_home =
        std::env::var("CARGO_HOME").ok().or_else(|| std::env::var("HOME").ok().map(|home| home + "/.cargo"));
    if let Some(home) = cargo_home {
        flags.push(format!("--remap-path-prefix={home}=cargo"));
    }
    // TOML literal strings need no escapes, except that they cannot hold a single quote.
    let quoted: Vec<String> =
        flags.iter().filter(|flag| !flag.contains('\'')).map(|flag| format!("'{flag}'")).collect();
    format!("target.{TARGET}.rustflags=[{}]", quoted.join(","))
}

/// Makes sure that the compiler has its part for the browser.
fn install_target(root: &Path) -> Result<(), String> {
    let rustc = std::env::var("RUSTC").unwrap_or_else(|_| "rustc".into());
    let present = || {
        let asked =
            Command::new(&rustc).current_dir(root).args(["--print", "target-libdir", "--target", TARGET]).output();
        asked.is_ok_and(|answer| {
            answer.status.success() && Path::new(String::from_utf8_lossy(&answer.stdout).trim()).is_dir()
        })
    };
    if present() {
        return Ok(());
    }
    println!("Installing the compiler's part for the browser (rustup target add {TARGET}) ...");
    let added = Command::new("rustup").current_dir(root).args(["target", "add", TARGET]).stdin(Stdio::null()).status();
    if added.is_ok_and(|status| status.success()) && present() {
        return Ok(());
    }
    Err(format!(
        "the compiler has no {TARGET} part and it could not be installed.\n\
         With rustup (https://rustup.rs): rustup target add {TARGET}\n\
         With a Rust from your system: install its package for that target, \
         on Debian: apt install libstd-rust-dev-wasm32\n\
         Then run `cargo page` again."
    ))
}

/// Runs the bindings generator over the built wasm.
fn bind(input: &Path) -> Result<Build, String> {
    println!("Making the bindings ...");
    let failed = |e: anyhow::Error| format!("the bindings of {} failed: {e:#}", input.display());
    let mut output = Bindgen::new()
        .input_path(input)
        .no_modules(true)
        .and_then(|bindgen| {
            bindgen
                .typescript(false)
                .remove_name_section(true)
                .remove_producers_section(true)
                .omit_default_module_path(true)
                .generate_output()
        })
        .map_err(failed)?;
    let glue = wrapped_glue(output.js())?;
    Ok(Build { glue, wasm: output.wasm_mut().emit_wasm() })
}

/// The generator's script as a function that makes a fresh core, without its guess at its own address.
///
/// That guess throws in a srcdoc frame, where a script has no address; the page hands the module over, so nothing needs it.
fn wrapped_glue(js: &str) -> Result<String, String> {
    let mut lines = Vec::new();
    let mut dropped = 0;
    let mut source = js.lines();
    while let Some(line) = source.next() {
        match line.trim() {
            "let script_src;" => dropped += 1,
            "if (typeof document !== 'undefined' && document.currentScript !== null) {" => {
                let body = source.next().unwrap_or_default();
                let end = source.next().unwrap_or_default();
                if !body.trim().starts_with("script_src = ") || end.trim() != "}" {
                    return Err(format!("the bindings have an unknown shape near \"{}\"", body.trim()));
                }
                dropped += 1;
            }
            _ => lines.push(line),
        }
    }
    let text = lines.join("\n");
    if dropped != 2 || text.contains("script_src") || text.contains("</script") {
        return Err("the bindings have an unknown shape: the lines about script_src were not found as expected".into());
    }
    Ok(format!(
        "// Made by wasm-bindgen. Each call makes a fresh core, so that a core that failed can be thrown away.\n\
         function tailvaneCore() {{\n{text}\nreturn wasm_bindgen;\n}}\n"
    ))
}

#[cfg(test)]
mod tests {
    use super::wrapped_glue;

    const GLUE: &str = "let wasm_bindgen = (function(exports) {\n    let script_src;\n    if (typeof document !== 'undefined' && document.currentScript !== null) {\n        script_src = new URL(document.currentScript.src, location.href).toString();\n    }\n    return 1;\n})({});";

    #[test]
    fn the_guess_at_the_script_address_is_removed() {
        let glue = wrapped_glue(GLUE).unwrap();
        assert!(!glue.contains("script_src"));
        assert!(glue.contains("return 1;"));
    }

    #[test]
    fn bindings_of_another_shape_are_refused() {
        assert!(wrapped_glue(&GLUE.replace("let script_src;", "let script_src = 0;")).is_err());
    }
}
