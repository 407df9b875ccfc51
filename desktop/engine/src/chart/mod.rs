//! Charts: a description in plain data becomes one SVG picture and the way back from its pixels to
//! values.
//!
//! ```text
//! instrument, pressure, fill line -> Chart -> axes -> layout -> plotters -> SVG + mapping (-> PNG)
//! ```
//!
//! The look: quiet, no box, no legend; every line is named where it ends. What a colour says a
//! mark, a dash or a word says too. Readings stand as points, never joined, because nothing is
//! known between them. A value beyond the scale shows as an arrow at the edge. Where data are
//! missing the curve breaks.
//!
//! Pictures carry colours and sizes as attributes, a `role`, a title and a description, and classes
//! `fill-NAME` and `stroke-NAME` by which a page can put another theme over them
//! ([`theme::stylesheet`]). All text is escaped.

mod axis;
mod band_bar;
mod canvas;
mod clip;
mod description;
mod draw;
mod fill_line;
pub mod font;
mod furniture;
mod instrument;
mod labels;
mod layout;
mod mark;
#[cfg(feature = "png")]
mod png;
mod sheet;
pub mod theme;
mod ticks;
mod time_axis;

pub use axis::{AxisError, AxisMapping, ScaleMapping};
pub use band_bar::band_bar;
pub use canvas::escape;
pub use description::{
    Axis, BandPoint, Chart, Dash, Dot, Event, Hatch, Highlight, Kind, Look, Scale, Series, Shade,
    Vertical,
};
pub use fill_line::FillLine;
pub use instrument::{
    Expected, InstrumentChart, Limit, LimitKind, PressureChart, Quantity, Reading, Stretch,
    TriggerChange,
};
pub use mark::Mark;
#[cfg(feature = "png")]
pub use png::{PngError, png};
pub use sheet::DrawError;
pub use theme::{Theme, Token};
pub use ticks::number;
pub use time_axis::stamp;

use axis::Plane;
use canvas::{STEPS, SvgCanvas, pen, short};
use draw::{Artist, Plot};
use furniture::Furniture;
use labels::Box2;
use layout::{Layout, Row, Sides};
use plotters::prelude::ChartBuilder;
use plotters_backend::DrawingBackend;
use sheet::Sheet;

/// Why a chart could not be drawn.
#[derive(Debug, thiserror::Error)]
pub enum ChartError {
    /// An axis has no usable range.
    #[error(transparent)]
    Axis(#[from] AxisError),
    /// The drawing itself failed.
    #[error(transparent)]
    Draw(#[from] DrawError),
    /// No room for the plot beside its labels.
    #[error(
        "a picture of {width_px} by {height_px} px leaves no room for the plot; make it larger"
    )]
    TooSmall { width_px: f64, height_px: f64 },
}

/// Size of a picture, px.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Size {
    pub width_px: f64,
    pub height_px: f64,
}

/// A chart as a picture.
#[derive(Debug, Clone, PartialEq, serde::Serialize)]
pub struct Rendered {
    /// The picture: a whole SVG document that can stand in a page as it is.
    pub svg: String,
    /// From pixels to values and back.
    pub mapping: AxisMapping,
    /// Width, px.
    pub width_px: f64,
    /// Height, px.
    pub height_px: f64,
}

/// Charts under each other on one horizontal axis.
#[derive(Debug, Clone, PartialEq, serde::Serialize)]
pub struct RenderedStack {
    /// The picture.
    pub svg: String,
    /// One per chart, from the top.
    pub mappings: Vec<AxisMapping>,
    /// Width, px.
    pub width_px: f64,
    /// Height, px.
    pub height_px: f64,
}

impl Chart {
    /// Draws the chart.
    ///
    /// # Errors
    /// [`ChartError`] when an axis has no usable range or the size leaves no room.
    pub fn render(&self, size: Size, theme: &Theme) -> Result<Rendered, ChartError> {
        let stack = Stack { charts: std::slice::from_ref(self) };
        let mut drawn = stack.render(size, theme)?;
        let mapping = drawn.mappings.remove(0);
        let RenderedStack { svg, width_px, height_px, .. } = drawn;
        Ok(Rendered { svg, mapping, width_px, height_px })
    }
}

/// Small charts under each other on the horizontal axis of the first.
#[derive(Debug, Clone, Copy)]
pub struct Stack<'a> {
    /// From the top; at least one.
    pub charts: &'a [Chart],
}

impl Stack<'_> {
    /// Draws the charts under each other.
    ///
    /// # Errors
    /// [`ChartError`] when an axis has no usable range or the size leaves no room.
    pub fn render(&self, size: Size, theme: &Theme) -> Result<RenderedStack, ChartError> {
        let planes = self.planes()?;
        let layouts = self.layouts(&planes, size)?;
        let mut body = String::new();
        let mut mappings = Vec::new();
        let mut off_scale = 0;
        {
            let pen = pen();
            let canvas =
                SvgCanvas::new(&mut body, (size.width_px, size.height_px), pen.clone(), theme);
            let sheet = Sheet::new(canvas, pen, theme);
            sheet.rect("ground", Token::Ground, (0.0, 0.0), (size.width_px, size.height_px))?;
            for ((chart, plane), layout) in self.charts.iter().zip(&planes).zip(&layouts) {
                let (mapping, beyond) = draw_panel(&sheet, chart, plane, layout)?;
                mappings.push(mapping);
                off_scale += beyond;
            }
            sheet.finish()?;
        }
        let svg = self.document(&body, size, off_scale);
        Ok(RenderedStack { svg, mappings, width_px: size.width_px, height_px: size.height_px })
    }

    fn planes(&self) -> Result<Vec<Plane<'_>>, ChartError> {
        let mut planes: Vec<Plane<'_>> = Vec::new();
        for chart in self.charts {
            let plane = match planes.first() {
                Some(first) => Plane::over(chart, first.x.clone())?,
                None => Plane::new(chart)?,
            };
            planes.push(plane);
        }
        Ok(planes)
    }

    /// Equal heights for the plots' parts, and the same sides, so that one moment lies on one line.
    fn layouts(&self, planes: &[Plane<'_>], size: Size) -> Result<Vec<Layout>, ChartError> {
        let sides = self.charts.iter().zip(planes).map(|(chart, plane)| Sides::of(chart, plane));
        let sides = sides.fold(Sides { left: 0.0, right: 0.0 }, Sides::max);
        let height = size.height_px / self.charts.len().max(1) as f64;
        let mut layouts = Vec::new();
        for (index, (chart, plane)) in self.charts.iter().zip(planes).enumerate() {
            let top = height * index as f64;
            let outer = Box2 { from: (0.0, top), to: (size.width_px, top + height) };
            let row = Row { first: index == 0, last: index + 1 == self.charts.len() };
            let layout = Layout::new(chart, plane, outer, sides, row);
            let plot = layout.plot;
            if plot.to.0 - plot.from.0 < 20.0 || plot.to.1 - plot.from.1 < 20.0 {
                let Size { width_px, height_px } = size;
                return Err(ChartError::TooSmall { width_px, height_px });
            }
            layouts.push(layout);
        }
        Ok(layouts)
    }

    fn document(&self, body: &str, size: Size, off_scale: usize) -> String {
        let titles: Vec<_> = self.charts.iter().map(|chart| chart.title.as_str()).collect();
        let mut words: Vec<_> = self.charts.iter().map(|chart| chart.description.clone()).collect();
        if off_scale > 0 {
            words.push(format!(
                "{off_scale} values lie beyond the scale, shown as arrows at its edge."
            ));
        }
        let (width, height) = (short(size.width_px), short(size.height_px));
        format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" class=\"chart\" role=\"img\" width=\"{width}\" height=\"{height}\" viewBox=\"0 0 {width} {height}\" font-family=\"{}, sans-serif\" text-rendering=\"geometricPrecision\">\n<title>{}</title>\n<desc>{}</desc>\n{body}</svg>\n",
            font::FAMILY,
            escape(&titles.join("; ")),
            escape(words.join(" ").trim())
        )
    }
}

/// Draws one chart into its part of the picture; also tells how many values are off the scale.
fn draw_panel<B: DrawingBackend>(
    sheet: &Sheet<'_, B>,
    chart: &Chart,
    plane: &Plane<'_>,
    layout: &Layout,
) -> Result<(AxisMapping, usize), ChartError> {
    let mut plot = plot(sheet, plane, layout)?;
    let mapping = mapping(&plot, plane);
    let furniture = Furniture {
        sheet,
        chart,
        layout,
        plane,
        x_px: &|value| mapping.x.px(value),
        y_px: &|value| mapping.y.px(value),
    };
    furniture.draw_under()?;
    let mut artist = Artist { sheet, plot: &mut plot, plane, layout, drawn: Default::default() };
    for series in &chart.series {
        artist.series(series)?;
    }
    let drawn = artist.drawn;
    let off_scale = drawn.off_scale;
    furniture.draw_over(drawn)?;
    Ok((mapping, off_scale))
}

/// The plot as the drawing library lays it.
fn plot<'a, B: DrawingBackend>(
    sheet: &Sheet<'a, B>,
    plane: &Plane<'_>,
    layout: &Layout,
) -> Result<Plot<'a, B>, ChartError> {
    let (from, to) = (layout.plot.from, layout.plot.to);
    let (width, height) = sheet.area.dim_in_pixel();
    let step = canvas::step;
    let area = sheet.area.margin(
        step(from.1),
        height as i32 - step(to.1),
        step(from.0),
        width as i32 - step(to.0),
    );
    let ((x0, x1), (low, high)) = (plane.x.ends(), plane.y.ends());
    let y = if plane.y.axis.downward { high..low } else { low..high };
    let plot =
        ChartBuilder::on(&area).build_cartesian_2d(x0..x1, y).map_err(DrawError::from_display)?;
    Ok(plot)
}

fn mapping<B: DrawingBackend>(plot: &Plot<'_, B>, plane: &Plane<'_>) -> AxisMapping {
    let (x, y) = plot.plotting_area().get_pixel_range();
    let px = |steps: i32| f64::from(steps) / STEPS;
    let scale = |px0, px1, axis: &axis::Resolved<'_>| ScaleMapping {
        px0,
        px1,
        v0: axis.low,
        v1: axis.high,
        log: axis.is_log(),
    };
    let (top, bottom) = (px(y.start), px(y.end));
    let y = if plane.y.axis.downward {
        scale(top, bottom, &plane.y)
    } else {
        scale(bottom, top, &plane.y)
    };
    AxisMapping { x: scale(px(x.start), px(x.end), &plane.x), y }
}

#[cfg(all(test, feature = "png"))]
mod tests;
