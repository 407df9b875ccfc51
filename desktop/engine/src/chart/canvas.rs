//! A drawing backend for plotters that writes SVG.
//!
//! Own, because three things are needed that the stock one lacks: tenths of a pixel (its
//! coordinates are whole numbers, so curves step), text widths from the real font, and classes,
//! dashes and themes by attribute, which the program's pages and the report style. All looks are
//! attributes (no inline styles), so a strict content policy and plain SVG readers both work.

use super::description::Dash;
use super::font;
use super::theme::{Theme, Token};
use plotters_backend::text_anchor::{HPos, VPos};
use plotters_backend::{
    BackendColor, BackendCoord, BackendStyle, BackendTextStyle, DrawingBackend, DrawingErrorKind,
    FontStyle,
};
use std::cell::RefCell;
use std::convert::Infallible;
use std::fmt::Write;
use std::rc::Rc;

/// Steps of the drawing library in one pixel.
pub(crate) const STEPS: f64 = 10.0;

/// A place in pixels as the drawing library counts.
pub(crate) fn step(px: f64) -> i32 {
    (px * STEPS).round() as i32
}

/// What the drawing library has no word for: meaning and pattern of the next strokes.
#[derive(Debug, Clone)]
pub(crate) struct Ink {
    pub class: &'static str,
    pub token: Token,
    pub dash: Dash,
    /// A rim in the colour of the ground around text, so that it reads over lines.
    pub rim: bool,
}

/// Shared between the drawing and the canvas; a backend that does not know it draws plainly.
pub(crate) type Pen = Rc<RefCell<Ink>>;

pub(crate) fn pen() -> Pen {
    Rc::new(RefCell::new(Ink { class: "", token: Token::Ink, dash: Dash::Solid, rim: false }))
}

/// Writes SVG elements into a text, grouping neighbours of the same look.
pub(crate) struct SvgCanvas<'a> {
    out: &'a mut String,
    size: (u32, u32),
    pen: Pen,
    theme: &'a Theme,
    group: String,
}

type Drawn = Result<(), DrawingErrorKind<Infallible>>;

impl<'a> SvgCanvas<'a> {
    pub fn new(out: &'a mut String, size_px: (f64, f64), pen: Pen, theme: &'a Theme) -> Self {
        let size = (step(size_px.0).unsigned_abs(), step(size_px.1).unsigned_abs());
        Self { out, size, pen, theme, group: String::new() }
    }

    /// Opens a group with these attributes, unless the open one has the same.
    fn look(&mut self, attributes: String) {
        if self.group != attributes {
            self.close();
            let _ = write!(self.out, "<g{attributes}>");
            self.group = attributes;
        }
    }

    fn close(&mut self) {
        if !self.group.is_empty() {
            self.out.push_str("</g>\n");
            self.group.clear();
        }
    }

    fn stroke(&mut self, style: &impl BackendStyle) {
        let ink = self.pen.borrow().clone();
        let width = f64::from(style.stroke_width()) / STEPS;
        let mut look = format!(
            " class=\"{} stroke-{}\" fill=\"none\" stroke=\"{}\" stroke-width=\"{}\"",
            ink.class,
            ink.token.name(),
            hex(style.color()),
            short(width)
        );
        let pattern: &[f64] = match ink.dash {
            Dash::Solid => &[],
            Dash::Dotted => &[1.0, 2.2],
            Dash::Beaded => &[1.1, 1.1],
            Dash::Short => &[3.0, 2.2],
            Dash::Long => &[7.0, 2.5],
        };
        if !pattern.is_empty() {
            let lengths: Vec<_> =
                pattern.iter().map(|part| short(part * width.clamp(1.0, 2.0))).collect();
            let _ = write!(look, " stroke-dasharray=\"{}\"", lengths.join(" "));
        }
        look.push_str(" stroke-linejoin=\"round\"");
        self.look(look);
    }

    fn fill(&mut self, colour: BackendColor) {
        let ink = self.pen.borrow().clone();
        let name = ink.token.name();
        self.look(format!(" class=\"{} fill-{name}\" fill=\"{}\"", ink.class, hex(colour)));
    }

    fn shape(&mut self, style: &impl BackendStyle, fill: bool) {
        if fill {
            self.fill(style.color());
        } else {
            self.stroke(style);
        }
    }

    fn points(&mut self, element: &str, points: impl IntoIterator<Item = BackendCoord>) {
        let _ = write!(self.out, "<{element} points=\"");
        for (index, point) in points.into_iter().enumerate() {
            let gap = if index == 0 { "" } else { " " };
            let _ = write!(self.out, "{gap}{},{}", place(point.0), place(point.1));
        }
        self.out.push_str("\"/>");
    }
}

impl DrawingBackend for SvgCanvas<'_> {
    type ErrorType = Infallible;

    fn get_size(&self) -> (u32, u32) {
        self.size
    }

    fn ensure_prepared(&mut self) -> Drawn {
        Ok(())
    }

    fn present(&mut self) -> Drawn {
        self.close();
        Ok(())
    }

    fn draw_pixel(&mut self, point: BackendCoord, colour: BackendColor) -> Drawn {
        self.draw_rect(point, (point.0 + 1, point.1 + 1), &colour, true)
    }

    fn draw_line<S: BackendStyle>(&mut self, a: BackendCoord, b: BackendCoord, style: &S) -> Drawn {
        self.draw_path([a, b], style)
    }

    fn draw_rect<S: BackendStyle>(
        &mut self,
        a: BackendCoord,
        b: BackendCoord,
        style: &S,
        fill: bool,
    ) -> Drawn {
        self.shape(style, fill);
        let _ = write!(
            self.out,
            "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\"/>",
            place(a.0.min(b.0)),
            place(a.1.min(b.1)),
            place((b.0 - a.0).abs()),
            place((b.1 - a.1).abs())
        );
        Ok(())
    }

    fn draw_path<S: BackendStyle, I: IntoIterator<Item = BackendCoord>>(
        &mut self,
        path: I,
        style: &S,
    ) -> Drawn {
        self.stroke(style);
        self.points("polyline", path);
        Ok(())
    }

    fn draw_circle<S: BackendStyle>(
        &mut self,
        centre: BackendCoord,
        radius: u32,
        style: &S,
        fill: bool,
    ) -> Drawn {
        self.shape(style, fill);
        let radius = short(f64::from(radius) / STEPS);
        let (x, y) = (place(centre.0), place(centre.1));
        let _ = write!(self.out, "<circle cx=\"{x}\" cy=\"{y}\" r=\"{radius}\"/>");
        Ok(())
    }

    fn fill_polygon<S: BackendStyle, I: IntoIterator<Item = BackendCoord>>(
        &mut self,
        corners: I,
        style: &S,
    ) -> Drawn {
        self.fill(style.color());
        self.points("polygon", corners);
        Ok(())
    }

    fn draw_text<T: BackendTextStyle>(&mut self, text: &str, style: &T, at: BackendCoord) -> Drawn {
        let ink = self.pen.borrow().clone();
        let size = style.size() / STEPS;
        let anchor = match style.anchor().h_pos {
            HPos::Left => "start",
            HPos::Center => "middle",
            HPos::Right => "end",
        };
        let weight = if matches!(style.style(), FontStyle::Bold) { "600" } else { "400" };
        let rim = if ink.rim { " stroke-ground" } else { "" };
        let mut look = format!(
            " class=\"{} fill-{}{rim}\" fill=\"{}\" font-size=\"{}\" font-weight=\"{weight}\" text-anchor=\"{anchor}\"",
            ink.class,
            ink.token.name(),
            hex(style.color()),
            short(size)
        );
        if ink.rim {
            let ground = self.theme.hex(Token::Ground);
            let _ = write!(
                look,
                " stroke=\"{ground}\" stroke-width=\"3\" stroke-linejoin=\"round\" paint-order=\"stroke\""
            );
        }
        self.look(look);
        // Set by the capital letters: what stands below the line does not move the text.
        let drop = match style.anchor().v_pos {
            VPos::Top => size * font::CAP_HEIGHT,
            VPos::Center => size * font::CAP_HEIGHT / 2.0,
            VPos::Bottom => 0.0,
        };
        let y = short(f64::from(at.1) / STEPS + drop);
        let _ = write!(self.out, "<text x=\"{}\" y=\"{y}\">{}</text>", place(at.0), escape(text));
        Ok(())
    }

    fn estimate_text_size<T: BackendTextStyle>(
        &self,
        text: &str,
        style: &T,
    ) -> Result<(u32, u32), DrawingErrorKind<Infallible>> {
        let bold = matches!(style.style(), FontStyle::Bold);
        Ok((font::width_px(text, style.size(), bold).ceil() as u32, style.size().ceil() as u32))
    }
}

/// Text made harmless in markup: escaped, and without the control letters that XML forbids.
pub fn escape(text: &str) -> String {
    let mut safe = String::with_capacity(text.len());
    for letter in text.chars() {
        match letter {
            '&' => safe.push_str("&amp;"),
            '<' => safe.push_str("&lt;"),
            '>' => safe.push_str("&gt;"),
            '"' => safe.push_str("&quot;"),
            '\'' => safe.push_str("&#39;"),
            '\t' | '\n' => safe.push(letter),
            '\u{fffe}' | '\u{ffff}' => safe.push('\u{fffd}'),
            control if control.is_control() => safe.push('\u{fffd}'),
            letter => safe.push(letter),
        }
    }
    safe
}

fn hex(colour: BackendColor) -> String {
    let (red, green, blue) = colour.rgb;
    format!("#{red:02X}{green:02X}{blue:02X}")
}

fn place(steps: i32) -> String {
    short(f64::from(steps) / STEPS)
}

/// At most two decimals and no idle zeros.
pub(crate) fn short(value: f64) -> String {
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn markup_in_a_text_stays_text() {
        let text = escape("<script>alert(\"1\")</script> & 'x'\u{0}\u{1b}");
        assert_eq!(
            text,
            "&lt;script&gt;alert(&quot;1&quot;)&lt;/script&gt; &amp; &#39;x&#39;\u{fffd}\u{fffd}"
        );
    }

    #[test]
    fn numbers_are_short() {
        assert_eq!([1.0, 1.5, 0.25, -0.001, 1200.0].map(short), ["1", "1.5", "0.25", "0", "1200"]);
    }
}
