//! The fill line: the liquid level over time, planned and actual, with its holds.

use super::description::{Axis, Chart, Dash, Kind, Look, Scale, Series};
use super::instrument::{Stretch, TriggerChange, event, hatch, shade, vertical};
use super::theme::Token;
use super::ticks::number;
use super::time_axis::stamp;
use jiff::tz::TimeZone;

/// The liquid level against time.
#[derive(Debug, Clone)]
pub struct FillLine {
    /// Heading: the tank and its test.
    pub title: String,
    /// Zone of the site.
    pub zone: TimeZone,
    /// Ends of the time axis; `None` takes in everything.
    pub span_s: Option<(i64, i64)>,
    /// Unit of the levels.
    pub unit: String,
    /// Planned level above the tank floor.
    pub plan: Vec<(i64, f64)>,
    /// Measured level above the tank floor; not finite where it is unknown.
    pub actual: Vec<(i64, f64)>,
    /// Longest time between two measured levels that are joined, s.
    pub max_gap_s: Option<i64>,
    /// Holds, shaded, with the name of the stage.
    pub holds: Vec<Stretch>,
    /// Changes of any trigger of the site.
    pub trigger_changes: Vec<TriggerChange>,
    /// Times in which the level was not known.
    pub faults: Vec<Stretch>,
    /// Cursor or present moment, with its label.
    pub moment: Option<(i64, String)>,
}

impl FillLine {
    /// As a chart.
    pub fn chart(&self) -> Chart {
        let points = |levels: &[(i64, f64)]| {
            levels.iter().map(|(time_s, level_m)| (*time_s as f64, *level_m)).collect()
        };
        let planned = Series {
            look: Look {
                class: "plan",
                label: "plan".to_owned(),
                token: Token::Soft,
                weight_px: 1.2,
                dash: Dash::Short,
            },
            kind: Kind::Line { points: points(&self.plan), max_gap: None },
        };
        let actual = Series {
            look: Look {
                class: "actual",
                label: self.last().map_or(String::new(), |(_, level)| self.value(level)),
                token: Token::Water,
                weight_px: 2.4,
                dash: Dash::Solid,
            },
            kind: Kind::Line {
                points: points(&self.actual),
                max_gap: self.max_gap_s.map(|gap| gap as f64),
            },
        };
        Chart {
            title: self.title.clone(),
            description: self.description(),
            x: Axis {
                scale: Scale::Time(self.zone.clone()),
                range: self.span_s.map(|(from, to)| (from as f64, to as f64)),
                ..Axis::default()
            },
            y: Axis {
                label: "liquid level above floor".to_owned(),
                unit: self.unit.clone(),
                include: vec![0.0],
                ..Axis::default()
            },
            series: vec![planned, actual],
            shades: self.holds.iter().map(shade).collect(),
            hatches: self.faults.iter().map(hatch).collect(),
            verticals: self.moment.iter().map(vertical).collect(),
            events: self.trigger_changes.iter().map(event).collect(),
            highlight: None,
        }
    }

    fn value(&self, level: f64) -> String {
        format!("{} {}", number(level, 2), self.unit)
    }

    fn last(&self) -> Option<(i64, f64)> {
        self.actual.iter().rev().find(|(_, level)| level.is_finite()).copied()
    }

    fn description(&self) -> String {
        let now = match self.last() {
            Some((time_s, level)) => format!(
                "Last measured level {} at {}.",
                self.value(level),
                stamp(time_s, &self.zone)
            ),
            None => "No measured level.".to_owned(),
        };
        format!("Liquid level above the tank floor against time, planned and measured. {now}")
    }
}
