//! Which one file is the page, and how is it made?
//!
//! `cargo page` builds the core for the browser, makes its bindings, and packs everything that
//! www/ holds into one self-contained HTML file: target/page/tailvane.html. `--serve` also serves it
//! on loopback, `--open` opens it. The same sources give the same bytes.
//!
//! | module | the question it answers |
//! | --- | --- |
//! | [`wasm`] | how do the Rust sources become wasm and bindings? |
//! | [`block`] | how do bytes lie in an HTML file? |
//! | [`stream`] | how is a stream of LZMA choices written in fewer bits? |
//! | [`page`] | how do the parts become one file under a strict policy? |
//! | [`sites`] | how does the table of sites travel? |
//! | [`serve`] | how is the page served on loopback? |
//! | [`open`] | how is a file or address opened in the default browser? |
#![forbid(unsafe_code)]

mod block;
mod open;
mod page;
mod serve;
mod sites;
mod stream;
mod wasm;

use std::path::{Path, PathBuf};
use std::process::ExitCode;

const USAGE: &str = "\
cargo page [--serve] [--open] [--port N]
  builds the page and writes target/page/tailvane.html
  --serve    also serves it on loopback until Ctrl+C
  --open     also opens it in the default browser
  --port N   the port for --serve (8031, or any free one when that is taken)";

/// What the call asked for.
struct Wish {
    serve: bool,
    open: bool,
    port: Option<u16>,
}

/// Reads the arguments; `None` asks for the usage text.
fn wish(mut arguments: impl Iterator<Item = String>) -> Result<Option<Wish>, String> {
    let mut wish = Wish { serve: false, open: false, port: None };
    while let Some(argument) = arguments.next() {
        match argument.as_str() {
            "--serve" => wish.serve = true,
            "--open" => wish.open = true,
            "--port" => {
                let text = arguments.next().unwrap_or_default();
                let port =
                    text.parse().map_err(|_| format!("--port: found \"{text}\"; expected a number from 0 to 65535"))?;
                wish.port = Some(port);
            }
            "--help" | "-h" => return Ok(None),
            other => return Err(format!("found \"{other}\"; expected one of the options below\n{USAGE}")),
        }
    }
    Ok(Some(wish))
}

/// The folder of the whole project; this crate lies two folders below it.
fn project_root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR"))
        .ancestors()
        .nth(2)
        .expect("www/pack lies two folders below the project")
        .to_path_buf()
}

fn run(wish: &Wish) -> Result<(), String> {
    let root = project_root();
    let build = wasm::build(&root)?;
    let packed = page::pack(&root, &build)?;
    println!("The page: {} ({} kB)", packed.path.display(), packed.bytes.div_ceil(1000));
    if wish.serve {
        serve::serve(&root, &build, &packed.path, wish.port, wish.open)
    } else {
        if wish.open {
            open::open(&packed.path.display().to_string());
        } else {
            println!("Open it with a double click, or run `cargo page --open`. It needs no network.");
        }
        Ok(())
    }
}

fn main() -> ExitCode {
    match wish(std::env::args().skip(1)) {
        Ok(None) => {
            println!("{USAGE}");
            ExitCode::SUCCESS
        }
        Ok(Some(wish)) => match run(&wish) {
            Ok(()) => ExitCode::SUCCESS,
            Err(message) => {
                eprintln!("The page was not built: {message}");
                ExitCode::from(1)
            }
        },
        Err(message) => {
            eprintln!("{message}");
            ExitCode::from(2)
        }
    }
}
