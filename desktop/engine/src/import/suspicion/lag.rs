//! Clocks in another zone: readings that follow the fill late, or early, by whole hours.

use super::super::Imported;
use super::super::report::LayoutUsed;
use super::super::series::{Sample, Series};
use super::fill::{Fill, Rise, STEP_S};
use super::{Suspicion, SuspicionKind, engineering, is_loaded};
use crate::site::{Instrument, InstrumentKind, SiteFile};
use std::collections::BTreeMap;

/// Largest shift that is tried, in grid steps: zones lie up to 14 h from UTC.
const FURTHEST: i64 = 14 * 4;
/// Share of the changes around the rises, beyond a straight line, that may be left unexplained by
/// the level for a series to follow it.
const UNEXPLAINED: f64 = 0.5;
/// How well a shift must fit whole hours, s: creep and dissipation in a hold move the best fit by
/// some minutes.
const WHOLE_S: f64 = 900.0;
/// Instruments of a layout that are tried.
const TRIED: usize = 8;

pub(super) fn find(site: &SiteFile, imported: &Imported, fill: &Fill) -> Vec<Suspicion> {
    let level = imported.liquid_level(site).map(|series| series.of.clone());
    let mut answering: Vec<(&Instrument, &Series)> = site
        .instruments
        .iter()
        .filter(|instrument| answers_at_once(site, instrument))
        .filter_map(|instrument| Some((instrument, engineering(imported, instrument)?)))
        .filter(|(_, series)| Some(&series.of) != level.as_ref())
        .collect();
    // A second gauge tells the time best.
    answering.sort_by_key(|(instrument, _)| instrument.kind != InstrumentKind::LevelGauge);
    let mut layouts: BTreeMap<&str, Vec<u32>> = BTreeMap::new();
    for (source, file) in (0u32..).zip(&imported.report.files) {
        let name = match &file.layout {
            LayoutUsed::Named(name) => name,
            LayoutUsed::Guessed | LayoutUsed::None => &file.file,
        };
        layouts.entry(name).or_default().push(source);
    }
    let tested =
        layouts.iter().filter_map(|(layout, sources)| of_layout(&answering, layout, sources, fill));
    tested.collect()
}

/// Pore pressure in soft ground under the tank follows the load without delay; settlement does
/// not. A second level gauge does too.
fn answers_at_once(site: &SiteFile, instrument: &Instrument) -> bool {
    match instrument.kind {
        InstrumentKind::LevelGauge => true,
        InstrumentKind::Piezometer => is_loaded(site, instrument),
        _ => false,
    }
}

fn of_layout(
    answering: &[(&Instrument, &Series)],
    layout: &str,
    sources: &[u32],
    fill: &Fill,
) -> Option<Suspicion> {
    let following = answering.iter().filter_map(|(instrument, series)| {
        let from_here = |point: &&Sample| sources.contains(&point.source);
        let points: Vec<&Sample> = series.points.iter().filter(from_here).collect();
        Some((instrument.id.clone(), misfits(&points, fill)?))
    });
    let (instruments, curves): (Vec<String>, Vec<Vec<f64>>) = following.take(TRIED).unzip();
    let late_s = late_s(&curves)?;
    let hours = (late_s / 3600.0).round();
    if hours == 0.0 || (late_s - hours * 3600.0).abs() > WHOLE_S {
        return None;
    }
    let minutes = hours.abs() * 60.0;
    let verb = if hours > 0.0 { "lag" } else { "run ahead of" };
    let message = format!(
        "{layout}: readings {verb} the fill by {minutes} min (tested on {}). Check the zone of these \
         files and that of the liquid level. Nothing was changed.",
        instruments.join(", ")
    );
    Some(Suspicion {
        kind: SuspicionKind::Clock { late_min: hours as i64 * 60 },
        instruments,
        message,
    })
}

/// How late the instruments of a layout are together, s; `None` when that is not clear.
fn late_s(curves: &[Vec<f64>]) -> Option<f64> {
    /// How many times less the misfit must be for a shift to be believed.
    const CLEAR: f64 = 1.15;
    /// How far an instrument's own best shift may lie from that of all, in steps.
    const NEAR: usize = 2;
    let mean: Vec<f64> = (0..curves.first()?.len())
        .map(|step| curves.iter().map(|curve| curve[step]).sum::<f64>() / curves.len() as f64)
        .collect();
    let best = least(&mean)?;
    let agreeing =
        curves.iter().filter(|curve| least(curve).is_some_and(|own| own.abs_diff(best) <= NEAR));
    if mean[FURTHEST as usize] < CLEAR * mean[best] || agreeing.count() * 5 < curves.len() * 3 {
        return None;
    }
    Some((best as f64 - FURTHEST as f64 + vertex(&mean, best)) * STEP_S as f64)
}

fn least(misfits: &[f64]) -> Option<usize> {
    misfits.iter().enumerate().min_by(|a, b| a.1.total_cmp(b.1)).map(|(at, _)| at)
}

/// How much worse than the best shift each shift makes a series follow the level around the rises;
/// `None` when it does not follow the level at any. Each rise counts by its own best, so that the
/// noise of its time does not matter, and none outvotes all the others.
fn misfits(points: &[&Sample], fill: &Fill) -> Option<Vec<f64>> {
    const WORST: f64 = 3.0;
    let windows = fill.rises.iter().filter_map(|rise| Window::new(points, rise));
    let rises: Vec<Shifts> = windows.filter_map(|window| window.shifts(fill)).collect();
    let mean = |of: &dyn Fn(&Shifts) -> f64| rises.iter().map(of).sum::<f64>() / rises.len() as f64;
    if rises.is_empty() || mean(&|rise| rise.best) >= UNEXPLAINED {
        return None;
    }
    let steps = 0..=2 * FURTHEST as usize;
    Some(steps.map(|step| mean(&|rise| (rise.misfits[step] / rise.best).min(WORST))).collect())
}

/// What the level leaves unexplained of one rise at each shift, as a share of what a line leaves;
/// infinite where the level is not known.
#[derive(Debug)]
struct Shifts {
    misfits: Vec<f64>,
    /// The least of them.
    best: f64,
}

/// The readings around one rise: time from its middle, h, and value.
#[derive(Debug)]
struct Window {
    points: Vec<(i64, f64, f64)>,
    /// Sum of squares about a straight line in time.
    about_line: f64,
}

impl Window {
    /// From half a day before the rise to half a day after it: its begin and end tell the time.
    fn new(points: &[&Sample], rise: &Rise) -> Option<Self> {
        const AROUND_S: i64 = 43_200;
        const FEWEST: usize = 12;
        let middle = (rise.from_s + rise.to_s) / 2;
        let from = points.partition_point(|point| point.time_s < rise.from_s - AROUND_S);
        let to = points.partition_point(|point| point.time_s <= rise.to_s + AROUND_S);
        let mut last = i64::MIN;
        let mut kept: Vec<(i64, f64, f64)> = Vec::new();
        for point in points.get(from..to)? {
            if point.time_s.saturating_sub(last) >= STEP_S {
                kept.push((point.time_s, (point.time_s - middle) as f64 / 3600.0, point.value));
                last = point.time_s;
            }
        }
        let mut line = LeastSquares::default();
        for &(_, hours, value) in &kept {
            line.add([1.0, hours, 0.0], value);
        }
        let about_line = line.misfit();
        (kept.len() >= FEWEST && about_line > 0.0).then_some(Self { points: kept, about_line })
    }

    /// All shifts; `None` when the level is not known without shift.
    fn shifts(&self, fill: &Fill) -> Option<Shifts> {
        let shifts = -FURTHEST..=FURTHEST;
        let misfits: Vec<f64> =
            shifts.map(|lag| self.misfit(lag * STEP_S, fill).unwrap_or(f64::INFINITY)).collect();
        let best = misfits.iter().copied().fold(f64::INFINITY, f64::min);
        misfits[FURTHEST as usize].is_finite().then_some(Shifts { misfits, best })
    }

    fn misfit(&self, lag_s: i64, fill: &Fill) -> Option<f64> {
        let mut squares = LeastSquares::default();
        let mut compared = 0;
        for &(time_s, hours, value) in &self.points {
            if let Some(level_m) = fill.level_m(time_s - lag_s) {
                squares.add([1.0, hours, level_m], value);
                compared += 1;
            }
        }
        // A shift must not win by leaving points out; and an exact copy of the level is no
        // infinitely better proof.
        let known = compared * 10 >= self.points.len() * 9;
        known.then(|| (squares.misfit() / self.about_line).max(1e-6))
    }
}

/// Sums for a straight fit in three terms.
#[derive(Debug, Default)]
struct LeastSquares {
    normal: [[f64; 3]; 3],
    right: [f64; 3],
    own: f64,
}

impl LeastSquares {
    fn add(&mut self, terms: [f64; 3], value: f64) {
        for (row, &term) in self.normal.iter_mut().zip(&terms) {
            for (sum, &other) in row.iter_mut().zip(&terms) {
                *sum += term * other;
            }
        }
        for (sum, &term) in self.right.iter_mut().zip(&terms) {
            *sum += term * value;
        }
        self.own += value * value;
    }

    /// The sum of squares that the best fit leaves, by Gaussian elimination without exchange: the
    /// matrix is symmetric and not negative, and a term that is not independent is left out.
    fn misfit(&self) -> f64 {
        let (mut normal, mut right, mut left) = (self.normal, self.right, self.own);
        for pivot in 0..3 {
            let diagonal = normal[pivot][pivot];
            if diagonal <= 1e-9 * self.normal[pivot][pivot].max(f64::MIN_POSITIVE) {
                continue;
            }
            left -= right[pivot] * right[pivot] / diagonal;
            let above = normal[pivot];
            for row in pivot + 1..3 {
                let share = normal[row][pivot] / diagonal;
                for (cell, above) in normal[row].iter_mut().zip(above).skip(pivot) {
                    *cell -= share * above;
                }
                right[row] -= share * right[pivot];
            }
        }
        left.max(0.0)
    }
}

/// Where between grid points the least misfit lies, by a parabola through three of them, in steps.
fn vertex(misfits: &[f64], best: usize) -> f64 {
    let at = |index: usize| misfits.get(index).copied();
    let around = (best.checked_sub(1).and_then(at), at(best), at(best + 1));
    let (Some(before), Some(at), Some(after)) = around else { return 0.0 };
    let curvature = before - 2.0 * at + after;
    if curvature > 0.0 { (0.5 * (before - after) / curvature).clamp(-0.5, 0.5) } else { 0.0 }
}
