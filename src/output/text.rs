//! The terminal summary: one line a claim, then what stands behind it.

use std::fmt::{self, Write};

use owo_colors::{OwoColorize, Style};

use crate::certificate::model::{Certificate, Claim, Piece, PieceError, Verdict};

/// Digits of a bound in the summary; the certificate has more.
const DIGITS: usize = 5;

/// The summary of one audited file. Colours are always written; the stream strips them where
/// they are not wanted.
pub fn summary(path: &str, certificate: &Certificate) -> Result<String, fmt::Error> {
    let mut out = String::new();
    let title = &certificate.subject.title;
    writeln!(
        out,
        "{}{}",
        path.bold(),
        if title.is_empty() {
            String::new()
        } else {
            format!("  {title}")
        }
    )?;
    let several = certificate.subject.approximants.len() > 1;
    for claim in &certificate.claims {
        claim_lines(&mut out, certificate, claim, several)?;
    }
    Ok(out)
}

fn claim_lines(
    out: &mut String,
    certificate: &Certificate,
    claim: &Claim,
    several: bool,
) -> fmt::Result {
    let (word, style) = match claim.verdict {
        Verdict::Holds => ("holds", Style::new().green()),
        Verdict::Fails => ("FAILS", Style::new().red().bold()),
        Verdict::Undecided => ("UNDECIDED", Style::new().yellow().bold()),
        Verdict::Measured => ("measured", Style::new().cyan()),
    };
    let about = if several {
        format!(" of {}", claim.approximant)
    } else {
        String::new()
    };
    let word = format!("{word:<9}");
    write!(
        out,
        "  {} {}: {} error{about}",
        word.style(style),
        claim.id.bold(),
        claim.error
    )?;
    writeln!(out, " {}", comparison(claim))?;
    if let Some(place) = &claim.worst_at {
        let pieces = pieces_of(certificate, claim).count();
        let of = if pieces > 1 {
            format!(", piece {} of {pieces}", place.piece + 1)
        } else {
            String::new()
        };
        writeln!(
            out,
            "            worst near x = {}{of}",
            shortened(&place.decimal)
        )?;
    }
    if let Some(witness) = &claim.witness {
        writeln!(out, "            witness: x = {}", witness.at.exact)?;
        writeln!(
            out,
            "                     approximant  {}",
            middle(&witness.approximant)
        )?;
        writeln!(
            out,
            "                     reference    {}",
            middle(&witness.reference)
        )?;
        writeln!(
            out,
            "                     signed error {}",
            middle(&witness.error)
        )?;
    }
    if let Some((_, error)) = worst_piece(certificate, claim) {
        let budget = &error.budget;
        if storage_matters(&budget.truncation[1], &error.enclosure[1]) {
            writeln!(
                out,
                "            without the rounding of the stored coefficients: {}; storing moves the \
                 value by {}",
                up_to(&budget.truncation[1]),
                up_to(&budget.storage[1])
            )?;
        }
    }
    if let Some(reason) = &claim.reason {
        writeln!(out, "            why: {reason}")?;
    }
    for note in &claim.notes {
        writeln!(out, "            note: {note}")?;
    }
    Ok(())
}

/// "<= 1.2e-7 proved; lies in [..]" in the words that fit the verdict.
fn comparison(claim: &Claim) -> String {
    let [low, high] = &claim.enclosure;
    let range = format!("[{}, {}]", rounded(low, false), rounded(high, true));
    match (&claim.at_most, claim.verdict) {
        (Some(bound), Verdict::Holds) => format!("at most {bound}; supremum in {range}"),
        (Some(bound), Verdict::Fails) => format!("exceeds {bound}; supremum in {range}"),
        (Some(bound), _) => format!("at most {bound} is not decided; supremum in {range}"),
        (None, _) => format!("has its supremum in {range}"),
    }
}

fn pieces_of<'a>(
    certificate: &'a Certificate,
    claim: &'a Claim,
) -> impl Iterator<Item = (&'a Piece, &'a PieceError)> {
    certificate
        .pieces
        .iter()
        .filter(|piece| piece.approximant == claim.approximant)
        .filter_map(|piece| {
            Some((
                piece,
                piece.errors.iter().find(|error| error.claim == claim.id)?,
            ))
        })
}

fn worst_piece<'a>(
    certificate: &'a Certificate,
    claim: &'a Claim,
) -> Option<(&'a Piece, &'a PieceError)> {
    let place = claim.worst_at.as_ref()?;
    pieces_of(certificate, claim).find(|(piece, _)| piece.piece == place.piece)
}

/// True if the coefficients as written would do better by more than a hundredth.
fn storage_matters(written: &str, stored: &str) -> bool {
    use crate::number::literal::parse;
    match (parse(written), parse(stored)) {
        (Ok(written), Ok(stored)) => written * 100u32 < stored * 99u32,
        _ => false,
    }
}

fn up_to(text: &str) -> String {
    format!("<= {}", rounded(text, true))
}

/// A decimal of the certificate with fewer digits, rounded in the given direction.
fn rounded(text: &str, up: bool) -> String {
    let Ok(value) = crate::number::literal::parse(text) else {
        return text.to_owned();
    };
    if up {
        crate::number::decimal::rational_up(&value, DIGITS)
    } else {
        crate::number::decimal::rational_down(&value, DIGITS)
    }
}

/// An argument with few digits.
fn shortened(text: &str) -> String {
    let Ok(value) = crate::number::literal::parse(text) else {
        return text.to_owned();
    };
    // Toward zero, so that an argument at an end of its set does not seem to lie beyond it.
    if value < 0 {
        crate::number::decimal::rational_up(&value, 10)
    } else {
        crate::number::decimal::rational_down(&value, 10)
    }
}

/// The digits on which both ends of a narrow enclosure agree, or both ends.
fn middle(enclosure: &[String; 2]) -> String {
    let [low, high] = enclosure;
    if low == high {
        return low.clone();
    }
    format!("in [{low}, {high}]")
}
