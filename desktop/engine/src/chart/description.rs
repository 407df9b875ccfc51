//! What a chart shows, as plain data. Nothing here knows how it is drawn.

use super::mark::Mark;
use super::theme::Token;
use crate::series::Point;
use jiff::tz::TimeZone;

/// How an axis is divided.
#[derive(Debug, Clone, Default)]
pub enum Scale {
    /// Equal steps.
    #[default]
    Linear,
    /// Equal factors, base 10; values must be above zero.
    Log,
    /// Seconds of Unix time, labelled in the civil time of the zone.
    Time(TimeZone),
}

/// One axis.
#[derive(Debug, Clone, Default)]
pub struct Axis {
    /// What is shown, in terms of the trade.
    pub label: String,
    /// Its unit; empty for a pure number and for time.
    pub unit: String,
    /// How it is divided.
    pub scale: Scale,
    /// Ends of the axis; `None` takes in everything that is drawn and rounds outwards.
    pub range: Option<(f64, f64)>,
    /// Values that must be on the axis when the range is free (zero, the full height).
    pub include: Vec<f64>,
    /// Larger values further down, as settlement is drawn.
    pub downward: bool,
}

/// Pattern of a line, so that it is told apart without colour.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Dash {
    /// Unbroken.
    #[default]
    Solid,
    /// Dots.
    Dotted,
    /// Dots close together, for small outlines.
    Beaded,
    /// Short dashes.
    Short,
    /// Long dashes.
    Long,
}

/// Look and name of a series.
#[derive(Debug, Clone, PartialEq)]
pub struct Look {
    /// Class in the SVG, a short word such as `likely`.
    pub class: &'static str,
    /// Text at the end of the line; empty for none.
    pub label: String,
    /// Colour.
    pub token: Token,
    /// Width of a line or radius of a point, px.
    pub weight_px: f64,
    /// Pattern of a line.
    pub dash: Dash,
}

/// The expected values at one `x`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BandPoint {
    /// Position along the axis.
    pub x: f64,
    /// Lower edge of the band.
    pub low: f64,
    /// Upper edge of the band.
    pub high: f64,
}

/// Form of a mark for single values.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Dot {
    /// Filled disc: a good reading.
    Full,
    /// Small cross: a value that is not to be trusted.
    Cross,
}

/// What a series is.
#[derive(Debug, Clone, PartialEq)]
pub enum Kind {
    /// Points joined in order of `x`; broken at missing values and at steps longer than `max_gap`.
    Line { points: Vec<Point>, max_gap: Option<f64> },
    /// Points joined in the order given, whichever way `x` goes.
    Path { points: Vec<Point> },
    /// Each value holds until the next `x`: limits by stage.
    Step { points: Vec<Point> },
    /// Area between two values.
    Band { points: Vec<BandPoint> },
    /// Single values.
    Dots { points: Vec<Point>, dot: Dot },
}

/// One series.
#[derive(Debug, Clone, PartialEq)]
pub struct Series {
    /// Its name and look.
    pub look: Look,
    /// Its form and values.
    pub kind: Kind,
}

/// A stretch of the horizontal axis shaded behind everything: a hold.
#[derive(Debug, Clone, PartialEq)]
pub struct Shade {
    pub from: f64,
    pub to: f64,
    /// Written at the top of the stretch where it fits; empty for none.
    pub label: String,
}

/// A stretch of the horizontal axis hatched along the bottom: an equipment fault.
#[derive(Debug, Clone, PartialEq)]
pub struct Hatch {
    pub from: f64,
    pub to: f64,
    /// Written on the strip where it fits.
    pub label: String,
}

/// A moment marked with a line from top to bottom: the cursor, now.
#[derive(Debug, Clone, PartialEq)]
pub struct Vertical {
    pub x: f64,
    pub label: String,
}

/// A mark in the lane under the plot: the trigger changed here.
#[derive(Debug, Clone, PartialEq)]
pub struct Event {
    pub x: f64,
    pub mark: Mark,
}

/// One point picked out with a ring and its value in words.
#[derive(Debug, Clone, PartialEq)]
pub struct Highlight {
    pub at: Point,
    pub token: Token,
    /// Value with its unit.
    pub label: String,
}

/// A chart as plain data.
#[derive(Debug, Clone, Default)]
pub struct Chart {
    /// Heading.
    pub title: String,
    /// What the picture says, in words, for those who cannot see it.
    pub description: String,
    /// Horizontal axis.
    pub x: Axis,
    /// Vertical axis.
    pub y: Axis,
    /// Drawn in order, the last on top.
    pub series: Vec<Series>,
    pub shades: Vec<Shade>,
    pub hatches: Vec<Hatch>,
    pub verticals: Vec<Vertical>,
    pub events: Vec<Event>,
    pub highlight: Option<Highlight>,
}
