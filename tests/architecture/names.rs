//! Finds in Rust source every path that names another module or crate, with its line.
//!
//! Source is parsed, so that nested and multi-line `use`, inline paths, renamed imports and paths
//! inside macro calls are seen, and comments and texts are not.

use proc_macro2::{TokenStream, TokenTree};
use std::collections::BTreeMap;
use syn::visit::{self, Visit};

/// A path found in a source file, resolved: `["crate", "physics", "budget"]`, `["std", "fs"]`.
#[derive(Debug)]
pub(crate) struct Found {
    /// Line, counted from one.
    pub(crate) line: usize,
    /// Segments; `*` stands for a glob import.
    pub(crate) path: Vec<String>,
    /// Whether it stands in code compiled for unit tests only.
    pub(crate) test_only: bool,
}

/// What one file holds.
pub(crate) struct Names {
    /// All paths.
    pub(crate) paths: Vec<Found>,
    /// Traits implemented outside unit tests.
    pub(crate) implemented: Vec<String>,
}

/// All names in the source of `module` (its path from the crate root).
pub(crate) fn names(module: &[String], text: &str) -> Result<Names, syn::Error> {
    let file = syn::parse_file(text)?;
    let mut collector = Collector {
        module: module.to_vec(),
        aliases: BTreeMap::new(),
        test_depth: 0,
        names: Names {
            paths: Vec::new(),
            implemented: Vec::new(),
        },
    };
    // Imports first: what a function names may be imported further down.
    collector.visit_file(&file);
    collector.names.paths.clear();
    collector.names.implemented.clear();
    collector.visit_file(&file);
    Ok(collector.names)
}

struct Collector {
    module: Vec<String>,
    aliases: BTreeMap<String, Vec<String>>,
    test_depth: usize,
    names: Names,
}

impl Collector {
    /// The path from the crate root (or from an outside crate).
    fn resolve(&self, path: &[String]) -> Vec<String> {
        let first = path.first().map_or("", String::as_str);
        let mut base = vec!["crate".to_owned()];
        let mut rest = path;
        match first {
            "crate" | "orbicline" => rest = &path[1..],
            "self" | "super" => {
                base.extend(self.module.iter().cloned());
                while let Some(step) = rest.first().filter(|s| *s == "self" || *s == "super") {
                    if step == "super" {
                        base.pop();
                    }
                    rest = &rest[1..];
                }
            }
            _ => match self.aliases.get(first) {
                Some(known) => {
                    base.clone_from(known);
                    rest = &path[1..];
                }
                None => base.clear(),
            },
        }
        base.extend(rest.iter().cloned());
        base
    }

    fn note(&mut self, line: usize, path: &[String]) {
        self.names.paths.push(Found {
            line,
            path: self.resolve(path),
            test_only: self.test_depth > 0,
        });
    }

    fn import(&mut self, prefix: &[String], tree: &syn::UseTree) {
        let below = |ident: &syn::Ident| {
            let mut path = prefix.to_vec();
            if ident != "self" || prefix.is_empty() {
                path.push(ident.to_string());
            }
            path
        };
        match tree {
            syn::UseTree::Path(part) => self.import(&below(&part.ident), &part.tree),
            syn::UseTree::Name(name) => {
                let path = below(&name.ident);
                let alias = path.last().cloned().unwrap_or_default();
                self.bind(line(&name.ident), &path, alias);
            }
            syn::UseTree::Rename(name) => {
                let path = below(&name.ident);
                self.bind(line(&name.ident), &path, name.rename.to_string());
            }
            syn::UseTree::Glob(glob) => {
                let mut path = prefix.to_vec();
                path.push("*".to_owned());
                self.note(glob.star_token.spans[0].start().line, &path);
            }
            syn::UseTree::Group(group) => {
                for item in &group.items {
                    self.import(prefix, item);
                }
            }
        }
    }

    fn bind(&mut self, line: usize, path: &[String], alias: String) {
        self.note(line, path);
        let resolved = self.resolve(path);
        // A crate imported by its own name needs no alias.
        if resolved.len() > 1 {
            self.aliases.insert(alias, resolved);
        }
    }

    /// Paths in the unparsed text of a macro call.
    fn tokens(&mut self, stream: TokenStream) {
        let mut path: Vec<String> = Vec::new();
        let (mut start, mut colons) = (0, 0);
        for token in stream {
            match token {
                TokenTree::Punct(mark) if mark.as_char() == ':' => colons += 1,
                TokenTree::Ident(ident) => {
                    if colons != 2 || path.is_empty() {
                        self.flush(start, &mut path);
                        start = line(&ident);
                    }
                    path.push(ident.to_string());
                    colons = 0;
                }
                other => {
                    self.flush(start, &mut path);
                    colons = 0;
                    if let TokenTree::Group(group) = other {
                        self.tokens(group.stream());
                    }
                }
            }
        }
        self.flush(start, &mut path);
    }

    fn flush(&mut self, line: usize, path: &mut Vec<String>) {
        if path.len() > 1 {
            self.note(line, path);
        }
        path.clear();
    }
}

fn line(ident: &syn::Ident) -> usize {
    ident.span().start().line
}

fn is_for_tests(attributes: &[syn::Attribute]) -> bool {
    attributes.iter().any(|attribute| match &attribute.meta {
        syn::Meta::List(list) => list.path.is_ident("cfg") && list.tokens.to_string() == "test",
        _ => false,
    })
}

impl<'ast> Visit<'ast> for Collector {
    fn visit_item_mod(&mut self, item: &'ast syn::ItemMod) {
        let depth = usize::from(is_for_tests(&item.attrs));
        self.test_depth += depth;
        self.module.push(item.ident.to_string());
        visit::visit_item_mod(self, item);
        self.module.pop();
        self.test_depth -= depth;
    }

    fn visit_item_use(&mut self, item: &'ast syn::ItemUse) {
        let depth = usize::from(is_for_tests(&item.attrs));
        self.test_depth += depth;
        self.import(&[], &item.tree);
        self.test_depth -= depth;
    }

    fn visit_item_impl(&mut self, item: &'ast syn::ItemImpl) {
        let depth = usize::from(is_for_tests(&item.attrs));
        self.test_depth += depth;
        if self.test_depth == 0
            && let Some(name) = implemented(item)
        {
            self.names.implemented.push(name);
        }
        visit::visit_item_impl(self, item);
        self.test_depth -= depth;
    }

    fn visit_path(&mut self, path: &'ast syn::Path) {
        let segments: Vec<_> = path.segments.iter().map(|s| s.ident.to_string()).collect();
        if segments.len() > 1 {
            self.note(line(&path.segments[0].ident), &segments);
        }
        visit::visit_path(self, path);
    }

    fn visit_macro(&mut self, call: &'ast syn::Macro) {
        visit::visit_macro(self, call);
        self.tokens(call.tokens.clone());
    }

    // `pub(in crate::x)` imports nothing.
    fn visit_visibility(&mut self, _: &'ast syn::Visibility) {}
}

fn implemented(item: &syn::ItemImpl) -> Option<String> {
    let (path, _) = item.trait_.as_ref()?;
    Some(path.segments.last()?.ident.to_string())
}

/// A word of the source and whether `!` follows it.
pub(crate) struct Word {
    /// The identifier or keyword.
    pub(crate) text: String,
    /// Line, counted from one.
    pub(crate) line: usize,
    /// Whether it is the name of a macro being called.
    pub(crate) called_as_macro: bool,
}

/// All words outside comments and texts.
pub(crate) fn words(text: &str) -> Vec<Word> {
    let mut words = Vec::new();
    if let Ok(stream) = text.parse::<TokenStream>() {
        collect_words(stream, &mut words);
    }
    words
}

fn collect_words(stream: TokenStream, words: &mut Vec<Word>) {
    let mut tokens = stream.into_iter().peekable();
    while let Some(token) = tokens.next() {
        match token {
            TokenTree::Group(group) => collect_words(group.stream(), words),
            TokenTree::Ident(ident) => words.push(Word {
                text: ident.to_string(),
                line: line(&ident),
                called_as_macro: matches!(
                    tokens.peek(), Some(TokenTree::Punct(mark)) if mark.as_char() == '!'
                ),
            }),
            _ => {}
        }
    }
}
