//! Are the rules of DEVELOPERS.md kept by the tree itself?
//!
//! Each rule is an absence that can be read off the text of the sources. Every check is shown able to fail.

use std::fs;
use std::path::{Path, PathBuf};

/// A source file: its path from the root, and its text.
struct Source {
    path: String,
    text: String,
}

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// Files below a folder with one of the endings, in order.
fn sources(folder: &str, endings: &[&str]) -> Vec<Source> {
    fn walk(folder: &Path, found: &mut Vec<PathBuf>) {
        for entry in fs::read_dir(folder).expect("a folder of the repository") {
            let path = entry.expect("a readable entry").path();
            let name = path.file_name().and_then(|name| name.to_str()).unwrap_or_default();
            if path.is_dir() {
                if name != "node_modules" && name != "target" {
                    walk(&path, found);
                }
            } else {
                found.push(path);
            }
        }
    }
    let mut paths = Vec::new();
    walk(&root().join(folder), &mut paths);
    paths.sort();
    paths
        .into_iter()
        .filter(|path| endings.iter().any(|ending| path.to_string_lossy().ends_with(ending)))
        .map(|path| Source {
            path: path.strip_prefix(root()).expect("below the root").to_string_lossy().replace('\\', "/"),
            text: fs::read_to_string(&path).expect("UTF-8 text"),
        })
        .collect()
}

/// The modules of src/lib.rs in the order in which they are declared: the layer order.
fn layers(lib: &str) -> Vec<String> {
    lib.lines().filter_map(|line| line.strip_prefix("pub mod ")?.strip_suffix(';').map(str::to_owned)).collect()
}

/// Uses of a module that stands later in the layer order, as "path: line".
fn upward_uses(source: &Source, layers: &[String]) -> Vec<String> {
    let below_src = source.path.trim_start_matches("src/");
    let own = below_src.split('/').next().unwrap_or_default().trim_end_matches(".rs");
    let Some(own_rank) = layers.iter().position(|layer| layer == own) else { return Vec::new() };
    source
        .text
        .lines()
        .filter(|line| !line.trim_start().starts_with("//"))
        .filter(|line| {
            line.match_indices("crate::").any(|(at, found)| {
                let name: String =
                    line[at + found.len()..].chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect();
                layers.iter().position(|layer| *layer == name).is_some_and(|rank| rank > own_rank)
            })
        })
        .map(|line| format!("{}: {}", source.path, line.trim()))
        .collect()
}

#[test]
fn a_layer_uses_only_those_above_it() {
    let lib = fs::read_to_string(root().join("src/lib.rs")).expect("src/lib.rs");
    let layers = layers(&lib);
    assert!(layers.len() > 10, "the layer order was not read: {layers:?}");
    let found: Vec<String> = sources("src", &[".rs"]).iter().flat_map(|source| upward_uses(source, &layers)).collect();
    assert!(found.is_empty(), "{found:#?}");
    let planted = Source { path: "src/time/scale.rs".into(), text: "use crate::sky::Sky;\n".into() };
    assert_eq!(upward_uses(&planted, &layers).len(), 1, "the check does not see a planted upward use");
}

#[test]
fn every_module_opens_with_its_question() {
    let bare: Vec<String> = ["src", "www"]
        .iter()
        .flat_map(|folder| sources(folder, &[".rs"]))
        .filter(|source| !source.text.starts_with("//! "))
        .map(|source| source.path)
        .collect();
    assert!(bare.is_empty(), "{bare:#?}");
}

#[test]
fn no_source_file_is_longer_than_500_lines() {
    let long: Vec<String> = ["src", "www", "tests"]
        .iter()
        .flat_map(|folder| sources(folder, &[".rs", ".js", ".mjs", ".css"]))
        .filter(|source| source.text.lines().count() > 500)
        .map(|source| source.path)
        .collect();
    assert!(long.is_empty(), "{long:#?}");
}

/// Lines that hold one of the words, comments aside, as "path: line".
fn lines_with(sources: &[Source], words: &[&str]) -> Vec<String> {
    sources
        .iter()
        .flat_map(|source| {
            source
                .text
                .lines()
                .filter(|line| !line.trim_start().starts_with("//") && words.iter().any(|word| line.contains(word)))
                .map(|line| format!("{}: {}", source.path, line.trim()))
        })
        .collect()
}

#[test]
fn the_core_has_no_clock_file_environment_print_or_chance() {
    let core: Vec<Source> = sources("src", &[".rs"])
        .into_iter()
        .filter(|source| !["src/main.rs", "src/web.rs"].contains(&source.path.as_str()))
        .filter(|source| !source.path.starts_with("src/command/"))
        .collect();
    let words = [
        "println!",
        "print!(",
        "eprintln!",
        "dbg!",
        "std::fs",
        "std::env",
        "std::net",
        "std::process",
        "SystemTime",
        "Instant::now",
        "thread_rng",
        "HashMap",
        "HashSet",
        "static mut",
        "thread_local",
    ];
    let found = lines_with(&core, &words);
    assert!(found.is_empty(), "{found:#?}");
    let planted = [Source { path: "src/sky/mod.rs".into(), text: "let now = SystemTime::now();".into() }];
    assert_eq!(lines_with(&planted, &words).len(), 1);
}

#[test]
fn the_browser_bindings_stay_in_the_shell_and_the_canvas_painter() {
    let found: Vec<String> = lines_with(&sources("src", &[".rs"]), &["wasm_bindgen", "web_sys", "js_sys"])
        .into_iter()
        .filter(|line| !line.starts_with("src/web") && !line.starts_with("src/paint/canvas.rs"))
        .collect();
    assert!(found.is_empty(), "{found:#?}");
}

/// Whether a line holds a colour: `#` and three to eight hexadecimal digits in quotes or CSS, or rgb(.
fn names_a_colour(line: &str) -> bool {
    if line.contains("rgb(") || line.contains("rgba(") || line.contains("hsl(") {
        return true;
    }
    line.match_indices('#').any(|(at, _)| {
        let digits = line[at + 1..].chars().take_while(char::is_ascii_hexdigit).count();
        let before = line[..at].chars().next_back();
        let after = line[at + 1 + digits..].chars().next();
        matches!(digits, 3 | 4 | 6 | 8)
            && matches!(before, None | Some('"' | '\'' | ' ' | ':'))
            && matches!(after, None | Some('"' | '\'' | ' ' | ';' | ','))
    })
}

#[test]
fn only_the_theme_names_a_colour() {
    let mut all = sources("src", &[".rs"]);
    all.extend(sources("www", &[".js", ".css", ".html"]));
    let found: Vec<String> = all
        .iter()
        .filter(|source| source.path != "src/scene/theme.rs")
        .flat_map(|source| {
            source
                .text
                .lines()
                .filter(|line| !line.trim_start().starts_with("//") && names_a_colour(line))
                .map(|line| format!("{}: {}", source.path, line.trim()))
        })
        .collect();
    assert!(found.is_empty(), "{found:#?}");
    assert!(names_a_colour("color: #f2b544;") && names_a_colour("\"#fff\"") && !names_a_colour("href=\"#plan=\""));
}

#[test]
fn position_angles_are_made_in_one_place() {
    // The arc of (east, north) outside frame would be a second maker.
    let found: Vec<String> = lines_with(
        &sources("src", &[".rs"]),
        &["atan2(xi", "atan2(east", "opposite: xi", "opposite: east", ".east), "],
    )
    .into_iter()
    .filter(|line| !line.starts_with("src/frame/"))
    .collect();
    assert!(found.is_empty(), "{found:#?}");
}

#[test]
fn the_visible_top_level_is_the_agreed_one() {
    let agreed = [
        "Cargo.toml",
        "Cargo.lock",
        "README.md",
        "DEVELOPERS.md",
        "LICENSE",
        "src",
        "www",
        "tests",
        "benches",
        "target",
    ];
    let found: Vec<String> = fs::read_dir(root())
        .expect("the root")
        .map(|entry| entry.expect("a readable entry").file_name().to_string_lossy().into_owned())
        .filter(|name| !name.starts_with('.') && !agreed.contains(&name.as_str()))
        .collect();
    assert!(found.is_empty(), "{found:?}");
}

#[test]
fn nothing_is_unfinished_or_switched_off() {
    let words: Vec<String> =
        ["todo", "unimplemented"].iter().map(|word| format!("{word}!(")).chain([["#[", "ignore"].concat()]).collect();
    let words: Vec<&str> = words.iter().map(String::as_str).collect();
    let mut all = sources("src", &[".rs"]);
    all.extend(sources("tests", &[".rs"]));
    all.extend(sources("www", &[".rs", ".js"]));
    let found = lines_with(&all, &words);
    assert!(found.is_empty(), "{found:#?}");
}
