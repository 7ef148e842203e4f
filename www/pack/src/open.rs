//! How is a file or address opened in the default browser?

use std::process::{Command, Stdio};

/// Opens `what`, or says how to do so by hand.
pub fn open(what: &str) {
    let mut command = if cfg!(target_os = "windows") {
        let mut command = Command::new("cmd");
        command.args(["/C", "start", ""]);
        command
    } else if cfg!(target_os = "macos") {
        Command::new("open")
    } else {
        Command::new("xdg-open")
    };
    let opened = command.arg(what).stdin(Stdio::null()).stdout(Stdio::null()).stderr(Stdio::null()).status();
    if opened.is_ok_and(|status| status.success()) {
        println!("Opened {what}");
    } else {
        println!("No browser could be opened from here. Open this yourself: {what}");
    }
}
