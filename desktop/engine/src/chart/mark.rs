//! The mark fills like the tank: a ring, empty at Normal, a third full at Watch, two thirds at
//! Review, full at Stop; its outline dotted while unconfirmed. An equipment fault is a dashed
//! square with a stroke, and what cannot be judged a dashed square without one. The shape says it
//! without colour, down to 12 px and in print.

use super::description::Dash;
use super::sheet::{DrawError, Sheet, Stroke, small_picture};
use super::theme::{Theme, Token};
use plotters_backend::DrawingBackend;

/// What a mark says.
#[derive(Debug, Clone, Copy, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "snake_case", tag = "trigger")]
pub enum Mark {
    /// Inside the expected band.
    Normal,
    /// Outside expected.
    Watch { confirmed: bool },
    /// Stop raising.
    Review { confirmed: bool },
    /// Stop filling.
    Stop { confirmed: bool },
    /// The equipment, not the ground.
    Fault,
    /// No verdict on the ground: no usable reading, or nothing to compare it with.
    NotJudged,
}

impl Mark {
    /// The word beside the mark.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Normal => "Normal",
            Self::Watch { .. } => "Watch",
            Self::Review { .. } => "Review",
            Self::Stop { .. } => "Stop",
            Self::Fault => "Equipment fault",
            Self::NotJudged => "Not judged",
        }
    }

    /// Whether it was seen only once and by nobody else.
    pub const fn is_unconfirmed(self) -> bool {
        matches!(
            self,
            Self::Watch { confirmed: false }
                | Self::Review { confirmed: false }
                | Self::Stop { confirmed: false }
        )
    }

    /// Word and state of confirmation, as written in a sentence.
    pub fn phrase(self) -> String {
        if self.is_unconfirmed() {
            format!("{}, unconfirmed", self.word())
        } else {
            self.word().to_owned()
        }
    }

    /// Its colour.
    pub const fn token(self) -> Token {
        match self {
            Self::Normal => Token::Normal,
            Self::Watch { .. } => Token::Watch,
            Self::Review { .. } => Token::Review,
            Self::Stop { .. } => Token::Stop,
            Self::Fault => Token::Fault,
            Self::NotJudged => Token::Soft,
        }
    }

    /// How full the ring is; `None` for the squares.
    const fn filling(self) -> Option<f64> {
        match self {
            Self::Normal => Some(0.0),
            Self::Watch { .. } => Some(1.0 / 3.0),
            Self::Review { .. } => Some(2.0 / 3.0),
            Self::Stop { .. } => Some(1.0),
            Self::Fault | Self::NotJudged => None,
        }
    }

    /// The mark alone as SVG, `size_px` wide and high, named by its word.
    pub fn svg(self, size_px: f64, theme: &Theme) -> String {
        let middle = size_px / 2.0;
        small_picture("mark", (size_px, size_px), theme, &self.phrase(), |sheet| {
            self.draw(sheet, (middle, middle), size_px * 0.44)
        })
    }

    /// Draws the mark around a place in pixels.
    pub(crate) fn draw<B: DrawingBackend>(
        self,
        sheet: &Sheet<'_, B>,
        centre: (f64, f64),
        radius_px: f64,
    ) -> Result<(), DrawError> {
        match self.filling() {
            Some(filling) => self.draw_ring(sheet, centre, radius_px, filling),
            None => self.draw_square(sheet, centre, radius_px),
        }
    }

    /// A mark keeps its weight in every theme, or its filling would close up.
    fn outline<B: DrawingBackend>(self, sheet: &Sheet<'_, B>, width_px: f64, dash: Dash) -> Stroke {
        let width_px = width_px / sheet.theme.line_factor;
        Stroke { class: "mark", token: self.token(), width_px, dash }
    }

    fn draw_ring<B: DrawingBackend>(
        self,
        sheet: &Sheet<'_, B>,
        centre: (f64, f64),
        radius_px: f64,
        filling: f64,
    ) -> Result<(), DrawError> {
        let width_px = (radius_px * 0.26).max(1.2);
        let dash = if self.is_unconfirmed() { Dash::Beaded } else { Dash::Solid };
        sheet.disc("mark", Token::Ground, centre, radius_px)?;
        let stroke = self.outline(sheet, width_px, dash);
        sheet.ring(stroke, centre, radius_px - width_px / 2.0)?;
        let liquid = segment(centre, radius_px - 2.0 * width_px, filling);
        if !liquid.is_empty() {
            sheet.area("mark", self.token(), &liquid)?;
        }
        Ok(())
    }

    fn draw_square<B: DrawingBackend>(
        self,
        sheet: &Sheet<'_, B>,
        (x, y): (f64, f64),
        radius_px: f64,
    ) -> Result<(), DrawError> {
        let half = radius_px * 0.86;
        let (left, right, top, bottom) = (x - half, x + half, y - half, y + half);
        let width_px = (radius_px * 0.22).max(1.1);
        let around = [(left, top), (right, top), (right, bottom), (left, bottom), (left, top)];
        sheet.area("mark", Token::Ground, &around)?;
        let stroke = self.outline(sheet, width_px, Dash::Short);
        sheet.line(stroke, &around)?;
        if self == Self::Fault {
            let inset = half * 0.5;
            let stroke = Stroke { dash: Dash::Solid, ..stroke };
            sheet.line(stroke, &[(x - inset, y + inset), (x + inset, y - inset)])?;
        }
        Ok(())
    }
}

/// The part of a disc below a level, as a polygon; `filling` is the level from 0 to 1.
fn segment((x, y): (f64, f64), radius: f64, filling: f64) -> Vec<(f64, f64)> {
    if filling <= 0.0 {
        return Vec::new();
    }
    // Angle from straight down to where the level meets the rim.
    let reach = (1.0 - 2.0 * filling).clamp(-1.0, 1.0).acos();
    const SIDES: i32 = 24;
    (0..=SIDES)
        .map(|side| {
            let angle = reach * (2.0 * f64::from(side) / f64::from(SIDES) - 1.0);
            (x + radius * angle.sin(), y + radius * angle.cos())
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::chart::theme::LIGHT;

    #[test]
    fn the_ring_fills_from_the_bottom() {
        assert!(segment((0.0, 0.0), 1.0, 0.0).is_empty());
        for (filling, top) in [(1.0 / 3.0, 1.0 / 3.0), (2.0 / 3.0, -1.0 / 3.0), (1.0, -1.0)] {
            let liquid = segment((0.0, 0.0), 1.0, filling);
            let (highest, lowest) =
                liquid.iter().fold((f64::MAX, f64::MIN), |(h, l), p| (h.min(p.1), l.max(p.1)));
            // Pixels count downwards.
            assert!((highest - top).abs() < 1e-9 && (lowest - 1.0).abs() < 1e-9, "{filling}");
        }
    }

    #[test]
    fn every_mark_differs_in_shape_not_only_in_colour() {
        let marks = [
            Mark::Normal,
            Mark::Watch { confirmed: true },
            Mark::Watch { confirmed: false },
            Mark::Review { confirmed: true },
            Mark::Stop { confirmed: true },
            Mark::Fault,
            Mark::NotJudged,
        ];
        let shapes: std::collections::BTreeSet<String> = marks
            .iter()
            .map(|mark| {
                let svg = mark.svg(16.0, &LIGHT);
                let name = format!("<title>{}</title>", mark.word());
                svg.replace(&LIGHT.hex(mark.token()), "")
                    .replace(mark.token().name(), "")
                    .replace(&name, "")
            })
            .collect();
        assert_eq!(shapes.len(), marks.len());
    }
}
