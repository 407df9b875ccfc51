//! Where the parts of one chart lie, measured from its texts before anything is drawn.

use super::axis::Plane;
use super::description::{Chart, Look, Scale};
use super::font;
use super::labels::Box2;
use super::ticks::Tick;
use super::time_axis;

/// Size of small text, px.
pub(crate) const SMALL_PX: f64 = 12.0;
/// Size of the heading, px.
pub(crate) const HEADING_PX: f64 = 14.0;
/// Distance of label lines, px.
pub(crate) const LABEL_GAP_PX: f64 = 14.5;

const HEADING_ROW_PX: f64 = 22.0;
const SMALL_ROW_PX: f64 = 16.0;
const HATCH_LANE_PX: f64 = 15.0;
const EVENT_LANE_PX: f64 = 20.0;
/// Between the plot and the labels at the ends of lines; a leader crosses it.
pub(crate) const LEADER_PX: f64 = 13.0;
/// A line that ends nearer than this to the right edge is labelled beside the plot.
const NEAR_EDGE_PX: f64 = 24.0;
/// At the right edge half a tick label can stand out.
const LEAST_RIGHT_PX: f64 = 30.0;
const AIR_PX: f64 = 6.0;

/// Room left and right of the plot; charts on one time axis share it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Sides {
    pub left: f64,
    pub right: f64,
}

impl Sides {
    pub fn of(chart: &Chart, plane: &Plane<'_>) -> Self {
        let widest = |texts: &mut dyn Iterator<Item = f64>| texts.fold(0.0, f64::max);
        let ticks = plane.y.ticks(y_divisions(200.0));
        let numbers =
            widest(&mut ticks.iter().map(|tick| font::width_px(&tick.label, SMALL_PX, false)));
        let labels = chart.series.iter().map(|series| label_width_px(&series.look));
        let picked = chart.highlight.iter().map(|h| font::width_px(&h.label, SMALL_PX, true));
        let labels = widest(&mut labels.chain(picked));
        let right = if labels > 0.0 { labels + LEADER_PX + AIR_PX } else { 0.0 };
        Self { left: numbers + 2.0 * AIR_PX, right: right.max(LEAST_RIGHT_PX) }
    }

    pub fn max(self, other: Self) -> Self {
        Self { left: self.left.max(other.left), right: self.right.max(other.right) }
    }
}

fn label_width_px(look: &Look) -> f64 {
    font::width_px(&look.label, SMALL_PX, true)
}

/// Place of a chart among those under each other: the zone is written at the first, the names of
/// the horizontal axis at the last.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Row {
    pub first: bool,
    pub last: bool,
}

/// The parts of one chart on the picture.
#[derive(Debug, Clone)]
pub(crate) struct Layout {
    /// Everything that belongs to the chart.
    pub outer: Box2,
    /// The plot itself.
    pub plot: Box2,
    /// Middle of the row of texts over the plot.
    pub over_y: f64,
    /// Middle of the lane of faults.
    pub hatch_y: f64,
    pub hatch_half: f64,
    /// Middle of the lane of trigger changes.
    pub event_y: f64,
    /// Middle of the labels of the horizontal axis, and of the row under them.
    pub tick_y: f64,
    pub under_y: f64,
    pub x_ticks: Vec<Tick>,
    pub y_ticks: Vec<Tick>,
    /// Heading, and what is plotted in which unit; on one row where there is room.
    pub heading: Heading,
    /// Whether the labels of the horizontal axis are written.
    pub names_x: bool,
}

/// The texts over the plot.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Heading {
    pub title: String,
    pub caption: String,
    pub caption_below: bool,
    /// Offset from UTC of the time axis.
    pub zone: String,
}

impl Heading {
    fn of(chart: &Chart, plane: &Plane<'_>, room_px: f64, names_zone: bool) -> Self {
        let zone = match &chart.x.scale {
            Scale::Time(zone) if names_zone => time_axis::offsets(plane.x.low, plane.x.high, zone),
            _ => String::new(),
        };
        let zone_px = font::width_px(&zone, SMALL_PX, false);
        let room_px = if zone.is_empty() { room_px } else { room_px - zone_px - 2.0 * AIR_PX };
        let title = shortened(&chart.title, HEADING_PX, true, room_px);
        let caption = plane.y.caption();
        let both = font::width_px(&title, HEADING_PX, true)
            + 2.0 * AIR_PX
            + font::width_px(&caption, SMALL_PX, false);
        Self { caption_below: both > room_px && !caption.is_empty(), title, caption, zone }
    }

    fn height_px(&self) -> f64 {
        HEADING_ROW_PX + if self.caption_below { SMALL_ROW_PX } else { 0.0 }
    }
}

impl Layout {
    pub fn new(chart: &Chart, plane: &Plane<'_>, outer: Box2, sides: Sides, row: Row) -> Self {
        let names_x = row.last;
        let left = outer.from.0 + sides.left;
        let right = outer.to.0 - sides.right;
        let heading =
            Heading::of(chart, plane, outer.to.0 - outer.from.0 - 2.0 * AIR_PX, row.first);
        let labelled = chart.shades.iter().map(|shade| &shade.label);
        let over = labelled
            .chain(chart.verticals.iter().map(|vertical| &vertical.label))
            .any(|label| !label.is_empty());
        let over_px = if over { SMALL_ROW_PX } else { 0.0 };
        let top = outer.from.1 + heading.height_px() + over_px + AIR_PX;

        let x_ticks = x_ticks(plane, right - left);
        let under =
            x_ticks.iter().any(|tick| tick.under.is_some()) || !plane.x.caption().is_empty();
        let seen = |from: f64, to: f64| from <= plane.x.high && to >= plane.x.low;
        let hatched = chart.hatches.iter().any(|hatch| seen(hatch.from, hatch.to));
        let hatch_px = if hatched { HATCH_LANE_PX } else { 0.0 };
        let marked = chart.events.iter().any(|event| seen(event.x, event.x));
        let event_px = if marked { EVENT_LANE_PX } else { 0.0 };
        let names_px = match (names_x, under) {
            (false, _) => AIR_PX,
            (true, false) => SMALL_ROW_PX + AIR_PX,
            (true, true) => 2.0 * SMALL_ROW_PX + AIR_PX,
        };
        let bottom = outer.to.1 - names_px - event_px - hatch_px;
        let names_top = bottom + hatch_px + event_px;
        Self {
            outer,
            plot: Box2 { from: (left, top), to: (right, bottom) },
            over_y: top - AIR_PX - over_px / 2.0,
            hatch_y: bottom + event_px + hatch_px / 2.0 + 1.0,
            hatch_half: hatch_px / 2.0 - 2.5,
            event_y: bottom + event_px / 2.0 + 1.0,
            tick_y: names_top + SMALL_ROW_PX / 2.0 + 3.0,
            under_y: names_top + 1.5 * SMALL_ROW_PX + 3.0,
            y_ticks: plane.y.ticks(y_divisions(bottom - top)),
            x_ticks,
            heading,
            names_x,
        }
    }

    pub fn width_px(&self) -> f64 {
        self.plot.to.0 - self.plot.from.0
    }

    /// Whether a line that ends here is labelled beside the plot.
    pub fn ends_at_edge(&self, x_px: f64) -> bool {
        self.plot.to.0 - x_px < NEAR_EDGE_PX
    }

    /// Where labels beside the plot begin.
    pub fn label_x(&self) -> f64 {
        self.plot.to.0 + LEADER_PX
    }
}

/// About 30 px a division.
fn y_divisions(height_px: f64) -> usize {
    (height_px / 30.0).clamp(2.0, 8.0) as usize
}

/// As many divisions as their labels have room for.
fn x_ticks(plane: &Plane<'_>, width_px: f64) -> Vec<Tick> {
    let (low, high) = plane.x.ends();
    let px_per_unit = width_px / (high - low);
    let fits = |ticks: &[Tick]| {
        ticks.windows(2).all(|pair| {
            let apart = (plane.x.project(pair[1].at) - plane.x.project(pair[0].at)) * px_per_unit;
            let widths = pair.iter().map(|tick| font::width_px(&tick.label, SMALL_PX, false));
            apart >= widths.sum::<f64>() / 2.0 + 2.5 * AIR_PX
        })
    };
    let finest = (3..=12).rev().map(|most| plane.x.ticks(most)).find(|ticks| fits(ticks));
    finest.unwrap_or_else(|| plane.x.ticks(2))
}

/// A text cut to a width, with an ellipsis where something is cut.
pub(crate) fn shortened(text: &str, size_px: f64, bold: bool, room_px: f64) -> String {
    if font::width_px(text, size_px, bold) <= room_px {
        return text.to_owned();
    }
    let mut kept: String = text.to_owned();
    while !kept.is_empty() {
        kept.pop();
        let candidate = format!("{}…", kept.trim_end());
        if font::width_px(&candidate, size_px, bold) <= room_px {
            return candidate;
        }
    }
    String::new()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_long_heading_is_cut_with_an_ellipsis_and_fits() {
        let long = "Piezometer under the east edge of the tank in the lower soft clay";
        let cut = shortened(long, 14.0, true, 200.0);
        assert!(cut.ends_with('…') && font::width_px(&cut, 14.0, true) <= 200.0, "{cut}");
        assert_eq!(shortened("P9", 14.0, true, 200.0), "P9");
    }
}
