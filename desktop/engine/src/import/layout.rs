//! Which layout a file has, and which of its columns are taken.

use super::report::{ColumnTaken, FileReport};
use super::rows::{TakenColumn, below, headers};
use super::series::SeriesOf;
use crate::site::{Column, Instrument, ReadingsLayout, Signal, SiteFile};
use crate::units::UnitName;
use globset::Glob;

/// A column of a layout with what it leads to.
#[derive(Debug)]
pub(super) struct Target {
    pub of: SeriesOf,
    pub unit: UnitName,
    pub to: UnitName,
    pub signal: Signal,
}

/// The layouts whose file patterns fit a name, in the order of the site file.
pub(super) fn candidates<'s>(site: &'s SiteFile, file_name: &str) -> Vec<&'s ReadingsLayout> {
    let fits = |pattern: &String| {
        Glob::new(pattern).is_ok_and(|glob| glob.compile_matcher().is_match(file_name))
    };
    site.readings.iter().filter(|layout| layout.files.iter().any(fits)).collect()
}

/// A file as one layout sees it.
#[derive(Debug)]
pub(super) struct Seen<'t> {
    pub headers: Vec<String>,
    pub body: &'t str,
    pub time_position: usize,
}

/// The file through a layout; `None`, with the reason in words, when it does not fit.
pub(super) fn see<'t>(text: &'t str, layout: &ReadingsLayout) -> Result<Seen<'t>, String> {
    let name = &layout.name;
    let head = below(text, layout.skip_lines).ok_or_else(|| {
        format!("Layout \"{name}\" skips {} lines; there are fewer.", layout.skip_lines)
    })?;
    let (headers, body) = headers(head, layout.delimiter)
        .ok_or_else(|| format!("Layout \"{name}\" finds no line of headers."))?;
    let times: Vec<usize> = positions(&headers, &layout.time_column);
    match times[..] {
        [time_position] => Ok(Seen { headers, body, time_position }),
        [] => Err(format!("Layout \"{name}\" finds no column \"{}\".", layout.time_column)),
        _ => Err(format!(
            "Layout \"{name}\" finds the column \"{}\" more than once.",
            layout.time_column
        )),
    }
}

fn positions(headers: &[String], header: &str) -> Vec<usize> {
    headers
        .iter()
        .enumerate()
        .filter(|(_, given)| *given == header.trim())
        .map(|(at, _)| at)
        .collect()
}

/// What a column leads to; `None`, with the reason in words, when the units do not fit.
pub(super) fn target(column: &Column, instruments: &[Instrument]) -> Result<Target, String> {
    let (of, unit, to, signal) = match column {
        Column::Instrument { instrument, unit, raw } => {
            let known = instruments.iter().find(|known| known.id == *instrument);
            let known = known.ok_or_else(|| format!("there is no instrument \"{instrument}\""))?;
            let signal = raw.unwrap_or(Signal::Engineering);
            let to = match signal {
                Signal::Digits => UnitName::Digits,
                Signal::Engineering => UnitName::from(known.unit),
            };
            (SeriesOf::Instrument(instrument.clone()), *unit, to, signal)
        }
        Column::Channel { channel, unit } => {
            let to = UnitName::of_channel(channel);
            (SeriesOf::Channel(channel.clone()), *unit, to, Signal::Engineering)
        }
    };
    if unit.dimension() == to.dimension() {
        Ok(Target { of, unit, to, signal })
    } else {
        Err(format!("{unit} is {}, {to} is {}", unit.dimension().word(), to.dimension().word()))
    }
}

/// The columns to take, each with its target; the report gets the others.
pub(super) fn take_columns(
    seen: &Seen<'_>,
    layout: &ReadingsLayout,
    instruments: &[Instrument],
    report: &mut FileReport,
) -> Vec<(Target, TakenColumn)> {
    let mut taken = Vec::new();
    for (header, column) in &layout.columns {
        let reason = match (&positions(&seen.headers, header)[..], target(column, instruments)) {
            (&[position], Ok(target)) => {
                report.columns_taken.push(ColumnTaken {
                    header: header.clone(),
                    of: target.of.clone(),
                    signal: target.signal,
                    unit: target.unit,
                });
                taken.push(taken_column(position, header, target));
                continue;
            }
            ([], Ok(_)) => "the layout names it, the file lacks it".to_owned(),
            ([_, _, ..], Ok(_)) => "it stands in the headers more than once".to_owned(),
            (_, Err(reason)) => reason,
        };
        report.column_not_taken(header, reason);
    }
    for (position, header) in seen.headers.iter().enumerate() {
        if position != seen.time_position
            && !layout.columns.keys().any(|known| known.trim() == header)
        {
            report.column_not_taken(header, "nothing says what it is");
        }
    }
    taken
}

fn taken_column(position: usize, header: &str, target: Target) -> (Target, TakenColumn) {
    let column = TakenColumn {
        position,
        header: header.to_owned(),
        unit: target.unit,
        to: target.to,
        keep_raw: target.signal == Signal::Digits,
        points: Vec::new(),
        not_read: Vec::new(),
    };
    (target, column)
}
