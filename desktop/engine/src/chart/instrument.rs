//! One instrument: its readings beside what was expected and its limits, against time and against
//! the applied pressure.

use super::description::{
    Axis, BandPoint, Chart, Dash, Dot, Event, Hatch, Highlight, Kind, Look, Scale, Series, Shade,
    Vertical,
};
use super::mark::Mark;
use super::theme::Token;
use super::ticks::number;
use super::time_axis::stamp;
use jiff::tz::TimeZone;

/// What was expected at one place on the horizontal axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Expected<X> {
    /// Seconds of Unix time, or the applied pressure.
    pub x: X,
    /// Lower edge of the likely band.
    pub low: f64,
    /// Likely value.
    pub likely: f64,
    /// Upper edge of the likely band.
    pub high: f64,
}

/// One reading.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reading<X> {
    /// Seconds of Unix time, or the applied pressure.
    pub x: X,
    /// Value in the unit of the chart; not finite where the reading is missing.
    pub value: f64,
    /// Whether its data state is good; others are drawn as crosses.
    pub good: bool,
}

/// A limit along the horizontal axis.
#[derive(Debug, Clone, PartialEq)]
pub struct Limit<X> {
    /// Which trigger begins at it.
    pub kind: LimitKind,
    /// Place and value; the limit between two points is the straight line.
    pub points: Vec<(X, f64)>,
}

/// The trigger that a limit begins.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, serde::Serialize)]
#[serde(rename_all = "snake_case")]
pub enum LimitKind {
    Watch,
    Review,
    Stop,
}

impl LimitKind {
    /// The trigger's word.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Watch => "Watch",
            Self::Review => "Review",
            Self::Stop => "Stop",
        }
    }

    /// Its colour.
    pub const fn token(self) -> Token {
        match self {
            Self::Watch => Token::Watch,
            Self::Review => Token::Review,
            Self::Stop => Token::Stop,
        }
    }

    const fn dash(self) -> Dash {
        match self {
            Self::Watch => Dash::Dotted,
            Self::Review => Dash::Short,
            Self::Stop => Dash::Long,
        }
    }
}

/// A stretch of time with a name: a hold, a fault.
#[derive(Debug, Clone, PartialEq)]
pub struct Stretch {
    pub from_s: i64,
    pub to_s: i64,
    pub label: String,
}

/// The trigger changed to this mark.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TriggerChange {
    pub time_s: i64,
    pub mark: Mark,
}

/// What is plotted.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Quantity {
    /// Term of the trade, such as `excess pore pressure`.
    pub name: String,
    /// Unit; empty for a pure number.
    pub unit: String,
    /// Decimals a value is written with.
    pub decimals: usize,
    /// Drawn with larger values further down, as settlement is.
    pub downward: bool,
}

/// One instrument against time.
#[derive(Debug, Clone)]
pub struct InstrumentChart {
    /// Heading: the point and its kind.
    pub title: String,
    pub quantity: Quantity,
    /// Zone of the site.
    pub zone: TimeZone,
    /// Ends of the time axis; `None` takes in everything.
    pub span_s: Option<(i64, i64)>,
    pub expected: Vec<Expected<i64>>,
    pub readings: Vec<Reading<i64>>,
    pub limits: Vec<Limit<i64>>,
    pub trigger_changes: Vec<TriggerChange>,
    /// Faults of the equipment, with the word for the data state.
    pub faults: Vec<Stretch>,
    pub holds: Vec<Stretch>,
    /// Cursor or present moment, with its label.
    pub moment: Option<(i64, String)>,
    /// What the instrument shows at its last good reading.
    pub mark: Mark,
}

/// One instrument against the applied pressure; readings in the order of time.
#[derive(Debug, Clone)]
pub struct PressureChart {
    /// Heading: the point and its kind.
    pub title: String,
    pub quantity: Quantity,
    /// Unit of the applied pressure.
    pub pressure_unit: String,
    pub expected: Vec<Expected<f64>>,
    pub readings: Vec<Reading<f64>>,
    pub limits: Vec<Limit<f64>>,
    /// What the instrument shows at its last good reading.
    pub mark: Mark,
}

impl InstrumentChart {
    /// As a chart.
    pub fn chart(&self) -> Chart {
        let last = last_good(&self.readings);
        let when = last.map(|reading| format!(" at {}", stamp(reading.x, &self.zone)));
        Chart {
            title: self.title.clone(),
            description: self.description(&when.unwrap_or_default()),
            x: Axis {
                scale: Scale::Time(self.zone.clone()),
                range: self.span_s.map(|(from, to)| (from as f64, to as f64)),
                ..Axis::default()
            },
            y: self.quantity.axis(),
            series: series(&self.expected, &self.readings, &self.limits),
            shades: self.holds.iter().map(shade).collect(),
            hatches: self.faults.iter().map(hatch).collect(),
            verticals: self.moment.iter().map(vertical).collect(),
            events: self.trigger_changes.iter().map(event).collect(),
            highlight: last.map(|reading| picked(&reading, &self.quantity, self.mark)),
        }
    }

    fn description(&self, when: &str) -> String {
        let faults = match self.faults.len() {
            0 => String::new(),
            1 => " 1 equipment fault is marked under the plot.".to_owned(),
            count => format!(" {count} equipment faults are marked under the plot."),
        };
        format!(
            "{} against time. {}{faults}",
            self.quantity.capitalized(),
            state(last_good(&self.readings), &self.quantity, self.mark, when)
        )
    }
}

impl PressureChart {
    /// As a chart.
    pub fn chart(&self) -> Chart {
        let last = last_good(&self.readings);
        let unit = &self.pressure_unit;
        let when =
            last.map(|reading| format!(" at {} {unit} applied pressure", number(reading.x, 1)));
        Chart {
            title: self.title.clone(),
            description: format!(
                "{} against applied pressure. {}",
                self.quantity.capitalized(),
                state(last, &self.quantity, self.mark, &when.unwrap_or_default())
            ),
            x: Axis { label: "applied pressure".to_owned(), unit: unit.clone(), ..Axis::default() },
            y: self.quantity.axis(),
            series: series(&self.expected, &self.readings, &self.limits),
            highlight: last.map(|reading| picked(&reading, &self.quantity, self.mark)),
            ..Chart::default()
        }
    }
}

impl Quantity {
    fn axis(&self) -> Axis {
        Axis {
            label: self.name.clone(),
            unit: self.unit.clone(),
            downward: self.downward,
            ..Axis::default()
        }
    }

    fn capitalized(&self) -> String {
        let mut letters = self.name.chars();
        letters.next().map_or(String::new(), |first| first.to_uppercase().chain(letters).collect())
    }

    fn value(&self, value: f64) -> String {
        let written = number(value, self.decimals);
        if self.unit.is_empty() { written } else { format!("{written} {}", self.unit) }
    }
}

/// Values that lie along a horizontal axis.
trait Along: Copy {
    fn along(self) -> f64;
}

impl Along for i64 {
    fn along(self) -> f64 {
        // Exact: an instant has far fewer than 53 bits.
        self as f64
    }
}

impl Along for f64 {
    fn along(self) -> f64 {
        self
    }
}

/// Band, limits, likely value and readings, from back to front.
fn series<X: Along>(
    expected: &[Expected<X>],
    readings: &[Reading<X>],
    limits: &[Limit<X>],
) -> Vec<Series> {
    let band = expected.iter().map(|e| BandPoint { x: e.x.along(), low: e.low, high: e.high });
    let likely = expected.iter().map(|e| (e.x.along(), e.likely)).collect();
    let mut series = vec![Series {
        look: look("band", "", Token::Band, 1.0),
        kind: Kind::Band { points: band.collect() },
    }];
    series.extend(limits.iter().map(limit));
    series.push(Series {
        look: look("likely", "expected", Token::Water, 1.8),
        kind: Kind::Line { points: likely, max_gap: None },
    });
    for (good, class, token, dot) in
        [(false, "doubtful", Token::Fault, Dot::Cross), (true, "reading", Token::Ink, Dot::Full)]
    {
        let chosen = readings.iter().filter(|reading| reading.good == good);
        let points = chosen.map(|reading| (reading.x.along(), reading.value)).collect();
        series.push(Series { look: look(class, "", token, 1.9), kind: Kind::Dots { points, dot } });
    }
    series
}

fn look(class: &'static str, label: &str, token: Token, weight_px: f64) -> Look {
    Look { class, label: label.to_owned(), token, weight_px, dash: Dash::Solid }
}

fn limit<X: Along>(limit: &Limit<X>) -> Series {
    let (name, token, dash) = (limit.kind.name(), limit.kind.token(), limit.kind.dash());
    let points = limit.points.iter().map(|(x, value)| (x.along(), *value)).collect();
    Series {
        look: Look { dash, ..look("limit", name, token, 1.4) },
        kind: Kind::Line { points, max_gap: None },
    }
}

fn last_good<X: Copy>(readings: &[Reading<X>]) -> Option<Reading<X>> {
    readings.iter().rev().find(|reading| reading.good && reading.value.is_finite()).copied()
}

fn picked<X: Along>(reading: &Reading<X>, quantity: &Quantity, mark: Mark) -> Highlight {
    Highlight {
        at: (reading.x.along(), reading.value),
        token: mark.token(),
        label: quantity.value(reading.value),
    }
}

fn state<X>(last: Option<Reading<X>>, quantity: &Quantity, mark: Mark, when: &str) -> String {
    match last {
        Some(reading) => {
            let value = quantity.value(reading.value);
            format!("Last good reading {value}{when}: {}.", mark.phrase())
        }
        None => "No good reading.".to_owned(),
    }
}

pub(super) fn shade(hold: &Stretch) -> Shade {
    Shade { from: hold.from_s as f64, to: hold.to_s as f64, label: hold.label.clone() }
}

pub(super) fn hatch(fault: &Stretch) -> Hatch {
    Hatch { from: fault.from_s as f64, to: fault.to_s as f64, label: fault.label.clone() }
}

pub(super) fn vertical((time_s, label): &(i64, String)) -> Vertical {
    Vertical { x: *time_s as f64, label: label.clone() }
}

pub(super) fn event(change: &TriggerChange) -> Event {
    Event { x: change.time_s as f64, mark: change.mark }
}
