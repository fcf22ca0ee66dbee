//! The command line as people and scripts meet it.

mod backup;
mod evaluate;
mod help;
mod people;
mod serve;
mod verify;

use std::ffi::OsStr;
use std::io::Write;
use std::process::{Command, Output, Stdio};

/// The program, with no settings of the environment it is tested in.
pub fn program() -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_wheelwort"));
    for (name, _) in std::env::vars_os() {
        if name.to_string_lossy().starts_with("WHEELWORT_") {
            command.env_remove(name);
        }
    }
    command
}

/// Runs the program to its end.
pub fn run<A: AsRef<OsStr>>(arguments: &[A], input: &[u8]) -> Output {
    let mut child = program()
        .args(arguments)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("starts");
    let mut stdin = child.stdin.take().expect("an input");
    let input = input.to_vec();
    let feeding = std::thread::spawn(move || {
        let _ = stdin.write_all(&input);
    });
    let output = child.wait_with_output().expect("ends");
    feeding.join().expect("fed");
    output
}
