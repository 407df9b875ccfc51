//! The numbers of a chart as a table, for those who cannot see it or want to check it.

use super::{Cell, Column, Table};
use crate::chart::{Chart, Kind, Scale, number, stamp};
use crate::series::Point;
use std::collections::BTreeMap;

/// A place on the horizontal axis, and the how-manieth value of its series there: a path comes by
/// one place several times, and each value keeps its row.
type Place = (f64, usize);

/// One column of numbers: its name and its points.
struct Values {
    name: String,
    points: Vec<Point>,
}

/// The values of a chart side by side, the latest `most` places of its horizontal axis that carry
/// a single value or, where there are none, a point of a line. A place where a series has no value
/// of its own stays empty: nothing is interpolated.
pub fn values(chart: &Chart, most: usize) -> Table {
    let columns: Vec<Values> = chart.series.iter().flat_map(columns).collect();
    let places = places(chart);
    let skipped = places.len().saturating_sub(most);
    let decimals = decimals(&columns);
    let mut table = Table { columns: vec![first_column(chart)], rows: Vec::new() };
    table.columns.extend(columns.iter().map(|column| Column::right(&column.name)));
    let lookup: Vec<BTreeMap<(u64, usize), f64>> = columns.iter().map(by_place).collect();
    for (x, pass) in places.into_iter().skip(skipped) {
        let mut row = vec![Cell::from(place_in_words(chart, x))];
        row.extend(lookup.iter().map(|values| match values.get(&(x.to_bits(), pass)) {
            Some(value) => number(*value, decimals).into(),
            None => Cell::default(),
        }));
        table.rows.push(row);
    }
    table
}

fn columns(series: &crate::chart::Series) -> Vec<Values> {
    let name = if series.look.label.is_empty() || matches!(series.kind, Kind::Dots { .. }) {
        series.look.class.to_owned()
    } else {
        series.look.label.clone()
    };
    match &series.kind {
        Kind::Line { points, .. }
        | Kind::Path { points }
        | Kind::Step { points }
        | Kind::Dots { points, .. } => vec![Values { name, points: points.clone() }],
        Kind::Band { points } => vec![
            Values {
                name: format!("{name} from"),
                points: points.iter().map(|point| (point.x, point.low)).collect(),
            },
            Values {
                name: format!("{name} to"),
                points: points.iter().map(|point| (point.x, point.high)).collect(),
            },
        ],
    }
}

/// Places in order, each once.
fn places(chart: &Chart) -> Vec<Place> {
    let of = |wanted: fn(&Kind) -> bool| {
        let chosen = chart.series.iter().filter(|series| wanted(&series.kind)).flat_map(columns);
        let mut places: Vec<Place> =
            chosen.flat_map(|values| counted(&values)).map(|(place, _)| place).collect();
        places.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
        places.dedup();
        places
    };
    let single = of(|kind| matches!(kind, Kind::Dots { .. }));
    if single.is_empty() { of(|_| true) } else { single }
}

fn by_place(values: &Values) -> BTreeMap<(u64, usize), f64> {
    counted(values).into_iter().map(|((x, pass), value)| ((x.to_bits(), pass), value)).collect()
}

/// The finite values with their places.
fn counted(values: &Values) -> Vec<(Place, f64)> {
    let mut passes: BTreeMap<u64, usize> = BTreeMap::new();
    let finite = values.points.iter().filter(|point| point.0.is_finite() && point.1.is_finite());
    finite
        .map(|&(x, value)| {
            let pass = passes.entry(x.to_bits()).or_default();
            *pass += 1;
            ((x, *pass), value)
        })
        .collect()
}

/// Three figures of the largest value, and no more than four decimals.
fn decimals(columns: &[Values]) -> usize {
    let all = columns.iter().flat_map(|column| &column.points).map(|point| point.1.abs());
    let largest = all.filter(|value| value.is_finite()).fold(0.0, f64::max);
    if largest > 0.0 { (2.0 - largest.log10().floor()).clamp(0.0, 4.0) as usize } else { 0 }
}

fn first_column(chart: &Chart) -> Column {
    match &chart.x.scale {
        Scale::Time(_) => Column::left("time"),
        _ => Column::right(&format!("{}, {}", chart.x.label, chart.x.unit)),
    }
}

fn place_in_words(chart: &Chart, x: f64) -> String {
    match &chart.x.scale {
        Scale::Time(zone) => stamp(x.round() as i64, zone),
        _ => number(x, 2),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::chart::{Expected, Limit, LimitKind, Mark, PressureChart, Quantity, Reading};

    fn chart() -> Chart {
        PressureChart {
            title: String::new(),
            quantity: Quantity { decimals: 1, ..Quantity::default() },
            pressure_unit: "kPa".to_owned(),
            expected: [60.0, 80.0]
                .map(|x| Expected { x, low: x * 0.4, likely: x * 0.5, high: x * 0.6 })
                .to_vec(),
            readings: [(60.0, 31.0), (70.0, 36.0), (75.0, f64::NAN), (80.0, 44.0), (80.0, 47.0)]
                .map(|(x, value)| Reading { x, value, good: true })
                .to_vec(),
            limits: vec![Limit { kind: LimitKind::Stop, points: vec![(80.0, 50.0)] }],
            mark: Mark::Normal,
        }
        .chart()
    }

    #[test]
    fn a_row_for_each_reading_and_nothing_made_up() {
        let table = values(&chart(), 10);
        let names: Vec<_> = table.columns.iter().map(|column| column.name.as_str()).collect();
        assert_eq!(
            names,
            [
                "applied pressure, kPa",
                "band from",
                "band to",
                "Stop",
                "expected",
                "doubtful",
                "reading"
            ]
        );
        let rows: Vec<Vec<&str>> = table
            .rows
            .iter()
            .map(|row| row.iter().map(|cell| cell.text.as_str()).collect())
            .collect();
        assert_eq!(
            rows,
            [
                ["60.00", "24.0", "36.0", "", "30.0", "", "31.0"],
                ["70.00", "", "", "", "", "", "36.0"],
                ["80.00", "32.0", "48.0", "50.0", "40.0", "", "44.0"],
                ["80.00", "", "", "", "", "", "47.0"],
            ]
        );
    }

    #[test]
    fn a_long_table_keeps_the_latest() {
        let table = values(&chart(), 1);
        assert_eq!(table.rows.len(), 1);
        assert_eq!(table.rows[0][0].text, "80.00");
    }
}
