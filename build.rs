//! Tells the program which commit it is built from.
//!
//! Sets `ORBICLINE_GIT_COMMIT`: the commit, with `-dirty` when tracked files differ from it, or
//! `unknown` outside a checkout of this project or without git.

use std::path::{Path, PathBuf};
use std::process::Command;

fn main() {
    // The mark `-dirty` depends on the sources, so look again whenever they change.
    for path in ["build.rs", "src", "Cargo.toml", "Cargo.lock"] {
        println!("cargo::rerun-if-changed={path}");
    }
    let commit = commit().unwrap_or_else(|| "unknown".to_owned());
    println!("cargo::rustc-env=ORBICLINE_GIT_COMMIT={commit}");
}

fn commit() -> Option<String> {
    let here = std::env::current_dir().ok()?.canonicalize().ok()?;
    // Sources unpacked inside some other repository must not report that one's commit.
    let top = PathBuf::from(git(&["rev-parse", "--show-toplevel"])?);
    if top.canonicalize().ok()? != here {
        return None;
    }
    let commit = git(&["rev-parse", "--short=12", "HEAD"])?;
    watch_head(&here);
    let changes = git(&["status", "--porcelain", "--untracked-files=no"])?;
    let mark = if changes.is_empty() { "" } else { "-dirty" };
    Some(commit + mark)
}

/// Looks again when a commit or a checkout moves HEAD. In a linked worktree `.git` is a file, so
/// git is asked where its files are.
fn watch_head(here: &Path) {
    let mut names = vec!["HEAD".to_owned(), "packed-refs".to_owned()];
    names.extend(git(&["symbolic-ref", "--quiet", "HEAD"]));
    for name in names {
        let Some(path) = git(&["rev-parse", "--git-path", &name]) else {
            continue;
        };
        let path = here.join(path);
        // Cargo would run this at every build for a path that does not exist.
        if path.exists() {
            println!("cargo::rerun-if-changed={}", path.display());
        }
    }
}

fn git(arguments: &[&str]) -> Option<String> {
    let output = Command::new("git").args(arguments).output().ok()?;
    if !output.status.success() {
        return None;
    }
    Some(String::from_utf8(output.stdout).ok()?.trim().to_owned())
}
