//! Data flows one way through the rooms of the crate, and a room imports only from those before
//! it. This is read off the source, so that a shortcut cannot slip in.

use std::fs;
use std::path::{Path, PathBuf};

/// The rooms from left to right.
const ROOMS: [&str; 9] = [
    "number",
    "function",
    "approximant",
    "bound",
    "claim",
    "audit",
    "certificate",
    "output",
    "cli",
];

fn place(room: &str) -> Option<usize> {
    ROOMS.iter().position(|name| *name == room)
}

fn rust_files(folder: &Path, found: &mut Vec<PathBuf>) {
    let entries = fs::read_dir(folder).expect("the source folder can be read");
    for entry in entries {
        let path = entry.expect("an entry").path();
        if path.is_dir() {
            rust_files(&path, found);
        } else if path.extension().is_some_and(|ending| ending == "rs") {
            found.push(path);
        }
    }
}

/// The code with comments, strings and characters blanked out, line breaks kept.
fn without_comments_and_strings(source: &str) -> String {
    let bytes = source.as_bytes();
    let mut code = bytes.to_vec();
    let mut at = 0;
    while at < bytes.len() {
        let rest = &source[at..];
        let length = if rest.starts_with("//") {
            rest.find('\n').unwrap_or(rest.len())
        } else if rest.starts_with("/*") {
            rest.find("*/").map_or(rest.len(), |end| end + 2)
        } else if let Some(length) = raw_string(rest) {
            length
        } else if rest.starts_with('"') {
            quoted(rest, b'"').unwrap_or(rest.len())
        } else if rest.starts_with('\'') {
            character(rest)
        } else {
            at += rest.chars().next().map_or(1, char::len_utf8);
            continue;
        };
        for byte in &mut code[at..at + length] {
            if *byte != b'\n' {
                *byte = b' ';
            }
        }
        at += length;
    }
    String::from_utf8(code).expect("only whole comments and strings were blanked out")
}

fn raw_string(text: &str) -> Option<usize> {
    let after = text.strip_prefix('r').or(text.strip_prefix("br"))?;
    let hashes = after.len() - after.trim_start_matches('#').len();
    let inside = after[hashes..].strip_prefix('"')?;
    let close = format!("\"{}", "#".repeat(hashes));
    let start = text.len() - inside.len();
    Some(
        inside
            .find(&close)
            .map_or(text.len(), |end| start + end + close.len()),
    )
}

/// Length of a quoted text with its quotes.
fn quoted(text: &str, quote: u8) -> Option<usize> {
    let mut escaped = false;
    for (index, byte) in text.bytes().enumerate().skip(1) {
        match byte {
            _ if escaped => escaped = false,
            b'\\' => escaped = true,
            _ if byte == quote => return Some(index + 1),
            _ => {}
        }
    }
    None
}

/// Length of a character with its quotes, or of the quote alone before a lifetime.
fn character(text: &str) -> usize {
    let mut inside = text[1..].chars();
    match (inside.next(), inside.next()) {
        (Some('\\'), _) => quoted(text, b'\'').unwrap_or(1),
        (Some(one), Some('\'')) => 2 + one.len_utf8(),
        _ => 1,
    }
}

/// The parts of the code that stand under `#[cfg(test)]`: an item with its braces, or up to its semicolon.
fn test_spans(code: &str) -> Vec<(usize, usize)> {
    const MARK: &str = "#[cfg(test)]";
    let mut spans = Vec::new();
    let mut from = 0;
    while let Some(found) = code[from..].find(MARK) {
        let start = from + found;
        let mut depth = 0usize;
        let mut end = code.len();
        for (index, byte) in code.bytes().enumerate().skip(start + MARK.len()) {
            match byte {
                b'{' => depth += 1,
                b'}' => depth = depth.saturating_sub(1),
                b';' => {}
                _ => continue,
            }
            if depth == 0 {
                end = index + 1;
                break;
            }
        }
        spans.push((start, end));
        from = end;
    }
    spans
}

/// A room that the code names, and where.
#[derive(Debug, PartialEq)]
struct Mention {
    line: usize,
    room: String,
}

/// Every room named by a path from the root of the crate: `crate::ROOM`, `crate::{ROOM, ...}`, and
/// enough `super::` to arrive at the root. `depth` is the number of modules above the file's code.
fn mentions(source: &str, depth: usize) -> Vec<Mention> {
    let code = without_comments_and_strings(source);
    let tests = test_spans(&code);
    let mut found = Vec::new();
    let mut see = |offset: usize, path: &str| {
        if tests
            .iter()
            .any(|(from, to)| (*from..*to).contains(&offset))
        {
            return;
        }
        let line = 1 + code[..offset].matches('\n').count();
        for room in first_names(path) {
            let mention = Mention { line, room };
            if !found.contains(&mention) {
                found.push(mention);
            }
        }
    };
    for (offset, word) in code.match_indices("crate::") {
        if !follows_a_name(&code, offset) {
            see(offset, &code[offset + word.len()..]);
        }
    }
    let climb = "super::".repeat(depth);
    for (offset, _) in code.match_indices(climb.as_str()) {
        if depth > 0 && !follows_a_name(&code, offset) {
            see(offset, &code[offset + climb.len()..]);
        }
    }
    found
}

/// Whether what stands at `offset` continues a longer name or path.
fn follows_a_name(code: &str, offset: usize) -> bool {
    code[..offset]
        .chars()
        .next_back()
        .is_some_and(|before| before.is_alphanumeric() || before == '_' || before == ':')
}

/// The names that a path or a list of paths in braces begins with.
fn first_names(path: &str) -> Vec<String> {
    let path = path.trim_start();
    let Some(list) = path.strip_prefix('{') else {
        return name(path).into_iter().collect();
    };
    let mut names = Vec::new();
    let mut depth = 0usize;
    let mut expects = true;
    for (index, character) in list.char_indices() {
        match character {
            '{' => depth += 1,
            '}' if depth == 0 => break,
            '}' => depth -= 1,
            ',' if depth == 0 => expects = true,
            _ if expects && !character.is_whitespace() => {
                names.extend(name(&list[index..]));
                expects = false;
            }
            _ => {}
        }
    }
    names
}

fn name(path: &str) -> Option<String> {
    let end = path
        .find(|c: char| !(c.is_alphanumeric() || c == '_'))
        .unwrap_or(path.len());
    (end > 0).then(|| path[..end].to_owned())
}

#[test]
fn rooms_import_only_from_rooms_before_them() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut files = Vec::new();
    rust_files(&root, &mut files);
    files.sort();
    let mut violations = Vec::new();
    let mut imports = 0;
    let mut seen = [false; ROOMS.len()];
    for file in &files {
        let relative = file.strip_prefix(&root).expect("below the source folder");
        let modules: Vec<String> = relative
            .with_extension("")
            .iter()
            .map(|part| part.to_string_lossy().into_owned())
            .collect();
        let Some(own) = place(&modules[0]) else {
            assert!(
                ["lib", "main"].contains(&modules[0].as_str()),
                "{} is in no room; add its room to the list in this test",
                relative.display()
            );
            continue;
        };
        seen[own] = true;
        if modules.last().is_some_and(|module| module == "tests") {
            continue;
        }
        let source = fs::read_to_string(file).expect("the source can be read");
        for mention in mentions(&source, modules.len()) {
            imports += 1;
            let where_it_is = format!("src/{}:{}", relative.display(), mention.line);
            match place(&mention.room) {
                Some(other) if other <= own => {}
                Some(_) => violations.push(format!(
                    "{where_it_is}: {} imports from {}, which comes after it",
                    modules[0], mention.room
                )),
                None => violations.push(format!(
                    "{where_it_is}: {} is not one of the rooms",
                    mention.room
                )),
            }
        }
    }
    assert!(
        seen.iter().all(|room| *room),
        "a room has no file: {seen:?}"
    );
    assert!(imports > 100, "only {imports} imports were recognised");
    assert!(violations.is_empty(), "\n{}", violations.join("\n"));
}

#[test]
fn rooms_are_in_the_order_that_the_documentation_gives() {
    let chain = ROOMS.join(" -> ");
    for file in ["src/lib.rs", "DEVELOPERS.md"] {
        let text = fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join(file))
            .expect("the file can be read");
        assert!(text.contains(&chain), "{file} does not say: {chain}");
    }
}

#[test]
fn every_way_to_import_is_recognised() {
    let rooms = |source: &str, depth: usize| -> Vec<String> {
        mentions(source, depth)
            .into_iter()
            .map(|mention| format!("{}@{}", mention.room, mention.line))
            .collect()
    };
    assert_eq!(rooms("use crate::cli::run;", 2), ["cli@1"]);
    assert_eq!(rooms("\npub use crate::cli as command;", 2), ["cli@2"]);
    assert_eq!(
        rooms(
            "use crate::{\n    number::{ball::Ball, radius},\n    output,\n};",
            2
        ),
        ["number@1", "output@1"]
    );
    assert_eq!(rooms("fn f() { crate::audit::run(); }", 2), ["audit@1"]);
    assert_eq!(rooms("use super::super::claim::model;", 2), ["claim@1"]);
    assert_eq!(rooms("use super::claim;", 2), [""; 0]);
    assert_eq!(rooms("use super::claim;", 1), ["claim@1"]);
    assert_eq!(
        rooms(
            "// use crate::cli;\nlet a = \"crate::cli\"; /* crate::cli */",
            2
        ),
        [""; 0]
    );
    assert_eq!(
        rooms("let a = ('\"', r#\"crate::cli \" \"#); crate::output::x", 2),
        ["output@1"]
    );
    assert_eq!(
        rooms(
            "#[cfg(test)]\nmod tests {\n    use crate::cli;\n    fn f() {}\n}\nuse crate::claim;",
            2
        ),
        ["claim@6"]
    );
    assert_eq!(
        rooms("#[cfg(test)]\nmod tests;\nuse crate::claim;", 2),
        ["claim@3"]
    );
    assert_eq!(rooms("fn f<'a>(x: &'a crate::cli::X) {}", 2), ["cli@1"]);
}
