//! The family that is shipped, and how wide a text is in it.
//!
//! Atkinson Hyperlegible Next, SIL Open Font License 1.1, see `fonts/OFL.txt`. The digits are
//! tabular. Greek letters and comparison signs are not in it: keep them out of labels.

use std::sync::LazyLock;
use ttf_parser::Face;

/// Name of the family, as drawings ask for it.
pub const FAMILY: &str = "Atkinson Hyperlegible Next";

/// The two weights as font files, regular and semi-bold.
pub static FILES: [&[u8]; 2] = [
    include_bytes!("../../fonts/AtkinsonHyperlegibleNext-Regular.ttf"),
    include_bytes!("../../fonts/AtkinsonHyperlegibleNext-SemiBold.ttf"),
];

/// The same, compressed for pages.
pub static WEB_FILES: [&[u8]; 2] = [
    include_bytes!("../../fonts/AtkinsonHyperlegibleNext-Regular.woff2"),
    include_bytes!("../../fonts/AtkinsonHyperlegibleNext-SemiBold.woff2"),
];

/// Height of a capital letter as part of the font size.
pub const CAP_HEIGHT: f64 = 0.668;

/// Width of a letter that the family lacks, as part of the font size: a guess on the wide side.
const UNKNOWN: f64 = 0.75;

/// Room for renderers that set each letter on whole pixels: measured in WebKit at 11 to 14 px.
const SLACK: f64 = 1.08;

static FACES: LazyLock<[Option<Face<'static>>; 2]> =
    LazyLock::new(|| FILES.map(|file| Face::parse(file, 0).ok()));

/// Room that a text takes, px: its width without kerning, and a little more.
pub fn width_px(text: &str, size_px: f64, bold: bool) -> f64 {
    let face = FACES[usize::from(bold)].as_ref();
    let em: f64 = text.chars().map(|letter| advance(face, letter)).sum();
    em * size_px * SLACK
}

fn advance(face: Option<&Face<'_>>, letter: char) -> f64 {
    let known = face.and_then(|face| {
        let glyph = face.glyph_index(letter)?;
        Some(f64::from(face.glyph_hor_advance(glyph)?) / f64::from(face.units_per_em()))
    });
    known.unwrap_or(UNKNOWN)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_shipped_files_are_fonts_with_tabular_digits() {
        assert!(FACES.iter().all(Option::is_some));
        for bold in [false, true] {
            let one = width_px("1", 10.0, bold);
            assert!((one - 6.32 * SLACK).abs() < 1e-9, "{one}");
            for digit in ["0", "4", "8"] {
                assert!((width_px(digit, 10.0, bold) - one).abs() < 1e-9);
            }
        }
    }

    #[test]
    fn letters_beyond_ascii_are_measured_as_one_letter() {
        let (plain, marked) = (width_px("u", 12.0, false), width_px("ü", 12.0, false));
        assert!((plain - marked).abs() < 0.1, "{plain} {marked}");
    }

    #[test]
    fn the_signs_used_in_labels_are_in_the_family() {
        for sign in "0123456789.,:+-−–·²³°±×%()/".chars() {
            assert!(FACES[0].as_ref().unwrap().glyph_index(sign).is_some(), "{sign}");
        }
    }
}
