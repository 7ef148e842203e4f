//! How do the parts become one file under a strict policy?
//!
//! www/index.html is a legal page that also runs unpacked. Here its style sheets are put inline; its classic scripts
//! become one text, which travels with the wasm in an inert block; the site table has a block of its own, opened when a
//! person looks for a site. One script stands as such: www/unpack.js, which opens the blocks and hands the scripts
//! to the browser. A content security policy is written last that allows exactly these two scripts and these
//! styles, each by its hash, and no network at all.

use crate::block::block;
use crate::wasm::Build;
use base64::Engine;
use base64::engine::general_purpose::STANDARD;
use sha2::{Digest, Sha256};
use std::fs;
use std::path::{Path, PathBuf};

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
/// The script that opens the blocks, and the name under which it finds the other scripts.
const UNPACK: &str = "unpack.js";
const SCRIPTS: &str = "scripts.js";

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
    let sites = site_columns(root)?;
    let sites = sites.map(|table| block(&[(SITES, &table)])).transpose()?.unwrap_or_default();
    let html = assemble(
        &read("index.html")?,
        &read(UNPACK)?,
        |name| if name == GLUE { Ok(build.glue.clone()) } else { read(name) },
        |scripts| Ok(block(&[(SCRIPTS, scripts.as_bytes()), (WASM, &build.wasm)])? + &sites),
    )?;
    let path = root.join("target/page/tailvane.html");
    fs::create_dir_all(path.parent().expect("the page lies in a folder")).map_err(|e| format!("target/page: {e}"))?;
    fs::write(&path, &html).map_err(|e| format!("{}: {e}", path.display()))?;
    Ok(Packed { path, bytes: html.len() })
}

const STYLE_OPEN: &str = "<link rel=\"stylesheet\" href=\"";
const SCRIPT_OPEN: &str = "<script src=\"";
/// Keeps browsers from asking the server for an icon.
const NO_ICON: &str = "<link rel=\"icon\" href=\"data:,\">";
const CHARSET: &str = "<meta charset=\"utf-8\">";
/// Holds the place of the blocks until the scripts are all read; no text of a page has this character.
const HERE: &str = "\0";

/// The one file: styles inline in their order; in the place of the scripts the blocks that `packed` makes of them, and
/// the script that opens these; the policy on top.
fn assemble(
    index: &str,
    unpack: &str,
    text_of: impl Fn(&str) -> Result<String, String>,
    packed: impl Fn(&str) -> Result<String, String>,
) -> Result<String, String> {
    let mut style_hashes = Vec::new();
    let mut scripts = String::new();
    let mut body = String::new();
    for line in index.lines() {
        let trimmed = line.trim();
        if let Some(name) = between(trimmed, STYLE_OPEN, "\">") {
            let text = bare(&text_of(name)?);
            refuse_end_tag(name, &text, "</style")?;
            style_hashes.push(hash(&text));
            body.push_str(&format!("<style>{text}</style>\n"));
        } else if let Some(name) = between(trimmed, SCRIPT_OPEN, "\"></script>") {
            if scripts.is_empty() {
                body.push_str(HERE);
            }
            scripts.push_str(&bare(&text_of(name)?));
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
    let unpack = bare(unpack);
    refuse_end_tag(UNPACK, &unpack, "</script")?;
    let policy = format!(
        "{CHARSET}\n<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; script-src {} {} 'wasm-unsafe-eval'; style-src {}; \
         img-src blob: data:; worker-src blob:; connect-src 'none'; base-uri 'none'; form-action 'none'\">",
        hash(&unpack),
        hash(&scripts),
        style_hashes.join(" ")
    );
    if body.matches(CHARSET).count() != 1 || scripts.is_empty() || style_hashes.is_empty() {
        return Err(format!("www/index.html: expected one {CHARSET}, a style sheet and scripts"));
    }
    let blocks = packed(&scripts)? + &format!("<script>{unpack}</script>\n");
    Ok(body.replacen(CHARSET, &policy, 1).replacen(HERE, &blocks, 1))
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
    use super::{assemble, bare, hash};

    const INDEX: &str = "<head>\n<meta charset=\"utf-8\">\n<link rel=\"stylesheet\" href=\"a.css\">\n</head>\n<script src=\"a.js\"></script>\n";

    fn text_of(name: &str) -> Result<String, String> {
        Ok(format!("{{{name}}}\n"))
    }

    fn packed(scripts: &str) -> Result<String, String> {
        Ok(format!("BLOCK of {scripts}"))
    }

    #[test]
    fn every_style_and_script_is_named_in_the_policy_by_its_hash() {
        let index = INDEX.to_owned() + "<script src=\"b.js\"></script>\n";
        let html = assemble(&index, "open();", text_of, packed).unwrap();
        assert!(html.contains("<style>{a.css}\n</style>"));
        assert!(html.ends_with("BLOCK of {a.js}\n{b.js}\n<script>open();\n</script>\n"));
        assert!(html.contains(&format!(
            "script-src {} {} 'wasm-unsafe-eval'; style-src {};",
            hash("open();\n"),
            hash("{a.js}\n{b.js}\n"),
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
        assert!(assemble(&INDEX.replace("<script src", "<script defer src"), "", text_of, packed).is_err());
        assert!(assemble(INDEX, "", |_| Ok("</STYLE>".into()), packed).is_err());
        assert!(assemble(INDEX, "</SCRIPT>", text_of, packed).is_err());
    }
}
