//! Carries columns through a load history, in parallel over plan positions.

use super::{ExpectError, Instrument, LoadHistory, Model};
use brimstead_core::config::COLUMN_CELLS;
use brimstead_core::consolidation::Factor;
use brimstead_core::expectation::{
    self, Column, ColumnState, LiquidPressures, Moment, Point, Zero, envelope,
};
use brimstead_core::load::PlanPosition;
use brimstead_core::quantity::Expected;
use rayon::prelude::*;
use std::collections::BTreeMap;

type CoreColumn = Column<COLUMN_CELLS>;
type CoreState = ColumnState<COLUMN_CELLS>;

/// Expected bands, for each instrument of the model in order, at each of its asked times in order;
/// in the core's unit (kPa, m). None where nothing is expected of the kind of instrument, or
/// before the baseline.
#[derive(Debug, Clone, PartialEq)]
pub struct Expectations {
    /// By instrument, by asked time.
    pub by_instrument: Vec<Vec<Option<Expected>>>,
}

/// Expected bands of every instrument at its own asked times.
///
/// Every instant of the history is a step of the calculation, and so is every asked time between
/// two of them, with the level even in between.
///
/// # Errors
/// What the core refuses, with the instrument or the instant named.
///
/// # Panics
/// Never: `wanted` shorter than the instruments counts as nothing asked of the rest.
pub fn expect(
    model: &Model,
    history: &LoadHistory,
    wanted: &[Vec<i64>],
) -> Result<Expectations, ExpectError> {
    if history.points().is_empty() {
        return Err(ExpectError::NoLevel);
    }
    let groups = group_by_place(model, wanted);
    let results: Vec<Vec<Answer>> = groups
        .par_iter()
        .map(|group| run_group(model, history, group))
        .collect::<Result<_, _>>()?;
    let mut by_instrument: Vec<Vec<Option<Expected>>> =
        model.instruments.iter().map(|_| Vec::new()).collect();
    for answer in results.into_iter().flatten() {
        by_instrument[answer.index] = answer.bands;
    }
    Ok(Expectations { by_instrument })
}

/// One instrument of a group with the times asked of it.
struct Member<'a> {
    index: usize,
    instrument: &'a Instrument,
    times: &'a [i64],
}

struct Answer {
    index: usize,
    bands: Vec<Option<Expected>>,
}

/// Instruments above one another share a column.
fn group_by_place<'a>(model: &'a Model, wanted: &'a [Vec<i64>]) -> Vec<Vec<Member<'a>>> {
    let mut groups: BTreeMap<(u64, u64), Vec<Member<'a>>> = BTreeMap::new();
    for (index, (instrument, times)) in model.instruments.iter().zip(wanted).enumerate() {
        let place = instrument.sensor.place;
        let key = (place.x_m.to_bits(), place.y_m.to_bits());
        groups.entry(key).or_default().push(Member { index, instrument, times });
    }
    groups.into_values().collect()
}

/// What loads the ground at one instant; the same in every case of the band.
struct Load {
    time_s: i64,
    liquid_level_m: f64,
    liquid_kpa: LiquidPressures,
}

impl Load {
    fn at(model: &Model, history: &LoadHistory, time_s: i64) -> Result<Self, ExpectError> {
        let liquid_level_m = history.level_at(time_s).ok_or(ExpectError::NoLevel)?;
        let liquid_kpa = model.liquid_kpa(time_s, liquid_level_m)?;
        Ok(Self { time_s, liquid_level_m, liquid_kpa })
    }
}

/// The instants at which a group is stepped: the baseline, then those of the history and those
/// asked for.
struct Steps {
    baseline: Load,
    after: Vec<Load>,
}

fn steps_of(
    model: &Model,
    history: &LoadHistory,
    group: &[Member<'_>],
) -> Result<Steps, ExpectError> {
    let asked = group.iter().flat_map(|member| member.times.iter().copied());
    let mut times: Vec<i64> =
        history.points().iter().map(|point| point.time_s).chain(asked).collect();
    times.retain(|time_s| *time_s > model.baseline_s);
    times.sort_unstable();
    times.dedup();
    // Nothing is computed beyond the last instant that somebody asked for.
    let last_asked = group.iter().filter_map(|member| member.times.last()).max();
    times.retain(|time_s| last_asked.is_some_and(|last| time_s <= last));
    let load_at = |time_s| Load::at(model, history, time_s);
    Ok(Steps {
        baseline: load_at(model.baseline_s)?,
        after: times.into_iter().map(load_at).collect::<Result<_, _>>()?,
    })
}

fn run_group(
    model: &Model,
    history: &LoadHistory,
    group: &[Member<'_>],
) -> Result<Vec<Answer>, ExpectError> {
    let Some(first) = group.first() else { return Ok(Vec::new()) };
    let steps = steps_of(model, history, group)?;
    let place = first.instrument.sensor.place;
    // [member][case][asked time]
    let mut values: Vec<Vec<Vec<Option<f64>>>> = group.iter().map(|_| Vec::new()).collect();
    for case in 0..model.cases.len() {
        let by_member = run_case(model, case, place, group, &steps)?;
        for (all, one) in values.iter_mut().zip(by_member) {
            all.push(one);
        }
    }
    Ok(group.iter().zip(values).map(|(member, cases)| join_cases(member, &cases)).collect())
}

fn join_cases(member: &Member<'_>, cases: &[Vec<Option<f64>>]) -> Answer {
    let noise_sd = member.instrument.noise_sd;
    let bands = (0..member.times.len())
        .map(|time| {
            let values: Option<Vec<f64>> = cases.iter().map(|case| case[time]).collect();
            envelope(&values?, noise_sd)
        })
        .collect();
    Answer { index: member.index, bands }
}

/// One case of one group: the value of each member at each of its asked times, in the core's unit.
fn run_case(
    model: &Model,
    case: usize,
    place: PlanPosition,
    group: &[Member<'_>],
    steps: &Steps,
) -> Result<Vec<Vec<Option<f64>>>, ExpectError> {
    let mut run = Run::start(model, case, place, &steps.baseline)?;
    let mut followed = Vec::with_capacity(group.len());
    for member in group {
        followed.push(Followed::new(&run, model, case, member)?);
    }
    for member in &mut followed {
        member.read(&run, model.baseline_s)?;
    }
    for load in &steps.after {
        run.advance(load)?;
        for member in &mut followed {
            member.read(&run, load.time_s)?;
        }
    }
    Ok(followed.into_iter().map(|member| member.values).collect())
}

/// One column on its way.
struct Run {
    column: CoreColumn,
    state: CoreState,
    factor: Factor<COLUMN_CELLS>,
    liquid_level_m: f64,
}

impl Run {
    /// From the dead load to the baseline.
    fn start(
        model: &Model,
        case: usize,
        place: PlanPosition,
        baseline: &Load,
    ) -> Result<Self, ExpectError> {
        let site = &model.cases[case].1;
        let column = Column::new(site, place).map_err(ExpectError::Site)?;
        let empty = model.empty_kpa();
        let mut state = column.start(model.dead_load_since_s, &empty).map_err(ExpectError::Site)?;
        let mut factor = Factor::empty();
        column
            .advance(&mut state, model.baseline_s, &empty, &mut factor)
            .map_err(ExpectError::Site)?;
        let mut run = Self { column, state, factor, liquid_level_m: 0.0 };
        // Liquid that stood in the tank at the baseline came on by then.
        run.advance(baseline)?;
        Ok(run)
    }

    fn advance(&mut self, load: &Load) -> Result<(), ExpectError> {
        self.column
            .advance(&mut self.state, load.time_s, &load.liquid_kpa, &mut self.factor)
            .map_err(ExpectError::Site)?;
        self.liquid_level_m = load.liquid_level_m;
        Ok(())
    }

    fn moment(&self) -> Moment {
        Moment { liquid_level_m: self.liquid_level_m, background_kpa: 0.0 }
    }
}

/// An instrument that is read along the way.
struct Followed<'a> {
    member: &'a Member<'a>,
    point: Point,
    zero: Zero,
    next: usize,
    values: Vec<Option<f64>>,
}

impl<'a> Followed<'a> {
    fn new(
        run: &Run,
        model: &Model,
        case: usize,
        member: &'a Member<'a>,
    ) -> Result<Self, ExpectError> {
        let point = Point::new(&model.cases[case].1, member.instrument.sensor)
            .map_err(|source| refused(member.instrument, source))?;
        let zero = point.zero(&run.column, &run.state);
        Ok(Self { member, point, zero, next: 0, values: Vec::with_capacity(member.times.len()) })
    }

    /// Gives every asked time up to the one reached its value; none before the baseline.
    fn read(&mut self, run: &Run, reached_s: i64) -> Result<(), ExpectError> {
        while let Some(&asked_s) = self.member.times.get(self.next) {
            if asked_s > reached_s {
                break;
            }
            let value = if asked_s == reached_s {
                let reading = self.point.reading(&run.column, &run.state, self.zero, &run.moment());
                Some(reading.map_err(|source| refused(self.member.instrument, source))?)
            } else {
                None
            };
            self.values.push(value);
            self.next += 1;
        }
        Ok(())
    }
}

fn refused(instrument: &Instrument, source: expectation::ExpectationError) -> ExpectError {
    ExpectError::Instrument { id: instrument.id.clone(), source }
}

/// Column, point and zero of one instrument at one instant in the likely case: what a hand-check
/// sheet starts from.
#[derive(Debug)]
pub struct MomentState {
    /// The ground below it.
    pub column: CoreColumn,
    /// What the column has reached.
    pub state: CoreState,
    /// The instrument.
    pub point: Point,
    /// Its zero.
    pub zero: Zero,
    /// Its surroundings.
    pub moment: Moment,
}

/// Carries one instrument to an instant through a load history.
///
/// # Errors
/// As [`expect`].
pub fn state_at(
    model: &Model,
    history: &LoadHistory,
    instrument: usize,
    time_s: i64,
) -> Result<MomentState, ExpectError> {
    let instrument = &model.instruments[instrument];
    let times = [time_s];
    let member = Member { index: 0, instrument, times: &times };
    let group = [member];
    let steps = steps_of(model, history, &group)?;
    let mut run = Run::start(model, 0, instrument.sensor.place, &steps.baseline)?;
    let point = Point::new(model.likely(), instrument.sensor)
        .map_err(|source| refused(instrument, source))?;
    let zero = point.zero(&run.column, &run.state);
    for load in &steps.after {
        run.advance(load)?;
    }
    let moment = run.moment();
    Ok(MomentState { column: run.column, state: run.state, point, zero, moment })
}
