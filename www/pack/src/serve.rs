//! How is the page served on loopback?
//!
//! A plain server for one person on the same machine: GET and HEAD, one request a connection, nothing but the
//! page and its unpacked parts. It listens on 127.0.0.1 only and refuses requests that name another host, so that no other site
//! can read through it.

use crate::open::open;
use crate::page::{GLUE, SITE_NUMBERS, SITES, WASM, WORDS, words};
use crate::sites;
use crate::wasm::Build;
use std::fs;
use std::io::{BufRead, BufReader, Read, Write};
use std::net::{Ipv4Addr, TcpListener, TcpStream};
use std::path::Path;
use std::time::Duration;

const USUAL_PORT: u16 = 8031;
/// A request line and its headers are never this long from a browser.
const LONGEST_REQUEST_BYTES: u64 = 65_536;

/// Serves until the process is ended.
///
/// # Errors
/// A port that cannot be had.
pub fn serve(root: &Path, build: &Build, page: &Path, port: Option<u16>, open_it: bool) -> Result<(), String> {
    let listener = match port {
        Some(port) => {
            TcpListener::bind((Ipv4Addr::LOCALHOST, port)).map_err(|e| format!("port {port} cannot be had: {e}"))?
        }
        None => TcpListener::bind((Ipv4Addr::LOCALHOST, USUAL_PORT))
            .or_else(|_| TcpListener::bind((Ipv4Addr::LOCALHOST, 0)))
            .map_err(|e| format!("no port can be had on loopback: {e}"))?,
    };
    let address = listener.local_addr().map_err(|e| e.to_string())?;
    println!("Serving http://{address}/ (unpacked for development: http://{address}/unpacked/). Stop with Ctrl+C.");
    if open_it {
        open(&format!("http://{address}/"));
    }
    std::thread::scope(|scope| {
        for stream in listener.incoming().flatten() {
            // A browser that goes away in the middle is its own business.
            scope.spawn(move || answer(stream, root, build, page, address.port()).ok());
        }
    });
    Ok(())
}

fn answer(mut stream: TcpStream, root: &Path, build: &Build, page: &Path, port: u16) -> std::io::Result<()> {
    stream.set_read_timeout(Some(Duration::from_secs(10)))?;
    let mut reader = BufReader::new(stream.try_clone()?.take(LONGEST_REQUEST_BYTES));
    let mut request = String::new();
    reader.read_line(&mut request)?;
    let mut host = String::new();
    loop {
        let mut header = String::new();
        if reader.read_line(&mut header)? == 0 || header.trim().is_empty() {
            break;
        }
        if let Some((name, value)) = header.split_once(':')
            && name.eq_ignore_ascii_case("host")
        {
            host = value.trim().to_string();
        }
    }
    let mut words = request.split_whitespace();
    let (method, target) = (words.next().unwrap_or_default(), words.next().unwrap_or_default());
    let path = target.split(['?', '#']).next().unwrap_or_default();
    let ours = [format!("127.0.0.1:{port}"), format!("localhost:{port}")].contains(&host);
    let found = if !ours || !["GET", "HEAD"].contains(&method) { None } else { content(path, root, build, page) };
    let (status, kind, body) = match found {
        Some((kind, body)) => ("200 OK", kind, body),
        None => ("404 Not Found", "text/plain", b"not here\n".to_vec()),
    };
    write!(
        stream,
        "HTTP/1.1 {status}\r\nContent-Type: {kind}; charset=utf-8\r\nContent-Length: {}\r\nCache-Control: no-store\r\nConnection: close\r\n\r\n",
        body.len()
    )?;
    if method != "HEAD" {
        stream.write_all(&body)?;
    }
    stream.flush()
}

/// What lies at `path`: the packed page, or a part of the unpacked one.
fn content(path: &str, root: &Path, build: &Build, page: &Path) -> Option<(&'static str, Vec<u8>)> {
    let part = match path {
        "/" | "/tailvane.html" => return fs::read(page).ok().map(|body| ("text/html", body)),
        "/unpacked/" => "index.html",
        _ => path.strip_prefix("/unpacked/")?,
    };
    match part {
        GLUE => return Some(("text/javascript", build.glue.clone().into_bytes())),
        WASM => return Some(("application/wasm", build.wasm.clone())),
        SITES => return Some(("text/plain", sites::read(root).ok()?.words.into_bytes())),
        WORDS => return words(root).ok().map(|text| ("application/octet-stream", text)),
        SITE_NUMBERS => return Some(("application/octet-stream", sites::read(root).ok()?.numbers)),
        _ => {}
    }
    // Names without folders only, so that nothing outside www/ can be reached.
    let plain = part.chars().all(|c| c.is_ascii_alphanumeric() || "-_.".contains(c)) && !part.starts_with('.');
    let kind = match part.rsplit_once('.')?.1 {
        "html" => "text/html",
        "css" => "text/css",
        "js" => "text/javascript",
        _ => return None,
    };
    if plain { fs::read(root.join("www").join(part)).ok().map(|body| (kind, body)) } else { None }
}
