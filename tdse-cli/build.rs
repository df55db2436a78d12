//! Tells the program which commit it was built from, where git knows.

use std::process::Command;

fn main() {
    println!("cargo:rerun-if-changed=../.git/HEAD");
    println!("cargo:rerun-if-changed=../.git/logs/HEAD");
    let described = Command::new("git").args(["describe", "--always", "--dirty", "--abbrev=12"]).output();
    let commit = described.ok().filter(|output| output.status.success());
    let commit = commit.and_then(|output| String::from_utf8(output.stdout).ok()).unwrap_or_default();
    if !commit.trim().is_empty() {
        println!("cargo:rustc-env=TDSE_COMMIT={}", commit.trim());
    }
}
