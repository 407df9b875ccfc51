//! Colours by meaning, for three grounds: light, dark, and full sun.
//!
//! A drawing carries both: the colour itself as an attribute, so that it stands alone, and the
//! class `fill-NAME` or `stroke-NAME`, so that [`stylesheet`] can put another theme over it.

use plotters::style::RGBColor;
use std::fmt::Write;

/// What a colour means.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Token {
    /// Behind everything.
    Ground,
    /// Hairlines and grid.
    Line,
    /// Text and readings.
    Ink,
    /// Secondary text.
    Soft,
    /// Liquid, and what is expected from it.
    Water,
    /// Area of the expected band.
    Band,
    /// Area of a hold.
    Hold,
    /// Trigger Normal.
    Normal,
    /// Trigger Watch.
    Watch,
    /// Trigger Review.
    Review,
    /// Trigger Stop.
    Stop,
    /// Equipment fault.
    Fault,
}

impl Token {
    /// All tokens, in the order of a theme's table.
    pub const ALL: [Self; 12] = [
        Self::Ground,
        Self::Line,
        Self::Ink,
        Self::Soft,
        Self::Water,
        Self::Band,
        Self::Hold,
        Self::Normal,
        Self::Watch,
        Self::Review,
        Self::Stop,
        Self::Fault,
    ];

    /// Name as in classes and variables.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Ground => "ground",
            Self::Line => "line",
            Self::Ink => "ink",
            Self::Soft => "soft",
            Self::Water => "water",
            Self::Band => "band",
            Self::Hold => "hold",
            Self::Normal => "normal",
            Self::Watch => "watch",
            Self::Review => "review",
            Self::Stop => "stop",
            Self::Fault => "fault",
        }
    }

    /// Whether text is written in it, so that it must stand out from the ground.
    pub const fn carries_text(self) -> bool {
        !matches!(self, Self::Ground | Self::Line | Self::Band | Self::Hold)
    }
}

/// A set of colours and the factor on the width of lines.
#[derive(Debug, PartialEq)]
pub struct Theme {
    /// Name as in the stylesheet.
    pub name: &'static str,
    colours: [u32; 12],
    /// Factor on the width of every line.
    pub line_factor: f64,
}

/// By day, indoors, and in print.
pub static LIGHT: Theme = Theme {
    name: "light",
    colours: [
        0xFBFAF7, 0xD4D0C6, 0x1B2026, 0x5B6470, 0x2C6E91, 0xD3E0E5, 0xEFEEE8, 0x2B6B5E, 0x8A6A00,
        0xB4480F, 0x9E1030, 0x5A4A8A,
    ],
    line_factor: 1.0,
};

/// By night.
pub static DARK: Theme = Theme {
    name: "dark",
    colours: [
        0x14181C, 0x3A424A, 0xE8E6E0, 0xA3ACB5, 0x7FB8D6, 0x263B48, 0x1D2329, 0x7CC4B2, 0xE0B93B,
        0xF08A4B, 0xFF6B81, 0xB3A3E6,
    ],
    line_factor: 1.0,
};

/// Outdoors: every text at 7 to 1 on white, lines doubled.
pub static SUNLIGHT: Theme = Theme {
    name: "sunlight",
    colours: [
        0xFFFFFF, 0xB4B4B4, 0x000000, 0x33393F, 0x0F4E6E, 0xD0D8DC, 0xEBEBEB, 0x14503F, 0x5C4600,
        0x852F00, 0x8C0A28, 0x43337A,
    ],
    line_factor: 2.0,
};

impl Theme {
    /// The colour of a token.
    pub fn colour(&self, token: Token) -> RGBColor {
        let [_, red, green, blue] = self.colours[token as usize].to_be_bytes();
        RGBColor(red, green, blue)
    }

    /// The colour of a token as `#RRGGBB`.
    pub fn hex(&self, token: Token) -> String {
        format!("#{:06X}", self.colours[token as usize])
    }

    fn variables(&self) -> String {
        Token::ALL.iter().fold(String::new(), |mut css, token| {
            let _ = write!(css, "--{}:{};", token.name(), self.hex(*token));
            css
        })
    }
}

/// Rules that colour the drawings of a page by variables: light, and dark where the reader's
/// system asks for it. Printing is always light.
pub fn stylesheet() -> String {
    let mut css = format!(
        ":root{{{}}}\n@media screen and (prefers-color-scheme:dark){{:root{{{}}}}}\n",
        LIGHT.variables(),
        DARK.variables()
    );
    for token in Token::ALL {
        let name = token.name();
        let _ = writeln!(
            css,
            "svg .fill-{name}{{fill:var(--{name})}} svg .stroke-{name}{{stroke:var(--{name})}}"
        );
    }
    css
}

#[cfg(test)]
mod tests {
    use super::*;

    /// WCAG 2.2, relative luminance and contrast ratio.
    fn contrast(a: RGBColor, b: RGBColor) -> f64 {
        let luminance = |RGBColor(red, green, blue): RGBColor| {
            let [r, g, b] = [red, green, blue].map(|part| {
                let part = f64::from(part) / 255.0;
                if part <= 0.04045 { part / 12.92 } else { ((part + 0.055) / 1.055).powf(2.4) }
            });
            0.2126 * r + 0.7152 * g + 0.0722 * b
        };
        let (a, b) = (luminance(a), luminance(b));
        (a.max(b) + 0.05) / (a.min(b) + 0.05)
    }

    #[test]
    fn text_stands_out_from_ground_hold_and_band() {
        for (theme, least) in [(&LIGHT, 4.5), (&DARK, 4.5), (&SUNLIGHT, 7.0)] {
            for token in Token::ALL.into_iter().filter(|token| token.carries_text()) {
                let ratio = contrast(theme.colour(token), theme.colour(Token::Ground));
                assert!(ratio >= least, "{} {token:?}: {ratio:.1}", theme.name);
                for area in [Token::Hold, Token::Band] {
                    let ratio = contrast(theme.colour(token), theme.colour(area));
                    assert!(ratio >= 3.0, "{} {token:?} on {area:?}: {ratio:.1}", theme.name);
                }
            }
        }
    }

    #[test]
    fn black_on_white_is_21() {
        let ratio = contrast(RGBColor(0, 0, 0), RGBColor(255, 255, 255));
        assert!((ratio - 21.0).abs() < 1e-9, "{ratio}");
    }
}
