//! The layered column: implicit finite volumes in depth, vertical drains as a sink, any load
//! history.
//!
//! # Equation
//! ```text
//! m du/dt = d/dz(k du/dz) - m (8 ch/(De^2 mu(z))) u + m ds/dt,    m = k/cv = mv gamma_w
//! ```
//! u excess pore pressure and s the total stress increment that raises it, kPa. Pressure and flow
//! are continuous at interfaces. A cell of thickness h holds the volume `c u`, `c = mv h`;
//! neighbours are joined by `1/(gamma_w (h1/(2 k1) + h2/(2 k2)))`; a drained face lies half a cell
//! away. Vertical and radial flow act together in the same equation, so no product of separate
//! degrees of consolidation is needed.
//!
//! # Time
//! Two implicit stages (singly diagonal, L-stable, second order: Alexander 1977, SIAM J. Numer.
//! Anal. 14, with `g = 1 - 1/sqrt 2`), the load linear inside the step:
//!
//! ```text
//! (C + g dt K) u1 = C [u0 + g ds]                             the state at g dt
//! (C + g dt K) u2 = C [(1 + sqrt 2) u1 - sqrt 2 u0 + g ds]    the state at dt
//! ```
//! Both stages share one matrix. Outflow over the step is that of `dt [(1 - g) u1 + g u2]`, which
//! makes the balance of water exact but for rounding. No length of step is unstable.
//!
//! # Accuracy
//! With 60 cells, hourly to daily steps: degree of consolidation within 0.001 of the exact series
//! for one to five layers, instantaneous, ramped and staged loads, with and without drains.
//! The tests beside this crate state the largest difference of each table.

use super::error::{COMPRESSIBILITY, DEPTH, EXCESS, STEP, WATER_UNIT_WEIGHT};
use super::grid::{Cell, lay_out};
use super::pace::{MOST_SUBSTEPS, Pace};
use super::{Balance, Boundary, ColumnLayer, Drains, Error, State};
use crate::math::tridiagonal::Elimination;
use core::f64::consts::{FRAC_1_SQRT_2, SQRT_2};

/// Place of both implicit stages, `1 - 1/sqrt 2`.
const STAGE: f64 = 1.0 - FRAC_1_SQRT_2;
/// First substep after a jump, as a share of the shortest diffusion time of a cell.
const FIRST_OF_CELL: f64 = 0.1;
/// First substep after a change in the rate of loading, as a share of the diffusion time through
/// the fastest stack of layers between free-draining ones: a front of 1/100 of it.
const KINK_OF_STACK: f64 = 1e-4;
/// The same limits as shares of the time in which drains take 1/e.
const FIRST_OF_DRAINS: f64 = 0.02;
const KINK_OF_DRAINS: f64 = 0.1;
/// Growth of substeps with the time since a disturbance.
const GROWTH: f64 = 0.15;

/// Ground as the column sees it.
#[derive(Debug, Clone, Copy)]
pub struct Column<'a> {
    /// Layers from the top of the column down.
    pub layers: &'a [ColumnLayer],
    /// Flow at the top.
    pub top: Boundary,
    /// Flow at the base.
    pub base: Boundary,
    /// Vertical drains, where there are any.
    pub drains: Option<&'a Drains>,
    /// Unit weight of the ground water, kN/m3.
    pub water_unit_weight_kn_m3: f64,
}

/// What loads the column during a step. Increments are per cell, of the total stress change that
/// raises excess pore pressure, kPa.
#[derive(Debug, Clone, Copy)]
pub enum Loading<'a, const CELLS: usize> {
    /// The load stays.
    Hold,
    /// It changes evenly over the step by these increments.
    Ramp(&'a [f64; CELLS]),
    /// It changes by these increments at the start of the step and then stays.
    Jump(&'a [f64; CELLS]),
}

/// The eliminated matrix for one length of step. Lend the same one again and a repeated step
/// costs no elimination; lend a fresh one and the result has the same bits.
#[derive(Debug, Clone, Copy)]
pub struct Factor<const CELLS: usize> {
    dt_s: f64,
    column_mark: u32,
    elimination: Elimination<CELLS>,
}

impl<const CELLS: usize> Factor<CELLS> {
    /// One that fits no step yet.
    #[must_use]
    pub fn empty() -> Self {
        // No step has a negative length.
        Self {
            dt_s: -1.0,
            column_mark: 0,
            elimination: Elimination::new(&[1.0; CELLS], &[0.0; CELLS]),
        }
    }
}

/// A column ready to step.
#[derive(Debug, Clone, Copy)]
pub struct Stepper<const CELLS: usize> {
    pub(super) cells: [Cell; CELLS],
    /// Coefficient of volume compressibility times thickness, m/kPa; also of free-draining cells.
    pub(super) compression_m_per_kpa: [f64; CELLS],
    /// The same where excess pressure can be held, else zero.
    pub(super) storage_m_per_kpa: [f64; CELLS],
    /// Twice vertical permeability over thickness and unit weight of water: from centre to face.
    pub(super) half_cell_m_per_s_kpa: [f64; CELLS],
    /// Between a cell and the next below it.
    link: [f64; CELLS],
    /// To neighbouring free-draining layers.
    layer_leak: [f64; CELLS],
    /// To the vertical drains.
    drain_leak: [f64; CELLS],
    /// All leaks, boundaries included.
    leak: [f64; CELLS],
    top_leak: f64,
    base_leak: f64,
    has_layer_leak: bool,
    has_drains: bool,
    pub(super) top: Boundary,
    pub(super) base: Boundary,
    pub(super) depth_m: f64,
    pub(super) pace: Pace,
    mark: u32,
}

/// Sum of products in four interleaved sums, so that it does not wait on one.
fn dot<const CELLS: usize>(a: &[f64; CELLS], b: &[f64; CELLS]) -> f64 {
    let mut lanes = [0.0f64; 4];
    for (a, b) in a.chunks(4).zip(b.chunks(4)) {
        for ((lane, a), b) in lanes.iter_mut().zip(a).zip(b) {
            *lane += a * b;
        }
    }
    let [first, second, third, fourth] = lanes;
    (first + second) + (third + fourth)
}

/// FNV-1a over the bits of the numbers that define a column.
fn mark_of<'a>(numbers: impl Iterator<Item = &'a f64>) -> u32 {
    let bytes = numbers.flat_map(|number| number.to_bits().to_le_bytes());
    bytes.fold(0x811c_9dc5, |mark, byte| (mark ^ u32::from(byte)).wrapping_mul(0x0100_0193))
}

impl<const CELLS: usize> Stepper<CELLS> {
    /// Checks the ground, lays out the cells and joins them.
    ///
    /// # Errors
    /// A value outside its range, no layers, too few cells for the layers, or drains that do not
    /// fit together.
    pub fn new(column: &Column<'_>) -> Result<Self, Error> {
        Self::with_cells(column, false)
    }

    /// As [`Stepper::new`]; with `halved` on the grid of half as many cells, each cut in two.
    pub(super) fn with_cells(column: &Column<'_>, halved: bool) -> Result<Self, Error> {
        let cells = lay_out::<CELLS>(column.layers, column.top, column.base, halved)?;
        let water = WATER_UNIT_WEIGHT.check(column.water_unit_weight_kn_m3)?;
        for (index, layer) in column.layers.iter().enumerate() {
            let mv = layer.permeability_m_per_s / (layer.cv_m2_per_s * water);
            COMPRESSIBILITY.check_at(mv, index)?;
        }
        let mut stepper = Self {
            cells,
            compression_m_per_kpa: [0.0; CELLS],
            storage_m_per_kpa: [0.0; CELLS],
            half_cell_m_per_s_kpa: [0.0; CELLS],
            link: [0.0; CELLS],
            layer_leak: [0.0; CELLS],
            drain_leak: [0.0; CELLS],
            leak: [0.0; CELLS],
            top_leak: 0.0,
            base_leak: 0.0,
            has_layer_leak: false,
            has_drains: column.drains.is_some(),
            top: column.top,
            base: column.base,
            depth_m: column.layers.iter().map(|layer| layer.thickness_m).sum(),
            pace: Pace { first_s: f64::MAX, kink_s: f64::MAX, growth: GROWTH, pieces: 1 },
            mark: 0,
        };
        stepper.fill_cells(column, water);
        stepper.join_cells();
        if let Some(drains) = column.drains {
            stepper.place_drains(drains, column.layers)?;
        }
        stepper.gather(column.layers);
        Ok(stepper)
    }

    /// Storage and half-cell conductance of each cell.
    fn fill_cells(&mut self, column: &Column<'_>, water_kn_m3: f64) {
        let held = self.compression_m_per_kpa.iter_mut().zip(&mut self.storage_m_per_kpa);
        for ((cell, half), (compression, storage)) in
            self.cells.iter().zip(&mut self.half_cell_m_per_s_kpa).zip(held)
        {
            let Some(layer) = column.layers.get(cell.layer) else { continue };
            let k = layer.permeability_m_per_s;
            *compression = k / (layer.cv_m2_per_s * water_kn_m3) * cell.thickness_m;
            *storage = if layer.drained { 0.0 } else { *compression };
            *half = 2.0 * k / (water_kn_m3 * cell.thickness_m);
        }
    }

    /// Links between neighbours, leaks to boundaries and free-draining layers.
    fn join_cells(&mut self) {
        // A free-draining cell above sends its neighbour's leak one cell on.
        let mut from_above = 0.0;
        let uppers = self.storage_m_per_kpa.iter().zip(&self.half_cell_m_per_s_kpa);
        let lowers = uppers.clone().skip(1).map(Some).chain([None]);
        let targets = self.link.iter_mut().zip(&mut self.layer_leak);
        for ((upper, lower), (link, leak)) in uppers.zip(lowers).zip(targets) {
            *leak = from_above;
            from_above = 0.0;
            let Some(lower) = lower else { continue };
            match (*upper.0 > 0.0, *lower.0 > 0.0) {
                (true, true) => *link = upper.1 * lower.1 / (upper.1 + lower.1),
                (true, false) => *leak += upper.1,
                (false, true) => from_above = *lower.1,
                (false, false) => {}
            }
        }
        let holds = |storage: Option<&f64>| storage.is_some_and(|storage| *storage > 0.0);
        if self.top == Boundary::Drained && holds(self.storage_m_per_kpa.first()) {
            self.top_leak = self.half_cell_m_per_s_kpa.first().copied().unwrap_or(0.0);
        }
        if self.base == Boundary::Drained && holds(self.storage_m_per_kpa.last()) {
            self.base_leak = self.half_cell_m_per_s_kpa.last().copied().unwrap_or(0.0);
        }
    }

    /// Radial sink of each cell that drains pass through.
    fn place_drains(&mut self, drains: &Drains, layers: &[ColumnLayer]) -> Result<(), Error> {
        let flow = drains.radial_flow()?;
        let spacing_m = drains.equivalent_spacing_m();
        for ((cell, storage), leak) in
            self.cells.iter().zip(&self.storage_m_per_kpa).zip(&mut self.drain_leak)
        {
            let Some(layer) = layers.get(cell.layer) else { continue };
            let base_m = cell.top_m + cell.thickness_m;
            let share = drains.share_between(cell.top_m, base_m);
            if share > 0.0 && *storage > 0.0 {
                let kh = layer.ch_m2_per_s * layer.permeability_m_per_s / layer.cv_m2_per_s;
                // Middle of the drained part, where a drain ends inside the cell.
                let middle_m = 0.5 * (drains.top_m.max(cell.top_m) + drains.base_m.min(base_m));
                let mu = flow.mu() + drains.well_term(&flow, middle_m, kh);
                let rate = 8.0 * layer.ch_m2_per_s / (spacing_m * spacing_m * mu) * share;
                *leak = storage * rate;
                self.pace.first_s = self.pace.first_s.min(FIRST_OF_DRAINS / rate);
                self.pace.kink_s = self.pace.kink_s.min(KINK_OF_DRAINS / rate);
            }
        }
        Ok(())
    }

    /// Sums of leaks, limits of substeps, mark.
    fn gather(&mut self, layers: &[ColumnLayer]) {
        for (leak, (layer, drain)) in
            self.leak.iter_mut().zip(self.layer_leak.iter().zip(&self.drain_leak))
        {
            *leak = layer + drain;
        }
        self.has_layer_leak = self.layer_leak.iter().any(|leak| *leak > 0.0);
        if let Some(first) = self.leak.first_mut() {
            *first += self.top_leak;
        }
        if let Some(last) = self.leak.last_mut() {
            *last += self.base_leak;
        }
        self.limit_steps(layers);
        self.mark = mark_of(
            self.storage_m_per_kpa
                .iter()
                .chain(&self.link)
                .chain(&self.leak)
                .chain(&self.half_cell_m_per_s_kpa),
        );
    }

    /// Limits of substeps: the shortest diffusion time of a cell, and that of the fastest stack
    /// of cells between free-draining ones.
    fn limit_steps(&mut self, layers: &[ColumnLayer]) {
        let mut root_time = 0.0;
        for (cell, storage) in self.cells.iter().zip(&self.storage_m_per_kpa) {
            let Some(layer) = layers.get(cell.layer) else { continue };
            if *storage > 0.0 {
                let time_s = cell.thickness_m * cell.thickness_m / layer.cv_m2_per_s;
                self.pace.first_s = self.pace.first_s.min(FIRST_OF_CELL * time_s);
                root_time += libm::sqrt(time_s);
            } else if root_time > 0.0 {
                self.pace.kink_s = self.pace.kink_s.min(KINK_OF_STACK * root_time * root_time);
                root_time = 0.0;
            }
        }
        if root_time > 0.0 {
            self.pace.kink_s = self.pace.kink_s.min(KINK_OF_STACK * root_time * root_time);
        }
    }

    /// A column without excess pore pressure.
    #[must_use]
    pub fn at_rest(&self) -> State<CELLS> {
        State {
            excess_kpa: [0.0; CELLS],
            // Nothing has disturbed it yet.
            since_jump_s: STEP.max,
            since_kink_s: STEP.max,
            ramping: false,
            column_mark: self.mark,
        }
    }

    /// Eliminates for one length of step.
    fn factor(&self, dt_s: f64) -> Factor<CELLS> {
        let weight = STAGE * dt_s;
        let mut own = [1.0; CELLS];
        let mut link = [0.0; CELLS];
        let terms = self.storage_m_per_kpa.iter().zip(&self.leak).zip(&self.link);
        for ((own, link), ((storage, leak), joined)) in own.iter_mut().zip(&mut link).zip(terms) {
            // A free-draining cell keeps 1 and gets nothing, so its pressure is zero.
            if *storage > 0.0 {
                *own = storage + weight * leak;
            }
            *link = weight * joined;
        }
        Factor { dt_s, column_mark: self.mark, elimination: Elimination::new(&own, &link) }
    }

    /// One step without checks; `increments` are those of `scale` times this step.
    pub(super) fn substep(
        &self,
        factor: &mut Factor<CELLS>,
        excess_kpa: &mut [f64; CELLS],
        increments: Option<(&[f64; CELLS], f64)>,
        dt_s: f64,
    ) -> Balance {
        if factor.dt_s.to_bits() != dt_s.to_bits() || factor.column_mark != self.mark {
            *factor = self.factor(dt_s);
        }
        let before = *excess_kpa;
        let mut source = [0.0; CELLS];
        let mut load_m = 0.0;
        if let Some((increments, scale)) = increments {
            for (source, increment) in source.iter_mut().zip(increments) {
                *source = STAGE * scale * increment;
            }
            load_m = dot(&self.storage_m_per_kpa, increments) * scale;
        }
        let mut first = [0.0; CELLS];
        let known = before.iter().zip(&source).zip(&self.storage_m_per_kpa);
        for (first, ((u0, ds), c)) in first.iter_mut().zip(known) {
            *first = c * (u0 + ds);
        }
        factor.elimination.solve(&mut first);
        let known = before.iter().zip(&source).zip(&self.storage_m_per_kpa);
        for ((second, u1), ((u0, ds), c)) in excess_kpa.iter_mut().zip(&first).zip(known) {
            *second = c * ((1.0 + SQRT_2) * u1 - SQRT_2 * u0 + ds);
        }
        factor.elimination.solve(excess_kpa);
        self.balance(&before, &first, excess_kpa, load_m, dt_s)
    }

    /// Water balance of a step from its stages.
    fn balance(
        &self,
        before: &[f64; CELLS],
        first: &[f64; CELLS],
        after: &[f64; CELLS],
        load_m: f64,
        dt_s: f64,
    ) -> Balance {
        let mut pressure_time = [0.0; CELLS];
        for (sum, (u1, u2)) in pressure_time.iter_mut().zip(first.iter().zip(after)) {
            *sum = dt_s * (FRAC_1_SQRT_2 * u1 + STAGE * u2);
        }
        let through = |leaks: &[f64; CELLS], any: bool| {
            if any { dot(leaks, &pressure_time) } else { 0.0 }
        };
        let end = |leak: f64, at: Option<&f64>| leak * at.copied().unwrap_or(0.0);
        Balance {
            stored_before_m: dot(&self.storage_m_per_kpa, before),
            stored_after_m: dot(&self.storage_m_per_kpa, after),
            load_m,
            top_m: end(self.top_leak, pressure_time.first()),
            base_m: end(self.base_leak, pressure_time.last()),
            layers_m: through(&self.layer_leak, self.has_layer_leak),
            drains_m: through(&self.drain_leak, self.has_drains),
        }
    }

    /// Carries the state on by `dt_s` under a load and reports the balance of water. Substeps
    /// follow the rule of the room: whole steps while the column is long past its last
    /// disturbance, short ones after a jump or at the start of a long step.
    ///
    /// The state is left as it was when the call is refused.
    ///
    /// # Errors
    /// A step outside 0 to 1e10 s, an increment or a result beyond 1e6 kPa, a state of another
    /// column, or a state with a number that is not finite.
    pub fn advance(
        &self,
        state: &mut State<CELLS>,
        loading: Loading<'_, CELLS>,
        dt_s: f64,
        factor: &mut Factor<CELLS>,
    ) -> Result<Balance, Error> {
        STEP.check(dt_s)?;
        let mut next = self.accept(state)?;
        let mut ramp = None;
        match loading {
            Loading::Hold => {}
            Loading::Ramp(increments) => ramp = Some(checked(increments)?),
            Loading::Jump(increments) => {
                let jumped = self.jump(&mut next, increments)?;
                next.ramping = false;
                let held = self.run(&mut next, None, dt_s, factor);
                return self.accept_result(state, next, jumped.then(&held));
            }
        }
        if ramp.is_some() || next.ramping {
            next.since_kink_s = 0.0;
        }
        next.ramping = ramp.is_some();
        let balance = self.run(&mut next, ramp, dt_s, factor);
        self.accept_result(state, next, balance)
    }

    /// Adds increments of load at once.
    pub(super) fn jump(
        &self,
        state: &mut State<CELLS>,
        increments: &[f64; CELLS],
    ) -> Result<Balance, Error> {
        checked(increments)?;
        let stored_before_m = dot(&self.storage_m_per_kpa, &state.excess_kpa);
        let cells = state.excess_kpa.iter_mut().zip(increments).zip(&self.storage_m_per_kpa);
        for ((excess, increment), storage) in cells {
            if *storage > 0.0 {
                *excess += increment;
            }
        }
        state.since_jump_s = 0.0;
        Ok(Balance {
            stored_before_m,
            stored_after_m: dot(&self.storage_m_per_kpa, &state.excess_kpa),
            load_m: dot(&self.storage_m_per_kpa, increments),
            ..Balance::default()
        })
    }

    /// Substeps through `dt_s`.
    pub(super) fn run(
        &self,
        state: &mut State<CELLS>,
        ramp: Option<&[f64; CELLS]>,
        dt_s: f64,
        factor: &mut Factor<CELLS>,
    ) -> Balance {
        let stored_m = dot(&self.storage_m_per_kpa, &state.excess_kpa);
        let mut sum =
            Balance { stored_before_m: stored_m, stored_after_m: stored_m, ..Balance::default() };
        let mut left_s = dt_s;
        for _ in 0..MOST_SUBSTEPS {
            if left_s <= 0.0 {
                break;
            }
            let step_s = self.pace.next_s(left_s, state.since_jump_s, state.since_kink_s);
            let piece_s = step_s / f64::from(self.pace.pieces);
            let part = ramp.map(|increments| (increments, piece_s / dt_s));
            for _ in 0..self.pace.pieces {
                sum = sum.then(&self.substep(factor, &mut state.excess_kpa, part, piece_s));
            }
            left_s -= step_s;
            state.since_jump_s += step_s;
            state.since_kink_s += step_s;
        }
        sum
    }

    /// Refuses a state of another column.
    fn accept(&self, state: &State<CELLS>) -> Result<State<CELLS>, Error> {
        if state.column_mark != self.mark {
            return Err(Error::OtherColumn);
        }
        // Times are added to without end: what is past the longest step acts the same.
        let age = |time_s: f64| {
            if time_s >= 0.0 { Ok(time_s.min(STEP.max)) } else { Err(Error::NotFinite) }
        };
        Ok(State {
            since_jump_s: age(state.since_jump_s)?,
            since_kink_s: age(state.since_kink_s)?,
            ..*state
        })
    }

    /// Hands the new state over unless a number in it went astray.
    fn accept_result(
        &self,
        state: &mut State<CELLS>,
        next: State<CELLS>,
        balance: Balance,
    ) -> Result<Balance, Error> {
        if next.excess_kpa.iter().all(|excess| excess.is_finite()) {
            *state = next;
            Ok(balance)
        } else {
            Err(Error::NotFinite)
        }
    }

    /// Depth of the top of the column's cells and, last, of its base, m: `CELLS + 1` faces.
    pub fn face_depths_m(&self) -> impl Iterator<Item = f64> + '_ {
        self.cells.iter().map(|cell| cell.top_m).chain([self.depth_m])
    }

    /// Depth of the middle of each cell, m.
    pub fn centre_depths_m(&self) -> impl Iterator<Item = f64> + '_ {
        self.cells.iter().map(|cell| cell.top_m + 0.5 * cell.thickness_m)
    }

    /// Thickness of each cell, m.
    pub fn thicknesses_m(&self) -> impl Iterator<Item = f64> + '_ {
        self.cells.iter().map(|cell| cell.thickness_m)
    }

    /// Layer of each cell, counted from 0 at the top.
    pub fn layers(&self) -> impl Iterator<Item = usize> + '_ {
        self.cells.iter().map(|cell| cell.layer)
    }

    /// Depth of the base of the column, m.
    #[must_use]
    pub const fn depth_m(&self) -> f64 {
        self.depth_m
    }

    /// Settlement by linear mv for total stress increments `applied_kpa` since the state was at
    /// rest: `sum mv h (applied - excess)`, m.
    #[must_use]
    pub fn settlement_m(&self, state: &State<CELLS>, applied_kpa: &[f64; CELLS]) -> f64 {
        dot(&self.compression_m_per_kpa, applied_kpa)
            - dot(&self.storage_m_per_kpa, &state.excess_kpa)
    }

    /// Excess pore pressure at a depth, kPa: polynomial through the nearest cell centres of the
    /// layer (five, fewer at its ends), with the pressure that continuity of flow gives at its
    /// ends. In the first moment after a jump it may pass the pressure of the cells by a fifth
    /// within a cell of a drained face.
    ///
    /// # Errors
    /// A depth outside the column.
    pub fn excess_at_kpa(&self, state: &State<CELLS>, depth_m: f64) -> Result<f64, Error> {
        DEPTH.check(depth_m)?;
        super::profile::excess_at(self, &state.excess_kpa, depth_m)
    }
}

/// Increments that a column can take.
fn checked<const CELLS: usize>(increments: &[f64; CELLS]) -> Result<&[f64; CELLS], Error> {
    // NaN is not within the range either.
    if increments.iter().all(|increment| increment.abs() <= EXCESS.max) {
        return Ok(increments);
    }
    for (index, increment) in increments.iter().enumerate() {
        EXCESS.check_at(*increment, index)?;
    }
    Ok(increments)
}
