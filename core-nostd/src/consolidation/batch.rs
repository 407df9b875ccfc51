//! A whole load history at once, for the office: the column of [`super::stepper`] on 200 and on
//! 400 cells with halved steps, joined so that the leading error of both cancels.
//!
//! The scheme is of second order in cell width and step, so `(4 fine - coarse)/3` is of higher
//! order (Richardson 1911). Largest differences from exact solutions are stated with the tests:
//! below 1e-5 of the degree of consolidation and 2e-6 of the peak pressure, but for the first
//! moments beside a drained face, where the pressure itself jumps.

use super::error::{DAY, DEPTH, LOAD};
use super::pace::Pace;
use super::profile::{cell_means, check_points, linear_between};
use super::stepper::{Column, Factor, Stepper};
use super::{Error, State};
use crate::units::DAY_S;

/// Cells of the two grids.
const COARSE: usize = 200;
const FINE: usize = 400;
/// Substeps of the coarse run; the fine one halves each.
const GROWTH: f64 = 0.05;
/// First substep after a change of the rate of loading, as a share of that of the logger's column.
const KINK_SHARE: f64 = 0.01;

/// A column and the load that it carries.
#[derive(Debug, Clone, Copy)]
pub struct History<'a> {
    /// Ground and drains.
    pub column: Column<'a>,
    /// Initial excess pore pressure per kPa of load: points (depth m, ratio) by rising depth,
    /// linear between, constant beyond the ends; empty for 1 everywhere.
    pub influence: &'a [(f64, f64)],
    /// Load: points (day, kPa) by rising day, linear between and constant after the last. Zero
    /// before the first; two points on one day are a jump.
    pub load_kpa: &'a [(f64, f64)],
}

/// Places for the answers.
#[derive(Debug)]
pub struct Answers<'a> {
    /// Excess pore pressure, kPa, times by depths: all depths of the first time, then of the next.
    pub excess_kpa: &'a mut [f64],
    /// Settlement over the final settlement of the last load; none where that is zero.
    pub degree_of_consolidation: &'a mut [Option<f64>],
    /// Settlement by linear mv, m.
    pub settlement_m: &'a mut [f64],
}

impl Answers<'_> {
    fn check(&self, times: usize, depths: usize) -> Result<(), Error> {
        let lengths = [
            ("places for excess pressure", self.excess_kpa.len(), times.saturating_mul(depths)),
            ("places for degrees", self.degree_of_consolidation.len(), times),
            ("places for settlements", self.settlement_m.len(), times),
        ];
        for (list, given, needed) in lengths {
            if given != needed {
                return Err(Error::Length { list, given, needed });
            }
        }
        Ok(())
    }
}

/// Excess pore pressure, degree of consolidation and settlement at the days and depths asked for,
/// in any order. A value on the day of a jump is that after it.
///
/// # Errors
/// A refused column, profile or load; a day outside 1e6 days, a depth outside the column; answer
/// lists of the wrong length.
pub fn answer(
    history: &History<'_>,
    at_days: &[f64],
    at_depths_m: &[f64],
    answers: &mut Answers<'_>,
) -> Result<(), Error> {
    answers.check(at_days.len(), at_depths_m.len())?;
    check_points("load", history.load_kpa, &DAY, &LOAD)?;
    for (index, day) in at_days.iter().enumerate() {
        DAY.check_at(*day, index)?;
    }
    for (index, depth_m) in at_depths_m.iter().enumerate() {
        DEPTH.check_at(*depth_m, index)?;
    }
    let coarse = Stepper::<COARSE>::new(&history.column)?;
    let pace = Pace { kink_s: KINK_SHARE * coarse.pace.kink_s, growth: GROWTH, ..coarse.pace };
    let mut run = Run::new(coarse, pace, history)?;
    run.through(history.load_kpa, at_days, &mut |run, index| {
        write(run, index, at_depths_m, answers, |_, new| new)
    })?;
    let fine = Stepper::<FINE>::with_cells(&history.column, true)?;
    let mut run = Run::new(fine, Pace { pieces: 2, ..pace }, history)?;
    run.through(history.load_kpa, at_days, &mut |run, index| {
        write(run, index, at_depths_m, answers, |coarse, fine| fine + (fine - coarse) / 3.0)
    })?;
    let final_m = run.compression_m_per_kpa() * history.load_kpa.last().map_or(0.0, |end| end.1);
    for (degree, settlement) in
        answers.degree_of_consolidation.iter_mut().zip(&*answers.settlement_m)
    {
        *degree = if final_m == 0.0 { None } else { Some(settlement / final_m) };
    }
    Ok(())
}

/// Joins the values at one time into the answers.
fn write<const CELLS: usize>(
    run: &Run<CELLS>,
    time: usize,
    at_depths_m: &[f64],
    answers: &mut Answers<'_>,
    join: impl Fn(f64, f64) -> f64,
) -> Result<(), Error> {
    if let Some(place) = answers.settlement_m.get_mut(time) {
        *place = join(*place, run.settlement_m());
    }
    let places = answers.excess_kpa.chunks_mut(at_depths_m.len().max(1)).nth(time);
    for (place, depth_m) in places.into_iter().flatten().zip(at_depths_m) {
        *place = join(*place, run.stepper.excess_at_kpa(&run.state, *depth_m)?);
    }
    Ok(())
}

/// One grid on its way through the history.
struct Run<const CELLS: usize> {
    stepper: Stepper<CELLS>,
    state: State<CELLS>,
    factor: Factor<CELLS>,
    influence: [f64; CELLS],
    load_kpa: f64,
}

impl<const CELLS: usize> Run<CELLS> {
    fn new(mut stepper: Stepper<CELLS>, pace: Pace, history: &History<'_>) -> Result<Self, Error> {
        stepper.pace = pace;
        Ok(Self {
            state: stepper.at_rest(),
            factor: Factor::empty(),
            influence: cell_means(&stepper.cells, history.influence)?,
            load_kpa: 0.0,
            stepper,
        })
    }

    /// Settlement per kPa of load in the end, m/kPa.
    fn compression_m_per_kpa(&self) -> f64 {
        let cells = self.stepper.compression_m_per_kpa.iter().zip(&self.influence);
        cells.map(|(compression, influence)| compression * influence).sum()
    }

    fn settlement_m(&self) -> f64 {
        let applied = self.influence.map(|influence| influence * self.load_kpa);
        self.stepper.settlement_m(&self.state, &applied)
    }

    /// Brings the load to `load_kpa` over `days`; at once if zero.
    fn go(&mut self, load_kpa: f64, days: f64) -> Result<(), Error> {
        let change_kpa = load_kpa - self.load_kpa;
        let increments = self.influence.map(|influence| influence * change_kpa);
        if days > 0.0 {
            let ramp = (change_kpa != 0.0).then_some(&increments);
            let dt_s = days * DAY_S;
            self.stepper.run(&mut self.state, ramp, dt_s, &mut self.factor);
        } else if change_kpa != 0.0 {
            self.stepper.jump(&mut self.state, &increments)?;
        }
        self.load_kpa = load_kpa;
        Ok(())
    }

    /// Follows the load and calls `record` for each time asked for, earliest first.
    fn through(
        &mut self,
        load: &[(f64, f64)],
        at_days: &[f64],
        record: &mut impl FnMut(&Self, usize) -> Result<(), Error>,
    ) -> Result<(), Error> {
        let mut now = f64::NEG_INFINITY;
        loop {
            let asked = earliest_after(at_days.iter().copied(), now);
            let turn = earliest_after(load.iter().map(|point| point.0), now);
            let Some(next) = asked.into_iter().chain(turn).reduce(f64::min) else { break };
            let begun = load.first().is_some_and(|first| first.0 <= now);
            if begun {
                // Just before a jump on that day.
                self.go(value_before(load, next), next - now)?;
            }
            now = next;
            if turn == Some(now) {
                self.go(linear_between(load, now), 0.0)?;
                self.state.since_kink_s = 0.0;
            }
            if asked == Some(now) {
                for (index, _) in at_days.iter().enumerate().filter(|(_, day)| **day == now) {
                    record(self, index)?;
                }
            } else if asked.is_none() {
                break;
            }
        }
        Ok(())
    }
}

fn earliest_after(days: impl Iterator<Item = f64>, now: f64) -> Option<f64> {
    days.filter(|day| *day > now).reduce(f64::min)
}

/// Load just before a day: as [`linear_between`], but of several points on one day the first
/// counts.
fn value_before(load: &[(f64, f64)], day: f64) -> f64 {
    match load.iter().find(|point| point.0 == day) {
        Some(point) => point.1,
        None => linear_between(load, day),
    }
}
