//! The rules of the structure, kept by reading the sources: who imports whom, who prints, who
//! touches files, which crates are needed, and that no file names a folder of one machine.
//!
//! Every rule is also run on planted wrong text, to show that it would catch it.

#[path = "architecture/layers.rs"]
mod layers;
#[path = "architecture/names.rs"]
mod names;
#[path = "architecture/project.rs"]
mod project;

/// The messages for planted sources.
fn planted(files: &[(&str, &str)]) -> Vec<String> {
    let owned = |(file, text): &(&str, &str)| ((*file).to_owned(), (*text).to_owned());
    let files: Vec<_> = files.iter().map(owned).collect();
    layers::check(&files)
        .iter()
        .map(ToString::to_string)
        .collect()
}

/// Asserts that exactly one message comes and that it holds all fragments.
fn caught(files: &[(&str, &str)], fragments: &[&str]) {
    let messages = planted(files);
    assert_eq!(messages.len(), 1, "{files:?}: {messages:?}");
    for fragment in fragments {
        assert!(
            messages[0].contains(fragment),
            "{} lacks {fragment}",
            messages[0]
        );
    }
}

#[test]
fn the_sources_keep_the_rules() {
    let sources = project::sources("src");
    assert!(
        sources.len() > 10,
        "only {} sources were found",
        sources.len()
    );
    let breaches: Vec<_> = layers::check(&sources)
        .iter()
        .map(ToString::to_string)
        .collect();
    assert!(breaches.is_empty(), "\n{}", breaches.join("\n"));
}

#[test]
fn an_import_against_the_layers_is_caught_in_every_form() {
    for text in [
        "use std::fmt;\nuse crate::config::Tree;",
        "use crate::{\n    config::{read, Tree as T}, series};",
        "fn f() {\n    crate::config::read::load() }",
        "use super::super::config;\nfn f() -> u8 { 1 }",
        "fn f() -> String {\n    format!(\"{}\", crate::config::NAME) }",
        "type T =\n Vec<Option<crate::config::Tree>>;",
        "mod inner {\n use super::super::super::config as c; }",
        "#[cfg(test)] mod tests {\n use crate::config::Tree; }",
        "macro_rules! m { () => {\n $crate::config::x() } }",
    ] {
        let messages = planted(&[("src/physics/saturation.rs", text)]);
        assert!(!messages.is_empty(), "not caught: {text}");
        let line = if text.contains("super::super::config;") {
            1
        } else {
            2
        };
        for message in messages {
            let place = format!("src/physics/saturation.rs:{line}: `physics` imports `config`");
            assert!(message.starts_with(&place), "{text}: {message}");
        }
    }
}

#[test]
fn components_that_import_one_another_are_caught() {
    let ocean = ("src/physics/ocean_column/mod.rs", "");
    let file = "src/physics/energy_balance/albedo.rs";
    for text in [
        "use crate::physics::ocean_column::Params;",
        "use super::super::ocean_column::Params;",
        "use crate::physics::{budget, ocean_column as o};",
        "fn f() { crate::physics::ocean_column::f() }",
    ] {
        let fragments = [
            file,
            ":1:",
            "`energy_balance`",
            "`ocean_column`",
            "exchange",
        ];
        caught(&[(file, text), ocean], &fragments);
    }
    let alias = "use crate::physics;\nfn f() { physics::ocean_column::f() }";
    caught(&[(file, alias), ocean], &[":2:", "`ocean_column`"]);
    caught(&[(file, "use crate::physics::*;")], &["all of `physics`"]);
    // A single file is a component when it implements the trait, else it is shared.
    let single = (
        "src/physics/carbon.rs",
        "impl super::Component for Carbon {}",
    );
    let user = "use crate::physics::{budget::Ledger, carbon::Carbon};";
    caught(&[(file, user), single], &["`energy_balance`", "`carbon`"]);
    caught(
        &[("src/physics/exchange.rs", user), single],
        &["`exchange`", "`carbon`"],
    );
}

#[test]
fn unknown_modules_and_the_root_are_caught() {
    caught(
        &[("src/novelty.rs", "use crate::units::X;")],
        &["`novelty` is not in the table"],
    );
    caught(
        &[("src/grid/mod.rs", "use crate::novelty::X;")],
        &["`grid` imports `novelty`"],
    );
    caught(&[("src/grid/mod.rs", "use crate::*;")], &["crate root"]);
    caught(
        &[("src/model/mod.rs", "use crate::cli::run;")],
        &["`model` imports `cli`"],
    );
}

#[test]
fn printing_unsafe_and_files_in_the_wrong_place_are_caught() {
    caught(
        &[("src/model/mod.rs", "fn f() {\n println!(\"x\") }")],
        &[":2:", "`println!`"],
    );
    caught(
        &[("src/model/mod.rs", "use std::io::stderr;")],
        &["`model`", "stderr"],
    );
    caught(
        &[("src/model/mod.rs", "fn f() {\n unsafe {} }")],
        &[":2:", "`unsafe`"],
    );
    caught(
        &[("src/model/mod.rs", "use std::{fmt, fs::File};")],
        &["`model`", "std::fs"],
    );
    caught(
        &[("src/orbit/mod.rs", "fn f() { std::fs::read(p) }")],
        &["`orbit`", "std::fs"],
    );
    caught(
        &[("src/model/mod.rs", "use hdf5::File;")],
        &["`model`", "`hdf5`"],
    );
    caught(
        &[("src/physics/a.rs", "fn f(x: toml::Value) {}")],
        &["`physics`", "`toml`"],
    );
    caught(&[("src/model/mod.rs", "fn f( {")], &["cannot be parsed"]);
}

#[test]
fn what_is_allowed_is_not_caught() {
    let messages = planted(&[
        (
            "src/lib.rs",
            "pub mod cli; pub mod units; pub use crate::units::X;",
        ),
        (
            "src/main.rs",
            "fn main() { orbicline::cli::run(); eprintln!(\"x\") }",
        ),
        (
            "src/cli/mod.rs",
            "use crate::validate; fn f() { println!(\"{}\", crate::units::X) }",
        ),
        (
            "src/output/netcdf4.rs",
            "fn f() { unsafe { hdf5_sys::g() } }",
        ),
        ("src/orbit/solution/tables.rs", "use std::fs::File;"),
        (
            "src/orbit/mod.rs",
            "#[cfg(test)] mod tests { use super::*; use std::fs; use toml::Table; }",
        ),
        (
            "src/physics/mod.rs",
            "pub mod ice; pub(in crate::physics) use ice::X; use self::ice::Y;",
        ),
        (
            "src/physics/ice/mod.rs",
            "use crate::physics::ice::a; use super::exchange::Exchange;",
        ),
        (
            "src/grid/mod.rs",
            "//! crate::cli\n/* println!() */ const A: &str = \"crate::cli\";",
        ),
    ]);
    assert!(messages.is_empty(), "{messages:?}");
}

#[test]
fn every_crate_asked_for_is_used() {
    let manifest = include_str!("../Cargo.toml");
    let folders = ["src", "tests", "benches", "validation"];
    let sources: Vec<_> = folders.iter().flat_map(|f| project::sources(f)).collect();
    let unused = project::unused(manifest, &sources);
    assert!(
        unused.is_empty(),
        "no source uses {unused:?}: remove them from Cargo.toml"
    );
}

#[test]
fn a_crate_that_nothing_uses_is_caught() {
    let manifest = "[dependencies]\nused-one = \"1\"\nidle = \"1\"\n\
        [dev-dependencies]\nidle_too = { version = \"1\" }\n";
    let text = "// idle\nuse used_one::X; const A: &str = \"idle_too\";";
    let sources = [("src/lib.rs".to_owned(), text.to_owned())];
    assert_eq!(project::unused(manifest, &sources), ["idle", "idle_too"]);
}

#[test]
fn no_file_names_a_folder_of_one_machine() {
    let files = project::files("");
    assert!(files.iter().any(|(path, _)| path == "Cargo.toml"));
    let found: Vec<_> = files
        .iter()
        .filter_map(|(path, bytes)| Some((path, std::str::from_utf8(bytes).ok()?)))
        .flat_map(|(path, text)| project::machine_paths(path, text))
        .collect();
    assert!(found.is_empty(), "\n{}", found.join("\n"));
}

#[test]
fn a_folder_of_one_machine_is_caught() {
    let home = format!("a\nsee /{}/me/x", "home");
    assert_eq!(project::machine_paths("f", &home).len(), 1);
    assert!(project::machine_paths("f", &home)[0].starts_with("f:2:"));
    let harmless = format!("https://example.org/{0}/x $HOME/{0}/x a/{0}/b", "work");
    assert!(project::machine_paths("f", &harmless).is_empty());
}
