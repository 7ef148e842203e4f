//! How is the command called?

use std::io::Write;
use std::process::{Command, Output, Stdio};

/// What `tailvane` answers to these arguments, with `input` on its standard input.
pub fn tailvane(arguments: &[&str], input: &str) -> Output {
    let mut child = Command::new(env!("CARGO_BIN_EXE_tailvane"))
        .args(arguments)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the command starts");
    // A call that is refused may end before it has read its input.
    let _ = child.stdin.take().expect("a pipe").write_all(input.as_bytes());
    child.wait_with_output().expect("the command ends")
}
