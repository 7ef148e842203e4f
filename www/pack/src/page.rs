//! How do the parts become one file under a strict policy?
//!
//! www/index.html is a legal page that also runs unpacked. Here what its body shows, its style sheets, its classic
//! scripts and the wasm travel in one inert block; the site table has a block of its own, opened when a person looks
//! for a site. One script stands as such: www/unpack.js, which opens the blocks and puts all in its place. A
//! content security policy is written last that allows exactly these styles and scripts, by their hashes, and no
//! network at all.

use crate::block::block;
use crate::sites;
use crate::wasm::{Build, TARGET, cargo};
use base64::Engine;
use base64::engine::general_purpose::STANDARD;
use sha2::{Digest, Sha256};
use std::collections::BTreeSet;
use std::fs;
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
/// The two halves of the site table of the unpacked page, and their names in the block of the packed one.
pub const SITES: &str = "sites.data";
pub const SITE_NUMBERS: &str = "sites.numbers";
/// The script that opens the blocks, and the names under which it finds the other parts of the page.
const UNPACK: &str = "unpack.js";
const BODY: &str = "body.html";
const STYLES: &str = "styles.css";
const SCRIPTS: &str = "scripts.js";

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

/// Packs www/ and the built core into target/page/tailvane.html.
///
/// # Errors
/// A sentence for people: a file that cannot be read or written, or an index.html that does not follow the rules.
pub fn pack(root: &Path, build: &Build) -> Result<Packed, String> {
    let www = root.join("www");
    let read = |name: &str| fs::read_to_string(www.join(name)).map_err(|e| format!("www/{name}: {e}"));
    let sites = sites::read(root)?;
    let sites = block(&[(SITES, sites.words.as_bytes()), (SITE_NUMBERS, &sites.numbers)])?;
    let words = words(root)?;
    let index = read("index.html")?.replacen(LICENCES, licences(root)?.trim_end(), 1);
    let parts = taken_apart(&index, |name| if name == GLUE { Ok(build.glue.clone()) } else { read(name) })?;
    let start = block(&[
        (BODY, parts.body.as_bytes()),
        (STYLES, parts.styles.as_bytes()),
        (SCRIPTS, parts.scripts.as_bytes()),
        (WORDS, &words),
        (WASM, &build.wasm),
    ])?;
    let html = assembled(&parts, &read(UNPACK)?, &(start + &sites))?;
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
const NO_SCRIPT: &str = "<noscript>";

/// www/index.html, taken apart: each is text without its tags.
#[derive(Default)]
struct Parts {
    /// What stays in the head, one tag to a line.
    head: String,
    /// What the body shows, without what it says where scripts are switched off.
    body: String,
    without_scripts: String,
    styles: String,
    scripts: String,
}

/// The parts of a page whose style sheets, scripts and `noscript` stand alone on their lines, with nothing but their
/// address.
fn taken_apart(index: &str, text_of: impl Fn(&str) -> Result<String, String>) -> Result<Parts, String> {
    let (head, body) =
        tag(index, "head").zip(tag(index, "body")).ok_or("www/index.html: expected a head and a body")?;
    let mut parts = Parts::default();
    for (line, of_head) in head.lines().map(|line| (line, true)).chain(body.lines().map(|line| (line, false))) {
        let trimmed = line.trim();
        if let Some(name) = between(trimmed, STYLE_OPEN, "\">") {
            parts.styles.push_str(&bare(&text_of(name)?));
        } else if let Some(name) = between(trimmed, SCRIPT_OPEN, "\"></script>") {
            parts.scripts.push_str(&bare(&text_of(name)?));
        } else if trimmed.starts_with(NO_SCRIPT) {
            parts.without_scripts.push_str(trimmed);
        } else if trimmed != NO_ICON && ["<script", "<link", "<style"].iter().any(|open| trimmed.contains(open)) {
            return Err(format!(
                "www/index.html: found {trimmed}; expected each style sheet and script alone on its line, with nothing but its address"
            ));
        } else if !trimmed.is_empty() {
            let part = if of_head { &mut parts.head } else { &mut parts.body };
            part.push_str(trimmed);
            part.push('\n');
        }
    }
    Ok(parts)
}

/// What the first tag of this name holds.
fn tag<'a>(html: &'a str, name: &str) -> Option<&'a str> {
    let (_, rest) = html.split_once(&format!("<{name}>\n"))?;
    rest.split_once(&format!("</{name}>")).map(|(held, _)| held)
}

/// The one file: the policy on top of the head; in the body the blocks and the script that opens them.
fn assembled(parts: &Parts, unpack: &str, blocks: &str) -> Result<String, String> {
    let unpack = tight(&bare(unpack));
    if unpack.to_ascii_lowercase().contains("</script") {
        return Err(format!("www/{UNPACK}: holds </script, which would end its block"));
    }
    let policy = format!(
        "{CHARSET}\n<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; script-src {} {} 'wasm-unsafe-eval'; style-src {}; \
         img-src blob: data:; worker-src blob:; connect-src 'none'; base-uri 'none'; form-action 'none'\">",
        hash(&unpack),
        hash(&parts.scripts),
        hash(&parts.styles)
    );
    if parts.head.matches(CHARSET).count() != 1 || parts.scripts.is_empty() || parts.styles.is_empty() {
        return Err(format!("www/index.html: expected one {CHARSET}, a style sheet and scripts"));
    }
    let head = parts.head.replacen(CHARSET, &policy, 1);
    Ok(format!(
        "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n{head}</head>\n<body>\n{}\n{blocks}<script>{unpack}</script>\n</body>\n</html>\n",
        parts.without_scripts
    ))
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

/// A bare script without blanks around its signs, but for those between two pluses or minuses, and without line ends
/// where a statement ends or goes on. Texts in quotes stay; the
/// script has neither patterns nor templates.
fn tight(script: &str) -> String {
    let mut kept = String::with_capacity(script.len());
    let mut quote = None;
    let mut letters = script.chars().peekable();
    while let Some(letter) = letters.next() {
        if quote.is_some() {
            quote = quote.filter(|open| *open != letter);
        } else if letter == '"' || letter == '\'' {
            quote = Some(letter);
        } else if letter == ' ' {
            let (before, after) = (kept.chars().next_back().unwrap_or(' '), letters.peek().copied().unwrap_or(' '));
            let sign = |c: char| c.is_ascii_punctuation() && !matches!(c, '_' | '$' | '"' | '\'');
            if (sign(before) || sign(after)) && !(before == after && matches!(before, '+' | '-')) {
                continue;
            }
        } else if letter == '\n' && kept.ends_with(['{', ';', ',', '(', '[']) {
            continue;
        }
        kept.push(letter);
    }
    kept
}

fn between<'a>(line: &'a str, open: &str, close: &str) -> Option<&'a str> {
    line.strip_prefix(open)?.strip_suffix(close).filter(|name| !name.contains('"'))
}

/// The hash of a block's exact text, as the policy names it.
fn hash(text: &str) -> String {
    format!("'sha256-{}'", STANDARD.encode(Sha256::digest(text.as_bytes())))
}

#[cfg(test)]
mod tests {
    use super::{assembled, bare, hash, taken_apart, tight};

    const INDEX: &str = "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n<link rel=\"stylesheet\" href=\"a.css\">\n</head>\n\
        <body>\n<main>\n  <p>Shown</p>\n</main>\n<noscript>Not shown</noscript>\n<script src=\"a.js\"></script>\n<script src=\"b.js\"></script>\n</body>\n</html>\n";

    fn text_of(name: &str) -> Result<String, String> {
        Ok(format!("{{{name}}}\n"))
    }

    #[test]
    fn a_page_is_taken_apart_and_nothing_is_lost() {
        let parts = taken_apart(INDEX, text_of).unwrap();
        assert_eq!(parts.head, "<meta charset=\"utf-8\">\n");
        assert_eq!(parts.body, "<main>\n<p>Shown</p>\n</main>\n");
        assert_eq!(parts.without_scripts, "<noscript>Not shown</noscript>");
        assert_eq!(parts.styles, "{a.css}\n");
        assert_eq!(parts.scripts, "{a.js}\n{b.js}\n");
    }

    #[test]
    fn styles_and_scripts_are_named_in_the_policy_by_their_hashes() {
        let parts = taken_apart(INDEX, text_of).unwrap();
        let html = assembled(&parts, "open();", "BLOCKS\n").unwrap();
        assert!(html.ends_with("<noscript>Not shown</noscript>\nBLOCKS\n<script>open();</script>\n</body>\n</html>\n"));
        assert!(html.contains(&format!(
            "script-src {} {} 'wasm-unsafe-eval'; style-src {};",
            hash("open();"),
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
    fn blanks_go_where_no_word_and_no_sign_could_run_together() {
        assert_eq!(
            tight("let a = b - -c + +d;\nreturn a ? \"x + y\" : 'a = b';\n"),
            "let a=b- -c+ +d;return a?\"x + y\":'a = b';"
        );
    }

    #[test]
    fn a_hash_is_the_published_one_of_the_empty_text() {
        // Source: FIPS 180-4, SHA-256 of the empty message, e3b0c442...b855, in base64.
        assert_eq!(hash(""), "'sha256-47DEQpj8HBSa+/TImW+5JCeuQeRkm5NMpJWZG3hSuFU='");
    }

    #[test]
    fn an_address_outside_the_page_is_refused() {
        assert!(taken_apart(&INDEX.replace("<script src", "<script defer src"), text_of).is_err());
        assert!(taken_apart(&INDEX.replace("<body>", ""), text_of).is_err());
        let parts = taken_apart(INDEX, text_of).unwrap();
        assert!(assembled(&parts, "</SCRIPT>", "").is_err());
    }
}
