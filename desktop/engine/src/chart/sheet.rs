//! Drawing in pixels with meaning: each stroke says what it is and takes its colour from the theme.

use super::canvas::{Pen, STEPS, SvgCanvas, escape, pen, short, step};
use super::description::Dash;
use super::font;
use super::theme::{Theme, Token};
use plotters::coord::Shift;
use plotters::element::{Circle, PathElement, Polygon, Rectangle, Text};
use plotters::prelude::{DrawingArea, IntoDrawingArea, IntoFont};
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{Color, FontStyle, ShapeStyle, TextStyle};
use plotters_backend::DrawingBackend;
use std::fmt::Display;

/// A place in pixels, from the upper left corner.
pub(crate) type Place = (f64, f64);

/// The drawing library refused. Drawing into memory does not fail; this is here so that a fault in
/// it is reported and never half a chart.
#[derive(Debug, thiserror::Error)]
#[error("the chart could not be drawn: {0}")]
pub struct DrawError(String);

impl DrawError {
    pub(crate) fn from_display(error: impl Display) -> Self {
        Self(error.to_string())
    }
}

/// Look of a line.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Stroke {
    pub class: &'static str,
    pub token: Token,
    pub width_px: f64,
    pub dash: Dash,
}

impl Stroke {
    pub fn hair(class: &'static str, token: Token) -> Self {
        Self { class, token, width_px: 0.8, dash: Dash::Solid }
    }
}

/// Which part of a text stands at its place; up and down it is always the middle.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Across {
    Start,
    Middle,
    End,
}

/// Look of a text.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Letters {
    pub class: &'static str,
    pub token: Token,
    pub size_px: f64,
    pub bold: bool,
    pub across: Across,
    /// A rim of ground around the letters, so that they read over lines.
    pub rim: bool,
}

impl Letters {
    pub fn soft(class: &'static str) -> Self {
        Self {
            class,
            token: Token::Soft,
            size_px: 12.0,
            bold: false,
            across: Across::Start,
            rim: false,
        }
    }

    pub fn width_px(&self, text: &str) -> f64 {
        font::width_px(text, self.size_px, self.bold)
    }
}

/// The whole picture, on any backend of the drawing library.
pub(crate) struct Sheet<'a, B: DrawingBackend> {
    pub area: DrawingArea<B, Shift>,
    pen: Pen,
    pub theme: &'a Theme,
}

impl<'a, B: DrawingBackend> Sheet<'a, B> {
    pub fn new(backend: B, pen: Pen, theme: &'a Theme) -> Self {
        Self { area: backend.into_drawing_area(), pen, theme }
    }

    pub fn finish(&self) -> Result<(), DrawError> {
        self.area.present().map_err(DrawError::from_display)
    }

    /// Takes up the pen for a line and gives its look to the drawing library.
    pub fn stroke(&self, stroke: Stroke) -> ShapeStyle {
        let mut ink = self.pen.borrow_mut();
        (ink.class, ink.token, ink.dash) = (stroke.class, stroke.token, stroke.dash);
        ShapeStyle {
            color: self.theme.colour(stroke.token).to_rgba(),
            filled: false,
            stroke_width: step(stroke.width_px * self.theme.line_factor).unsigned_abs(),
        }
    }

    /// Takes up the pen for an area.
    pub fn filling(&self, class: &'static str, token: Token) -> ShapeStyle {
        let stroke = Stroke { class, token, width_px: 0.0, dash: Dash::Solid };
        self.stroke(stroke).filled()
    }

    pub fn line(&self, stroke: Stroke, points: &[Place]) -> Result<(), DrawError> {
        let style = self.stroke(stroke);
        self.draw(&PathElement::new(steps(points), style))
    }

    pub fn area(
        &self,
        class: &'static str,
        token: Token,
        corners: &[Place],
    ) -> Result<(), DrawError> {
        let style = self.filling(class, token);
        self.draw(&Polygon::new(steps(corners), style))
    }

    pub fn rect(
        &self,
        class: &'static str,
        token: Token,
        from: Place,
        to: Place,
    ) -> Result<(), DrawError> {
        let style = self.filling(class, token);
        self.draw(&Rectangle::new([at(from), at(to)], style))
    }

    pub fn disc(
        &self,
        class: &'static str,
        token: Token,
        centre: Place,
        radius_px: f64,
    ) -> Result<(), DrawError> {
        let style = self.filling(class, token);
        self.draw(&Circle::new(at(centre), step(radius_px), style))
    }

    pub fn ring(&self, stroke: Stroke, centre: Place, radius_px: f64) -> Result<(), DrawError> {
        let style = self.stroke(stroke);
        self.draw(&Circle::new(at(centre), step(radius_px), style))
    }

    pub fn text(&self, letters: Letters, place: Place, text: &str) -> Result<(), DrawError> {
        {
            let mut ink = self.pen.borrow_mut();
            (ink.class, ink.token, ink.rim) = (letters.class, letters.token, letters.rim);
        }
        let weight = if letters.bold { FontStyle::Bold } else { FontStyle::Normal };
        let style: TextStyle<'_> = (font::FAMILY, letters.size_px * STEPS)
            .into_font()
            .style(weight)
            .color(&self.theme.colour(letters.token));
        let across = match letters.across {
            Across::Start => HPos::Left,
            Across::Middle => HPos::Center,
            Across::End => HPos::Right,
        };
        let style = style.pos(Pos::new(across, VPos::Center));
        self.draw(&Text::new(text.to_owned(), at(place), style))
    }

    fn draw<E>(&self, element: &E) -> Result<(), DrawError>
    where
        for<'b> &'b E: plotters::element::PointCollection<'b, (i32, i32)>,
        E: plotters::element::Drawable<B>,
    {
        self.area.draw(element).map_err(DrawError::from_display)
    }
}

/// A picture of its own for the middle of a text, named by `name`.
pub(crate) fn small_picture(
    class: &str,
    (width_px, height_px): (f64, f64),
    theme: &Theme,
    name: &str,
    draw: impl FnOnce(&Sheet<'_, SvgCanvas<'_>>) -> Result<(), DrawError>,
) -> String {
    let mut inner = String::new();
    {
        let pen = pen();
        let canvas = SvgCanvas::new(&mut inner, (width_px, height_px), pen.clone(), theme);
        let sheet = Sheet::new(canvas, pen, theme);
        // The canvas writes into memory and cannot fail; were it to, the name still stands.
        let _ = draw(&sheet).and_then(|()| sheet.finish());
    }
    let (width, height, name) = (short(width_px), short(height_px), escape(name));
    format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" class=\"{class}\" role=\"img\" width=\"{width}\" height=\"{height}\" viewBox=\"0 0 {width} {height}\"><title>{name}</title>{inner}</svg>"
    )
}

fn at(place: Place) -> (i32, i32) {
    (step(place.0), step(place.1))
}

fn steps(points: &[Place]) -> Vec<(i32, i32)> {
    points.iter().map(|point| at(*point)).collect()
}
