//! Text from the embedded fonts: widths in points, letters as coverage.
//!
//! The letters are set here and not by the drawing library, which drops the space that belongs to the left of each letter.

use std::sync::OnceLock;

use ab_glyph::{Font, FontRef, PxScale, ScaleFont, point};

use crate::figure::label::{Label, Piece, Raise};

/// Size of raised and lowered pieces, and how far they move, in parts of the size.
const SMALL: f64 = 0.72;
const UP: f64 = 0.36;
const DOWN: f64 = -0.20;

/// Heights of the font in parts of the size: capitals, and what hangs below the line.
pub(super) const CAPITAL: f64 = 0.73;
pub(super) const BELOW: f64 = 0.24;

struct Fonts {
    upright: FontRef<'static>,
    italic: FontRef<'static>,
}

fn fonts() -> &'static Fonts {
    static FONTS: OnceLock<Fonts> = OnceLock::new();
    FONTS.get_or_init(|| {
        let read = |bytes| FontRef::try_from_slice(bytes).expect("the embedded font is a font");
        Fonts { upright: read(dejavu::sans::regular()), italic: read(dejavu::sans::oblique()) }
    })
}

/// The font that has a letter in the wanted shape.
fn font_for(letter: char, italic: bool) -> &'static FontRef<'static> {
    let fonts = fonts();
    if italic && fonts.italic.glyph_id(letter).0 != 0 { &fonts.italic } else { &fonts.upright }
}

/// Whether every letter of a text is in the embedded fonts.
#[cfg(test)]
pub(super) fn has_letters(text: &str) -> bool {
    text.chars().all(|letter| fonts().upright.glyph_id(letter).0 != 0)
}

/// The library measures by ascent plus descent; sizes here are those of printers (em).
fn scale_of(font: &FontRef<'static>, em: f64) -> PxScale {
    let units = f64::from(font.units_per_em().unwrap_or(2048.0));
    PxScale::from((em * f64::from(font.height_unscaled()) / units) as f32)
}

fn piece_size(piece: &Piece, size: f64) -> (f64, f64) {
    match piece.raise {
        Raise::Line => (size, 0.0),
        Raise::Up => (size * SMALL, size * UP),
        Raise::Down => (size * SMALL, size * DOWN),
    }
}

/// A letter with its place along the line and above it.
struct Set {
    letter: char,
    font: &'static FontRef<'static>,
    em: f64,
    along: f64,
    above: f64,
}

/// Sets a line; also returns its length.
fn set(label: &Label, size: f64) -> (Vec<Set>, f64) {
    let mut letters = Vec::new();
    let mut along = 0.0;
    for piece in &label.0 {
        let (em, above) = piece_size(piece, size);
        let mut before: Option<char> = None;
        for letter in piece.text.chars() {
            let font = font_for(letter, piece.italic);
            let scaled = font.as_scaled(scale_of(font, em));
            let glyph = scaled.glyph_id(letter);
            if let Some(before) = before {
                along += f64::from(scaled.kern(scaled.glyph_id(before), glyph));
            }
            letters.push(Set { letter, font, em, along, above });
            along += f64::from(scaled.h_advance(glyph));
            before = Some(letter);
        }
    }
    (letters, along)
}

/// Length of a line, in the unit of `size`.
pub(super) fn length(label: &Label, size: f64) -> f64 {
    set(label, size).1
}

/// Calls `cover(x, y, coverage)` for each pixel of a line that starts at `x`, `baseline` (pixels, y downwards).
///
/// `upwards` turns the line by a quarter so that it reads from below to above; it then starts at (`x` = baseline, `y`).
pub(super) fn cover(
    label: &Label,
    size: f64,
    (x, y): (f64, f64),
    upwards: bool,
    mut cover: impl FnMut(i64, i64, f32),
) {
    for set in set(label, size).0 {
        // The line is set unturned from the origin, then moved; turning pixels keeps them sharp.
        let (start, rise) = if upwards { (-y, x) } else { (x, y) };
        let scale = scale_of(set.font, set.em);
        let place = point((start + set.along) as f32, (rise - set.above) as f32);
        let glyph = set.font.glyph_id(set.letter).with_scale_and_position(scale, place);
        let Some(outline) = set.font.outline_glyph(glyph) else { continue };
        let corner = outline.px_bounds().min;
        outline.draw(|column, row, share| {
            let across = corner.x as i64 + i64::from(column);
            let down = corner.y as i64 + i64::from(row);
            if upwards { cover(down, -across - 1, share) } else { cover(across, down, share) }
        });
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::figure::colour::Region;
    use crate::figure::names;
    use crate::system::{Axis, BodyRef, Key, Quantity, Spacing, System, Target};

    #[test]
    fn the_fonts_have_every_letter_that_figures_use() {
        let system = System {
            title: String::new(),
            epoch_jd: None,
            star: crate::system::Body { name: "star".to_owned(), stated: Default::default() },
            planets: Vec::new(),
            companion: None,
            convention: Default::default(),
            physics: Default::default(),
        };
        let units =
            ["d", "deg", "Msun", "Mjup", "Mearth", "Rsun", "Rjup", "Rearth", "m/s", "km/s", "au", "JD"];
        for key in Key::ALL {
            for unit in units {
                let axis = Axis {
                    path: String::new(),
                    target: Target { body: BodyRef::Star, key },
                    quantity: Quantity::Value,
                    from: 0.0,
                    to: 1.0,
                    unit,
                    scale: 1.0,
                    cells: 2,
                    spacing: Spacing::Linear,
                };
                let label = names::axis_label(&axis, &system).text();
                assert!(has_letters(&label), "{label}");
            }
        }
        assert!(Region::ALL.iter().all(|r| has_letters(r.words())));
        assert!(has_letters("⟨Y⟩ ≤ ≥ × ± σ ν ω Δ ° − ⁻⁰¹²³⁴⁵⁶⁷⁸⁹") && !has_letters("\u{10FFFD}"));
    }

    #[test]
    fn sizes_are_those_of_printers() {
        // DejaVu Sans is drawn on 2048 units per em; its figure zero is 1303 of them wide.
        let length = length(&Label::plain("0"), 10.0);
        assert!((length - 10.0 * 1303.0 / 2048.0).abs() < 1e-3, "{length}");
    }

    #[test]
    fn turned_text_is_the_same_text_by_a_quarter_turn() {
        let label = Label::plain("e").italic("ω").down("c");
        let (mut level, mut upwards) = (Vec::new(), Vec::new());
        cover(&label, 40.0, (10.0, 20.0), false, |x, y, share| level.push((x, y, share.to_bits())));
        cover(&label, 40.0, (20.0, -10.0), true, |x, y, share| upwards.push((-y - 1, x, share.to_bits())));
        assert!(level.len() > 500);
        assert_eq!(level, upwards);
    }
}
