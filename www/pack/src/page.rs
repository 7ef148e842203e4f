//! How do the parts become one file under a strict policy?
//!
//! www/index.html is a legal page that also runs unpacked. Here its style sheet and its classic scripts
//! are put inline, the wasm and the site table become inert data blocks (deflate, base64), and a content
//! security policy is written last that allows exactly these scripts and styles, and no network at all.

use crate::wasm::{Build, TARGET, cargo};
use base64::Engine;
use base64::engine::general_purpose::STANDARD;
use sha2::{Digest, Sha256};
use std::collections::BTreeSet;
use std::fs;
use std::num::NonZeroU64;
use std::path::{Path, PathBuf};
use std::process::Command;

/// The packed page.
pub struct Packed {
    pub path: PathBuf,
    pub bytes: usize,
}

/// The bindings, as www/index.html names them.
pub const GLUE: &str = "glue.js";
/// The wasm of the unpacked page, and the name of its data block in the packed one.
pub const WASM: &str = "core.wasm";
/// The site table of the unpacked page, and the name of its data block in the packed one.
pub const SITES: &str = "sites.data";

/// What controls and walk say, and the name of its data block.
pub const WORDS: &str = "words.data";
/// Where the packed software is listed, on a line of its own.
const LICENCES: &str = "<!-- licences -->";

/// The words of the controls and the walk with its plans inside, as one JSON text.
///
/// # Errors
/// A file that cannot be read, or a list whose lines are not one `"plan": "NAME"` for each step.
pub fn words(root: &Path) -> Result<Vec<u8>, String> {
    let read = |name: &str| fs::read_to_string(root.join("www").join(name)).map_err(|e| format!("www/{name}: {e}"));
    let explain = read("explain.json")?;
    let mut walk = String::new();
    for line in read("walk/list.walk.json")?.lines() {
        match between(line.trim().trim_end_matches(','), "\"plan\": \"", "\"") {
            Some(name) => walk.push_str(&format!("\"plan\":{}", read(&format!("walk/{name}"))?.trim())),
            None => walk.push_str(line.trim()),
        }
    }
    Ok(format!("{{\"explain\":{},\"walk\":{walk}}}", explain.trim()).into_bytes())
}

/// The crates in the page with their licences, as items of a list. What only builds the page is not in it.
///
/// # Errors
/// Cargo, or an answer of another shape.
fn licences(root: &Path) -> Result<String, String> {
    let run = Command::new(cargo())
        .current_dir(root)
        .args(["tree", "--package", "tailvane", "--target", TARGET, "--edges", "normal,no-proc-macro"])
        .args(["--prefix", "none", "--no-dedupe", "--format", "{p}|{l}"])
        .output()
        .map_err(|e| format!("cargo could not be started: {e}"))?;
    let text = String::from_utf8_lossy(&run.stdout).into_owned();
    let mut items = BTreeSet::new();
    for line in text.lines().filter(|line| !line.trim().is_empty()) {
        let (crate_, licence) = line.split_once('|').ok_or_else(|| format!("cargo tree: found {line}"))?;
        let named: Vec<&str> = crate_.split(' ').take(2).collect();
        let plain = |c: char| c.is_ascii_alphanumeric() || "-_. /()+".contains(c);
        if named.len() != 2 || licence.is_empty() || !line.replace('|', "").chars().all(plain) {
            return Err(format!("cargo tree: found {line}; expected a crate with its licence"));
        }
        if !named[0].starts_with("tailvane") {
            items.insert(format!("<li>{} {}: {licence}</li>\n", named[0], named[1].trim_start_matches('v')));
        }
    }
    if !run.status.success() || items.is_empty() {
        return Err(format!("cargo tree: {}", String::from_utf8_lossy(&run.stderr)));
    }
    items.insert("<li>Rust standard library: MIT OR Apache-2.0</li>\n".into());
    Ok(items.into_iter().collect())
}

/// The site table column by column, which packs a fifth smaller than line by line: each column on a line, its fields
/// separated by tabs. Remarks are left out; the page puts the lines together again.
///
/// # Errors
/// A table that cannot be read, or whose lines differ in their number of fields.
pub fn site_columns(root: &Path) -> Result<Option<Vec<u8>>, String> {
    let Some(table) = site_table(root)? else { return Ok(None) };
    let text = String::from_utf8(table).map_err(|e| format!("the site table: {e}"))?;
    let rows: Vec<Vec<&str>> = text
        .lines()
        .filter(|line| !line.is_empty() && !line.starts_with('#'))
        .map(|line| line.split('\t').collect())
        .collect();
    let count = rows.first().map_or(0, Vec::len);
    if rows.iter().any(|row| row.len() != count) {
        return Err("the site table: its lines differ in their number of fields".into());
    }
    let column = |at: usize| rows.iter().map(|row| row[at]).collect::<Vec<_>>().join("\t");
    Ok(Some((0..count).map(column).collect::<Vec<_>>().join("\n").into_bytes()))
}

/// The site table, when the project has one.
fn site_table(root: &Path) -> Result<Option<Vec<u8>>, String> {
    let folder = root.join("src/body");
    let mut found: Vec<PathBuf> = fs::read_dir(&folder)
        .map_err(|e| format!("{}: {e}", folder.display()))?
        .filter_map(|entry| entry.ok().map(|entry| entry.path()))
        .filter(|path| {
            path.file_stem().is_some_and(|stem| stem == "site_codes") && path.extension().is_some_and(|e| e != "rs")
        })
        .collect();
    found.sort();
    found.first().map(|path| fs::read(path).map_err(|e| format!("{}: {e}", path.display()))).transpose()
}

/// Packs www/ and the built core into target/page/tailvane.html.
///
/// # Errors
/// A sentence for people: a file that cannot be read or written, or an index.html that does not follow the rules.
pub fn pack(root: &Path, build: &Build) -> Result<Packed, String> {
    let www = root.join("www");
    let read = |name: &str| fs::read_to_string(www.join(name)).map_err(|e| format!("www/{name}: {e}"));
    let mut blocks = data_block(WASM, &build.wasm)?;
    if let Some(table) = site_columns(root)? {
        blocks.push_str(&data_block(SITES, &table)?);
    }
    blocks.push_str(&data_block(WORDS, &words(root)?)?);
    let index = read("index.html")?.replacen(LICENCES, licences(root)?.trim_end(), 1);
    let html = assemble(&index, |name| if name == GLUE { Ok(build.glue.clone()) } else { read(name) }, &blocks)?;
    let path = root.join("target/page/tailvane.html");
    fs::create_dir_all(path.parent().expect("the page lies in a folder")).map_err(|e| format!("target/page: {e}"))?;
    fs::write(&path, &html).map_err(|e| format!("{}: {e}", path.display()))?;
    Ok(Packed { path, bytes: html.len() })
}

/// An inert block that carries bytes: deflate without a header, base64.
fn data_block(name: &str, bytes: &[u8]) -> Result<String, String> {
    let mut packed = Vec::new();
    // One round: more gain a thousandth.
    let options = zopfli::Options { iteration_count: NonZeroU64::MIN, ..zopfli::Options::default() };
    zopfli::compress(options, zopfli::Format::Deflate, bytes, &mut packed).map_err(|e| format!("{name}: {e}"))?;
    Ok(format!(
        "<script type=\"application/octet-stream\" data-block=\"{name}\">{}</script>\n",
        STANDARD.encode(packed)
    ))
}

const STYLE_OPEN: &str = "<link rel=\"stylesheet\" href=\"";
const SCRIPT_OPEN: &str = "<script src=\"";
/// Keeps browsers from asking the server for an icon.
const NO_ICON: &str = "<link rel=\"icon\" href=\"data:,\">";
const CHARSET: &str = "<meta charset=\"utf-8\">";

/// The one file: styles and scripts inline in their order, the data blocks before the first script, the policy on top.
fn assemble(index: &str, text_of: impl Fn(&str) -> Result<String, String>, blocks: &str) -> Result<String, String> {
    let mut style_hashes = Vec::new();
    let mut script_hashes = Vec::new();
    let mut body = String::new();
    for line in index.lines() {
        let trimmed = line.trim();
        if let Some(name) = between(trimmed, STYLE_OPEN, "\">") {
            let text = bare(&text_of(name)?);
            refuse_end_tag(name, &text, "</style")?;
            style_hashes.push(hash(&text));
            body.push_str(&format!("<style>{text}</style>\n"));
        } else if let Some(name) = between(trimmed, SCRIPT_OPEN, "\"></script>") {
            let text = bare(&text_of(name)?);
            refuse_end_tag(name, &text, "</script")?;
            if script_hashes.is_empty() {
                body.push_str(blocks);
            }
            script_hashes.push(hash(&text));
            body.push_str(&format!("<script>{text}</script>\n"));
        } else if trimmed == NO_ICON {
            body.push_str(line);
            body.push('\n');
        } else if trimmed.contains("<script") || trimmed.contains("<link") || trimmed.contains("<style") {
            return Err(format!(
                "www/index.html: found {trimmed}; expected each style sheet and script alone on its line, with nothing but its address"
            ));
        } else {
            body.push_str(line);
            body.push('\n');
        }
    }
    let policy = format!(
        "{CHARSET}\n<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; script-src {} 'wasm-unsafe-eval'; style-src {}; \
         img-src blob: data:; worker-src blob:; connect-src 'none'; base-uri 'none'; form-action 'none'\">",
        script_hashes.join(" "),
        style_hashes.join(" ")
    );
    if body.matches(CHARSET).count() != 1 || script_hashes.is_empty() || style_hashes.is_empty() {
        return Err(format!("www/index.html: expected one {CHARSET}, a style sheet and scripts"));
    }
    Ok(body.replacen(CHARSET, &policy, 1))
}

/// A script or style sheet without indentation, empty lines and comments that fill their lines. No source of the
/// page has a text that runs over several lines, so nothing else changes.
fn bare(text: &str) -> String {
    let mut kept = String::with_capacity(text.len());
    let mut inside_comment = false;
    for line in text.lines().map(str::trim) {
        let opens = !inside_comment && line.starts_with("/*");
        if opens || inside_comment {
            inside_comment = !line.ends_with("*/");
        } else if !line.is_empty() && !line.starts_with("//") {
            kept.push_str(line);
            kept.push('\n');
        }
    }
    kept
}

fn between<'a>(line: &'a str, open: &str, close: &str) -> Option<&'a str> {
    line.strip_prefix(open)?.strip_suffix(close).filter(|name| !name.contains('"'))
}

fn refuse_end_tag(name: &str, text: &str, tag: &str) -> Result<(), String> {
    if text.to_ascii_lowercase().contains(tag) {
        Err(format!("www/{name}: holds {tag}, which would end its block"))
    } else {
        Ok(())
    }
}

/// The hash of a block's exact text, as the policy names it.
fn hash(text: &str) -> String {
    format!("'sha256-{}'", STANDARD.encode(Sha256::digest(text.as_bytes())))
}

#[cfg(test)]
mod tests {
    use super::{assemble, bare, data_block, hash};

    const INDEX: &str = "<head>\n<meta charset=\"utf-8\">\n<link rel=\"stylesheet\" href=\"a.css\">\n</head>\n<script src=\"a.js\"></script>\n";

    fn text_of(name: &str) -> Result<String, String> {
        Ok(format!("{{{name}}}\n"))
    }

    #[test]
    fn every_inline_block_is_named_in_the_policy_by_its_hash() {
        let html = assemble(INDEX, text_of, "BLOCK\n").unwrap();
        assert!(html.contains("<style>{a.css}\n</style>"));
        assert!(html.contains("BLOCK\n<script>{a.js}\n</script>"));
        assert!(html.contains(&format!(
            "script-src {} 'wasm-unsafe-eval'; style-src {};",
            hash("{a.js}\n"),
            hash("{a.css}\n")
        )));
    }

    #[test]
    fn comments_that_fill_their_lines_are_left_out_and_nothing_else() {
        let text =
            "/*\n * Words.\n */\n  let a = 1; // kept\n\n  // gone\n  /** gone */\n  let b = a /* kept */ * 2;\n";
        assert_eq!(bare(text), "let a = 1; // kept\nlet b = a /* kept */ * 2;\n");
    }

    #[test]
    fn a_hash_is_the_published_one_of_the_empty_text() {
        // Source: FIPS 180-4, SHA-256 of the empty message, e3b0c442...b855, in base64.
        assert_eq!(hash(""), "'sha256-47DEQpj8HBSa+/TImW+5JCeuQeRkm5NMpJWZG3hSuFU='");
    }

    #[test]
    fn an_address_outside_the_page_is_refused() {
        assert!(assemble(&INDEX.replace("<script src", "<script defer src"), text_of, "").is_err());
        assert!(assemble(INDEX, |_| Ok("</SCRIPT>".into()), "").is_err());
    }

    #[test]
    fn a_data_block_inflates_to_the_same_bytes() {
        use base64::Engine;
        let bytes: Vec<u8> = (0..5000u32).map(|i| (i * i % 251) as u8).collect();
        let block = data_block("x", &bytes).unwrap();
        let text = block.split('>').nth(1).unwrap().split('<').next().unwrap();
        let packed = base64::engine::general_purpose::STANDARD.decode(text).unwrap();
        assert_eq!(miniz_oxide::inflate::decompress_to_vec(&packed).unwrap(), bytes);
    }
}
