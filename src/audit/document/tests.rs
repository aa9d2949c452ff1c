use proptest::prelude::*;

use super::*;

fn toml(text: &str) -> Result<Document, Box<Diagnostic>> {
    Document::parse("a.audit.toml", text.as_bytes().to_vec(), Syntax::Toml)
}

fn json(text: &str) -> Result<Document, Box<Diagnostic>> {
    Document::parse("a.audit.json", text.as_bytes().to_vec(), Syntax::Json)
}

/// A node by keys and, as numbers, elements.
fn find<'document>(document: &'document Document, steps: &[&str]) -> &'document Node {
    steps
        .iter()
        .fold(document.root(), |node, step| match &node.value {
            Value::Table(entries) => {
                &entries
                    .iter()
                    .find(|entry| &*entry.key == *step)
                    .expect("the key")
                    .node
            }
            Value::Array(elements) => &elements[step.parse::<usize>().expect("a number")],
            _ => panic!("no children"),
        })
}

fn written<'document>(document: &'document Document, steps: &[&str]) -> &'document str {
    &document.text()[find(document, steps).span()]
}

const TOML: &str = r#"
title = "a \"quoted\" title"
dotted.key = 0x10
[approximant]
pieces = [ { on = ["0", '1'], coefficients = [1, 0.5, "0x1p-3"] } ]
[[claims]]
of = "exact"
[[claims]]
at_most = 1e-3
since = 1979-05-27
"#;

#[test]
fn toml_values_have_their_places_and_paths() {
    let document = toml(TOML).unwrap();
    assert_eq!(
        find(&document, &["title"]).value,
        Value::Text("a \"quoted\" title".into())
    );
    assert_eq!(
        find(&document, &["dotted", "key"]).value,
        Value::Integer("16".into())
    );
    let half = find(
        &document,
        &["approximant", "pieces", "0", "coefficients", "1"],
    );
    assert_eq!(half.value, Value::Float("0.5".into()));
    assert_eq!(&document.text()[half.span()], "0.5");
    assert_eq!(
        document.path_of(half),
        "approximant.pieces[1].coefficients[2]"
    );
    assert_eq!(written(&document, &["approximant"]), "[approximant]");
    assert_eq!(written(&document, &["claims", "1"]), "[[claims]]");
    assert_eq!(written(&document, &["claims", "1", "at_most"]), "1e-3");
    assert_eq!(
        document.path_of(find(&document, &["claims", "1", "at_most"])),
        "claims[2].at_most"
    );
    assert!(matches!(
        find(&document, &["claims", "1", "since"]).value,
        Value::DateTime(_)
    ));
    assert_eq!(document.path_of(document.root()), "");
}

#[test]
fn json_values_have_their_places_and_paths() {
    let document =
        json(r#"{"a": [1, -0.5e3, "\u00e9\n"], "long": 123456789012345678901234567890, "t": {"n": null, "b": true}}"#)
            .unwrap();
    assert_eq!(written(&document, &["a", "1"]), "-0.5e3");
    assert_eq!(
        find(&document, &["a", "1"]).value,
        Value::Float("-0.5e3".into())
    );
    assert_eq!(
        find(&document, &["a", "2"]).value,
        Value::Text("\u{e9}\n".into())
    );
    let long = find(&document, &["long"]);
    assert_eq!(
        long.value,
        Value::Integer("123456789012345678901234567890".into())
    );
    assert_eq!(find(&document, &["t", "n"]).value, Value::Null);
    assert_eq!(document.path_of(find(&document, &["t", "b"])), "t.b");
}

#[test]
fn both_syntaxes_refuse_a_repeated_key_at_its_second_place() {
    for error in [
        toml("a = 1\nb = 2\na = 3\n").unwrap_err(),
        json("{\"a\": 1,\n\"b\": 2,\n\"a\": 3}").unwrap_err(),
    ] {
        assert_eq!(error.title, "a key stands twice in one table");
        let place = error.place.unwrap();
        assert_eq!((place.line, place.column), (3, 1));
    }
    assert!(toml("[a]\nb = 1\n[a]\nc = 2\n").is_err());
    assert!(json(r#"{"\u0061": 1, "a": 2}"#).is_err());
}

#[test]
fn what_json_does_not_have_is_refused() {
    for text in [
        "",
        "  ",
        "{\"a\": 1} // comment",
        "{\"a\": 1,}",
        "[1, 2,]",
        "[1 2]",
        "[,]",
        "{a: 1}",
        "['a']",
        "[0x10]",
        "[+1]",
        "[.5]",
        "[5.]",
        "[01]",
        "[NaN]",
        "[1] [2]",
        "[\"a\nb\"]",
        "[\"\\x41\"]",
        "[\"abc",
        "[1",
        "{\"a\" 1}",
        "{\"a\"",
        "[}",
    ] {
        assert!(json(text).is_err(), "{text:?} was read");
    }
}

#[test]
fn depth_is_refused_before_any_parser_recurses() {
    let million = 1_000_000;
    let toml_texts = [
        format!("a = {}", "[".repeat(million)),
        format!("a = {}", "{a=".repeat(million)),
        format!("{}a = 1", "a.".repeat(million)),
        format!("[{}a]", "a.".repeat(million)),
        format!("a = {}", "{a.a.a.a.a.a.a.a=[".repeat(million)),
    ];
    for text in &toml_texts {
        let error = toml(text).unwrap_err();
        assert_eq!(error.title, "the file is nested too deeply");
        assert!(error.place.unwrap().column < 300);
    }
    for text in [
        "[".repeat(million),
        "{\"a\":".repeat(million),
        "[{\"a\":".repeat(million),
    ] {
        assert_eq!(
            json(&text).unwrap_err().title,
            "the file is nested too deeply"
        );
    }
}

#[test]
fn the_depth_limit_is_exact_and_ignores_strings_comments_and_siblings() {
    let nested = |depth: usize| format!("{}{}", "[".repeat(depth), "]".repeat(depth));
    assert!(json(&nested(64)).is_ok());
    assert!(json(&nested(65)).is_err());
    assert!(toml(&format!("a = {}", nested(64))).is_ok());
    assert!(toml(&format!("a = {}", nested(65))).is_err());
    let brackets = "[".repeat(100);
    assert!(json(&format!("[\"\\\"{brackets}\"]")).is_ok());
    let texts = [
        format!("# {brackets}\na = \"{brackets}\" # {brackets}"),
        format!(
            "a = '{brackets}'\nb = '''\n{brackets}''''\nc = \"\"\"\\\"\"\"{brackets}\"\"\"\"\""
        ),
        format!("a = [{}]", "[1.5], ".repeat(100)),
        "a.b.c.d.e.f.g.h = 1.5\n".replace('a', &"x".repeat(100)) + "i.j = 2\n",
    ];
    for text in texts {
        assert!(toml(&text).is_ok(), "{text}");
    }
}

#[test]
fn too_many_values_are_refused_with_advice() {
    let error = toml(&format!("a = [{}]", "1,".repeat(4_000_001))).unwrap_err();
    assert_eq!(error.title, "the file holds too many values");
    assert!(error.advice.contains("JSON"));
}

#[test]
fn bytes_that_are_not_utf_8_are_placed() {
    let error =
        Document::parse("a.toml", b"title = \"caf\xe9\"\n".to_vec(), Syntax::Toml).unwrap_err();
    assert_eq!(error.title, "the file is not valid UTF-8");
    let place = error.place.unwrap();
    assert_eq!((place.line, place.column), (1, 13));
}

#[test]
fn a_byte_order_mark_is_dropped() {
    assert!(toml("\u{feff}a = 1").is_ok());
    assert!(json("\u{feff}{}").is_ok());
}

proptest! {
    #[test]
    fn no_text_panics(text in "[\\[\\]{}\"'#=., \\n\\\\a1e+:/*-]{0,60}") {
        let _ = toml(&text);
        let _ = json(&text);
    }

    #[test]
    fn no_bytes_panic(bytes in prop::collection::vec(any::<u8>(), 0..40)) {
        let _ = Document::parse("a", bytes.clone(), Syntax::Toml);
        let _ = Document::parse("a", bytes, Syntax::Json);
    }
}
