//! From values to places: the range of an axis, its divisions, and the way back for the pointer.

use super::clip::Window;
use super::description::{Axis, Chart, Dot, Kind, Scale};
use super::ticks::{self, Tick};
use super::time_axis;
use crate::series::Point;

/// A range that cannot be drawn.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum AxisError {
    /// The ends are not finite, or the first is not below the second.
    #[error(
        "the {axis} axis is asked to run from {low} to {high}; give two finite ends, the lower first"
    )]
    Range { axis: String, low: f64, high: f64 },
    /// A logarithmic axis was asked to begin at or below zero.
    #[error("the {axis} axis is logarithmic and cannot begin at {low}; begin above zero")]
    NotAboveZero { axis: String, low: f64 },
}

/// How values of one axis lie on the picture: `px0` shows `v0`, `px1` shows `v1`; between them the
/// value, or its logarithm when `log`, grows evenly.
#[derive(Debug, Clone, Copy, PartialEq, serde::Serialize)]
pub struct ScaleMapping {
    /// Pixel of `v0`.
    pub px0: f64,
    /// Pixel of `v1`.
    pub px1: f64,
    /// Value at `px0`.
    pub v0: f64,
    /// Value at `px1`.
    pub v1: f64,
    /// Whether the logarithm is what grows evenly.
    pub log: bool,
}

impl ScaleMapping {
    /// Pixel of a value.
    pub fn px(&self, value: f64) -> f64 {
        let to = |v: f64| if self.log { v.log10() } else { v };
        let part = (to(value) - to(self.v0)) / (to(self.v1) - to(self.v0));
        self.px0 + part * (self.px1 - self.px0)
    }

    /// Value at a pixel.
    pub fn value(&self, px: f64) -> f64 {
        let part = (px - self.px0) / (self.px1 - self.px0);
        if self.log {
            self.v0 * (self.v1 / self.v0).powf(part)
        } else {
            self.v0 + part * (self.v1 - self.v0)
        }
    }
}

/// Both axes of one plot.
#[derive(Debug, Clone, Copy, PartialEq, serde::Serialize)]
pub struct AxisMapping {
    /// Horizontal axis.
    pub x: ScaleMapping,
    /// Vertical axis.
    pub y: ScaleMapping,
}

/// An axis with its ends fixed. Inside, a logarithmic axis counts in powers of ten.
#[derive(Debug, Clone)]
pub(crate) struct Resolved<'a> {
    pub axis: &'a Axis,
    pub low: f64,
    pub high: f64,
}

impl<'a> Resolved<'a> {
    /// Fixes the ends: as asked, or around the values drawn.
    fn new(
        axis: &'a Axis,
        values: impl Iterator<Item = f64>,
        around: impl Fn(f64, f64) -> (f64, f64),
    ) -> Result<Self, AxisError> {
        let log = matches!(axis.scale, Scale::Log);
        let (low, high) = match axis.range {
            Some(range) => range,
            None => {
                let usable = |value: &f64| value.is_finite() && (!log || *value > 0.0);
                let (low, high) = values
                    .chain(axis.include.iter().copied())
                    .filter(usable)
                    .fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), v| (l.min(v), h.max(v)));
                around_or_default(low, high, log, around)
            }
        };
        let name = || axis.label.clone();
        if !(low.is_finite() && high.is_finite() && low < high) {
            return Err(AxisError::Range { axis: name(), low, high });
        }
        if log && low <= 0.0 {
            return Err(AxisError::NotAboveZero { axis: name(), low });
        }
        Ok(Self { axis, low, high })
    }

    pub fn is_log(&self) -> bool {
        matches!(self.axis.scale, Scale::Log)
    }

    /// The value as the plane of the drawing counts it; not finite where it has no place.
    pub fn project(&self, value: f64) -> f64 {
        if self.is_log() { if value > 0.0 { value.log10() } else { f64::NAN } } else { value }
    }

    /// Ends on the plane of the drawing.
    pub fn ends(&self) -> (f64, f64) {
        (self.project(self.low), self.project(self.high))
    }

    pub fn ticks(&self, most: usize) -> Vec<Tick> {
        match &self.axis.scale {
            Scale::Linear => ticks::linear(self.low, self.high, most),
            Scale::Log => ticks::log(self.low, self.high, most),
            Scale::Time(zone) => time_axis::ticks(self.low, self.high, zone, most),
        }
    }

    /// Label with unit: `applied pressure, kPa`.
    pub fn caption(&self) -> String {
        match (self.axis.label.is_empty(), self.axis.unit.is_empty()) {
            (false, false) => format!("{}, {}", self.axis.label, self.axis.unit),
            _ => format!("{}{}", self.axis.label, self.axis.unit),
        }
    }
}

fn around_or_default(
    low: f64,
    high: f64,
    log: bool,
    around: impl Fn(f64, f64) -> (f64, f64),
) -> (f64, f64) {
    if low > high {
        // Nothing to draw: an empty frame still needs ends.
        return if log { (1.0, 10.0) } else { (0.0, 1.0) };
    }
    if low == high {
        let pad = if low == 0.0 { 1.0 } else { low.abs() * 0.1 };
        return if log { (low / 2.0, low * 2.0) } else { around(low - pad, high + pad) };
    }
    around(low, high)
}

/// Both axes of a chart, with ends fixed.
#[derive(Debug, Clone)]
pub(crate) struct Plane<'a> {
    pub x: Resolved<'a>,
    pub y: Resolved<'a>,
}

impl<'a> Plane<'a> {
    pub fn new(chart: &'a Chart) -> Result<Self, AxisError> {
        let x = Resolved::new(&chart.x, all_x(chart), |low, high| breathe(&chart.x, low, high))?;
        Self::over(chart, x)
    }

    /// As [`Plane::new`], on the horizontal axis of another chart.
    pub fn over(chart: &'a Chart, x: Resolved<'a>) -> Result<Self, AxisError> {
        let seen = values(chart).filter(|point| x.low <= point.0 && point.0 <= x.high);
        let y = Resolved::new(&chart.y, seen.map(|point| point.1), |low, high| {
            if matches!(chart.y.scale, Scale::Log) {
                (10f64.powf(low.log10().floor()), 10f64.powf(high.log10().ceil()))
            } else {
                ticks::rounded(low, high, 6)
            }
        })?;
        Ok(Self { x, y })
    }

    pub fn project(&self, point: Point) -> Point {
        (self.x.project(point.0), self.y.project(point.1))
    }

    pub fn window(&self) -> Window {
        Window { x: self.x.ends(), y: self.y.ends() }
    }
}

/// A little room beside the outermost values; a time axis begins and ends with its data.
fn breathe(axis: &Axis, low: f64, high: f64) -> (f64, f64) {
    match axis.scale {
        Scale::Linear => (low - 0.02 * (high - low), high + 0.02 * (high - low)),
        Scale::Log | Scale::Time(_) => (low, high),
    }
}

fn all_x(chart: &Chart) -> impl Iterator<Item = f64> + '_ {
    let spans = chart.shades.iter().flat_map(|shade| [shade.from, shade.to]);
    let marks = chart.verticals.iter().map(|vertical| vertical.x);
    values(chart).map(|point| point.0).chain(spans).chain(marks)
}

/// Every value that the vertical axis must take in. Values that are not to be trusted may lie far
/// out; they are shown at the edge instead of flattening everything else.
fn values(chart: &Chart) -> impl Iterator<Item = Point> + '_ {
    let highlight = chart.highlight.iter().map(|highlight| highlight.at);
    let series = chart.series.iter().flat_map(|series| -> Vec<Point> {
        match &series.kind {
            Kind::Line { points, .. } | Kind::Path { points } | Kind::Step { points } => {
                points.clone()
            }
            Kind::Dots { points, dot: Dot::Full } => points.clone(),
            Kind::Dots { dot: Dot::Cross, .. } => Vec::new(),
            Kind::Band { points } => points
                .iter()
                .flat_map(|point| [(point.x, point.low), (point.x, point.high)])
                .collect(),
        }
    });
    series.chain(highlight).filter(|point| point.0.is_finite() && point.1.is_finite())
}
