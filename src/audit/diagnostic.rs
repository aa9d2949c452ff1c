//! What is wrong in a file, where, what was found there and what to write instead.

use std::fmt;
use std::ops::Range;

use annotate_snippets::{AnnotationKind, Group, Level, Origin, Renderer, Snippet};
use anstream::adapter::strip_str;

/// Characters of a long line that are shown before the place.
const EXCERPT_BEFORE: usize = 60;
/// Characters of a long line that are shown from the place on.
const EXCERPT_AFTER: usize = 140;
/// Wide enough that the renderer never shortens an excerpt a second time.
const RENDERED_WIDTH: usize = 1_000;
/// Characters of a quoted value in a message.
const QUOTED: usize = 60;

/// Whether the file can be used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Severity {
    /// The file is refused.
    Error,
    /// The file means something that its author may not expect.
    Note,
}

/// A place in a text file, with the part of the line that is shown.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Place {
    /// Bytes of the file.
    pub span: Range<usize>,
    /// Line, counted from 1.
    pub line: usize,
    /// Column in characters, counted from 1.
    pub column: usize,
    excerpt: String,
    excerpt_span: Range<usize>,
    cut_before: bool,
}

/// One message about a file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// Whether the file can be used.
    pub severity: Severity,
    /// The file, as the user named it.
    pub file: String,
    /// Where; none where the file as a whole is meant.
    pub place: Option<Place>,
    /// What is wrong, in one line.
    pub title: String,
    /// What was found, shown under the place.
    pub found: String,
    /// What to write instead.
    pub advice: String,
}

impl Place {
    /// The place of `span` in `text`. A span beyond the text is moved into it.
    pub fn new(text: &str, span: Range<usize>) -> Self {
        let start = floor_boundary(text, span.start);
        let end = floor_boundary(text, span.end.max(start));
        let line_start = text[..start].rfind('\n').map_or(0, |index| index + 1);
        let line_end = text[start..]
            .find('\n')
            .map_or(text.len(), |index| start + index);
        let line_text = text[line_start..line_end].trim_end_matches('\r');
        let line_end = (line_start + line_text.len()).max(start);
        let line = text[..line_start]
            .bytes()
            .filter(|&byte| byte == b'\n')
            .count()
            + 1;
        let column = text[line_start..start].chars().count() + 1;

        let from = back_by(text, line_start, start, EXCERPT_BEFORE);
        let to = forward_by(text, start, line_end, EXCERPT_AFTER);
        let before = if from > line_start { "..." } else { "" };
        let after = if to < line_end { "..." } else { "" };
        let excerpt = format!("{before}{}{after}", &text[from..to]);
        let shift = |position: usize| position - from + before.len();
        let excerpt_span = shift(start)..shift(end.clamp(start, to));
        Self {
            span,
            line,
            column,
            excerpt,
            excerpt_span,
            cut_before: from > line_start,
        }
    }

    /// Whether the excerpt leaves out the beginning of the line.
    fn is_cut_before(&self) -> bool {
        self.cut_before
    }
}

/// Drops the line `:::` by which the renderer introduces a snippet that has no path of its own:
/// it would count the column in the excerpt, so the path and the true column stand in an origin
/// before the snippet.
fn without_unnamed_snippet_mark(rendered: &str) -> String {
    let kept: Vec<&str> = rendered
        .split('\n')
        .filter(|line| strip_str(line).to_string().trim() != ":::")
        .collect();
    kept.join("\n")
}

/// The last character boundary at or before `position`.
fn floor_boundary(text: &str, position: usize) -> usize {
    let mut position = position.min(text.len());
    while !text.is_char_boundary(position) {
        position -= 1;
    }
    position
}

fn back_by(text: &str, limit: usize, position: usize, characters: usize) -> usize {
    text[limit..position]
        .char_indices()
        .rev()
        .take(characters)
        .last()
        .map_or(position, |(index, _)| limit + index)
}

fn forward_by(text: &str, position: usize, limit: usize, characters: usize) -> usize {
    text[position..limit]
        .char_indices()
        .nth(characters)
        .map_or(limit, |(index, _)| position + index)
}

/// A value from a file in quotes for a message, shortened where it is long.
pub fn quoted(text: &str) -> String {
    let mut shown: String = text.chars().take(QUOTED).collect();
    if shown.len() < text.len() {
        shown.push_str("...");
    }
    format!("{shown:?}")
}

/// A message without control characters: parts of it come from files, and must neither break the
/// layout nor reach the terminal as commands.
fn printable(text: String) -> String {
    if !text.contains(char::is_control) {
        return text;
    }
    let mut shown = String::with_capacity(text.len());
    for character in text.chars() {
        if character.is_control() {
            shown.extend(character.escape_default());
        } else {
            shown.push(character);
        }
    }
    shown
}

impl Diagnostic {
    /// An error at a place.
    pub fn error(
        file: &str,
        place: Option<Place>,
        title: impl Into<String>,
        found: impl Into<String>,
        advice: impl Into<String>,
    ) -> Self {
        Self {
            severity: Severity::Error,
            file: file.to_owned(),
            place,
            title: printable(title.into()),
            found: printable(found.into()),
            advice: printable(advice.into()),
        }
    }

    /// The message with the line of the file and a caret under the place, in plain text.
    pub fn render(&self) -> String {
        self.render_with(&Renderer::plain())
    }

    /// The message with colours for a terminal.
    pub fn render_coloured(&self) -> String {
        self.render_with(&Renderer::styled())
    }

    fn render_with(&self, renderer: &Renderer) -> String {
        let level = match self.severity {
            Severity::Error => Level::ERROR,
            Severity::Note => Level::NOTE,
        };
        let title = level.primary_title(&self.title);
        let mut group = match &self.place {
            Some(place) => {
                let mut annotation = AnnotationKind::Primary.span(place.excerpt_span.clone());
                if !self.found.is_empty() {
                    annotation = annotation.label(&self.found);
                }
                let snippet = Snippet::source(&place.excerpt)
                    .line_start(place.line)
                    .annotation(annotation);
                if place.is_cut_before() {
                    let origin = Origin::path(&self.file)
                        .line(place.line)
                        .char_column(place.column);
                    Group::with_title(title).element(origin).element(snippet)
                } else {
                    Group::with_title(title).element(snippet.path(&self.file))
                }
            }
            None => {
                let group = Group::with_title(title).element(Origin::path(&self.file));
                if self.found.is_empty() {
                    group
                } else {
                    group.element(Level::NOTE.message(&self.found))
                }
            }
        };
        if !self.advice.is_empty() {
            group = group.element(Level::HELP.message(&self.advice));
        }
        let rendered = renderer.clone().term_width(RENDERED_WIDTH).render(&[group]);
        if self.place.as_ref().is_some_and(Place::is_cut_before) {
            without_unnamed_snippet_mark(&rendered)
        } else {
            rendered
        }
    }
}

impl fmt::Display for Diagnostic {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.render())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn at(text: &str, span: Range<usize>) -> String {
        let place = Place::new(text, span);
        Diagnostic::error(
            "exp.audit.toml",
            Some(place),
            "a title",
            "found this",
            "write that",
        )
        .render()
    }

    #[test]
    fn shows_the_line_the_caret_and_the_advice() {
        let text = "first = 1\nat_most = 0.1\nlast = 2\n";
        insta::assert_snapshot!(at(text, 20..23), @r#"
        error: a title
         --> exp.audit.toml:2:11
          |
        2 | at_most = 0.1
          |           ^^^ found this
          |
          = help: write that
        "#);
    }

    #[test]
    fn counts_columns_in_characters_and_trims_carriage_returns() {
        let text = "a = 1\r\nß = \"π\"\r\n";
        let start = text.find('π').unwrap();
        let place = Place::new(text, start..start + 2);
        assert_eq!((place.line, place.column), (2, 6));
        assert_eq!(place.excerpt, "ß = \"π\"");
    }

    #[test]
    fn a_long_line_is_cut_on_both_sides_and_keeps_its_true_column() {
        let text = format!("{}0.1{}", "1, ".repeat(1_000_000), ", 2".repeat(1_000_000));
        let rendered = at(&text, 3_000_000..3_000_003);
        insta::assert_snapshot!(rendered, @r#"
        error: a title
         --> exp.audit.toml:1:3000001
          |
        1 | ...1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 0.1, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2, ...
          |                                                                ^^^ found this
          |
          = help: write that
        "#);
    }

    #[test]
    fn places_at_the_edges_of_a_text_are_shown() {
        for (text, span) in [
            ("", 0..0),
            ("a", 1..1),
            ("a\n", 2..9),
            ("π", 1..1),
            ("\r\n", 1..2),
        ] {
            let rendered = at(text, span);
            assert!(rendered.contains("found this"), "{rendered}");
        }
    }

    #[test]
    fn no_control_character_of_a_file_reaches_the_terminal() {
        let text = "a = \"\u{1b}[31m\"";
        let place = Place::new(text, 4..10);
        let message = Diagnostic::error("a", Some(place), "\u{7}", "\u{1b}[31m", "b\nc");
        assert_eq!(
            (message.found.as_str(), message.advice.as_str()),
            ("\\u{1b}[31m", "b\\nc")
        );
        let rendered = message.render();
        assert!(
            rendered.chars().all(|c| c == '\n' || !c.is_control()),
            "{rendered:?}"
        );
    }

    #[test]
    fn a_file_without_a_place_is_named() {
        let message = Diagnostic::error("a.toml", None, "cannot be read", "not found", "check it");
        insta::assert_snapshot!(message.render(), @r#"
        error: cannot be read
        --> a.toml
         = note: not found
         = help: check it
        "#);
    }
}
