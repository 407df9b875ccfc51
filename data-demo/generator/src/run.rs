//! The two runs: what happens in the ground and what goes wrong with the instruments.

use crate::edge::EdgeYield;

/// What goes wrong with an instrument, a logger or a reader. Instants are Unix s; spans hold
/// their start and not their end.
#[derive(Debug, Clone)]
#[allow(missing_docs)]
pub enum Fault {
    /// One reading off by an amount.
    Spike { id: &'static str, at_s: i64, by: f64 },
    /// The last value comes again and again.
    Frozen { id: &'static str, from_s: i64, to_s: i64 },
    /// All readings from then on off by an amount.
    Step { id: &'static str, from_s: i64, by: f64 },
    /// The logger writes its mark for a missing value, or the reader skips the point.
    Missing { id: &'static str, from_s: i64, to_s: i64 },
    /// The logger writes nothing at all.
    Gap { source: &'static str, from_s: i64, to_s: i64 },
    /// The logger's clock is fast by so many seconds.
    ClockFast { source: &'static str, from_s: i64, to_s: i64, seconds: i64 },
}

/// A run: its folder, its end, its faults and, in one of them, a yielding edge.
#[derive(Debug)]
pub struct Run {
    /// Name of the folder after `run-`.
    pub name: &'static str,
    /// Last instant, Unix s.
    pub end_s: i64,
    /// Level changes that were not planned: start, end, level in m.
    pub afterwards: Vec<(i64, i64, f64)>,
    /// What goes wrong with instruments.
    pub faults: Vec<Fault>,
    /// What goes wrong in the ground.
    pub edge: Option<EdgeYield>,
}

/// Unix s of an instant of 2026 written as "05-16T06:00", UTC.
fn utc(text: &str) -> i64 {
    let instant: jiff::Timestamp =
        format!("2026-{text}:00Z").parse().expect("instants of the runs are literals");
    instant.as_second()
}

/// A test that ends well in ground that behaves, with instruments that do not.
pub fn good() -> Run {
    let span = |from: &str, to: &str| (utc(from), utc(to));
    let frozen = |id, from, to| {
        let (from_s, to_s) = span(from, to);
        Fault::Frozen { id, from_s, to_s }
    };
    let missing = |id, from, to| {
        let (from_s, to_s) = span(from, to);
        Fault::Missing { id, from_s, to_s }
    };
    let end_s = utc("05-31T21:00");
    Run {
        name: "good",
        end_s,
        afterwards: Vec::new(),
        edge: None,
        faults: vec![
            frozen("LG2", "03-26T19:00", "03-27T09:00"),
            Fault::Frozen { id: "PM1", from_s: utc("04-08T03:00"), to_s: end_s + 1 },
            Fault::Step { id: "SP1", from_s: utc("04-14T00:00"), by: -1000.0 },
            Fault::Gap { source: "Logger A", from_s: utc("04-17T01:30"), to_s: utc("04-17T09:30") },
            frozen("LG1", "04-29T20:30", "04-30T02:15"),
            Fault::Spike { id: "PC2", at_s: utc("05-06T11:00"), by: 86.4 },
            Fault::ClockFast {
                source: "Logger B",
                from_s: utc("05-13T08:30"),
                to_s: utc("05-19T09:30"),
                seconds: 52 * 60,
            },
            missing("SV11", "04-02T00:00", "04-04T00:00"),
            missing("SV06", "05-16T12:00", "05-16T18:00"),
            missing("SC2", "03-20T04:00", "03-20T11:00"),
            missing("MW3", "04-25T00:00", "04-26T00:00"),
        ],
    }
}

/// The same tank and ground until the last rise, in which the east edge begins to yield.
pub fn bad() -> Run {
    let lowered_s = utc("05-19T15:00");
    Run {
        name: "bad",
        end_s: utc("05-23T09:00"),
        afterwards: vec![(lowered_s, utc("05-20T15:00"), 10.9)],
        edge: Some(EdgeYield { onset_s: utc("05-17T03:00"), pace_s: 44.0 * 3600.0, lowered_s }),
        faults: vec![
            Fault::Spike { id: "PW2", at_s: utc("05-16T22:15"), by: 41.0 },
            Fault::Gap { source: "Logger A", from_s: utc("04-03T12:30"), to_s: utc("04-03T15:30") },
            Fault::Missing { id: "SC4", from_s: utc("05-09T10:00"), to_s: utc("05-09T13:00") },
            Fault::Missing { id: "SV09", from_s: utc("05-17T12:00"), to_s: utc("05-17T18:00") },
        ],
    }
}
