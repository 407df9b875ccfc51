//! A column that walks through a load history, for tests.

#![allow(dead_code, reason = "shared by several tests, each of which uses a part of it")]

use brimstead_core::consolidation::{
    Balance, Boundary, Column, ColumnLayer, DrainPattern, Drains, Error, Factor, Loading, State,
    Stepper,
};

pub const CELLS: usize = 60;
pub const HOUR_S: f64 = 3600.0;
pub const DAY_S: f64 = 86_400.0;

pub fn cv_per_day(cv_m2_per_day: f64) -> f64 {
    cv_m2_per_day / DAY_S
}

/// A layer by cv in m2/day and permeability in m/day.
pub fn clay(thickness_m: f64, cv_m2_per_day: f64, permeability_m_per_day: f64) -> ColumnLayer {
    ColumnLayer {
        thickness_m,
        cv_m2_per_s: cv_per_day(cv_m2_per_day),
        ch_m2_per_s: cv_per_day(cv_m2_per_day),
        permeability_m_per_s: permeability_m_per_day / DAY_S,
        drained: false,
    }
}

/// Drained at the top.
pub fn column<'a>(
    layers: &'a [ColumnLayer],
    base: Boundary,
    drains: Option<&'a Drains>,
) -> Column<'a> {
    Column { layers, top: Boundary::Drained, base, drains, water_unit_weight_kn_m3: 9.81 }
}

/// Load of `t02_staged.csv`, kPa by day.
pub const STAGES: [(f64, f64); 12] = [
    (0.0, 0.0),
    (10.0, 40.0),
    (40.0, 40.0),
    (50.0, 80.0),
    (90.0, 80.0),
    (100.0, 120.0),
    (150.0, 120.0),
    (160.0, 160.0),
    (220.0, 160.0),
    (225.0, 100.0),
    (260.0, 100.0),
    (270.0, 180.0),
];

/// Pressures of the same table and their depths, m.
pub const STAGED_DEPTHS: [(&str, f64); 4] =
    [("u_Z0.25_kPa", 0.75), ("u_Z0.5_kPa", 1.5), ("u_Z0.75_kPa", 2.25), ("u_Z1_kPa", 3.0)];

/// The layer of that table.
pub fn staged_clay() -> ColumnLayer {
    clay(3.0, 0.012, 0.012 * 0.0006 * 9.81)
}

/// Case B of `t03_layers.csv` with ch twice cv, as in `tests/oracle/consolidation_column.py`.
pub fn partly_drained_layers() -> [ColumnLayer; 4] {
    [(1.5, 0.03, 6e-5), (4.0, 0.006, 8e-6), (2.5, 0.05, 3e-4), (6.0, 0.01, 1.2e-5)].map(
        |(thickness_m, cv, k)| ColumnLayer {
            ch_m2_per_s: cv_per_day(2.0 * cv),
            ..clay(thickness_m, cv, k)
        },
    )
}

/// The drains of `t04_combined.csv`, through the whole layer of 8 m.
pub fn combined_drains() -> Drains {
    Drains {
        pattern: DrainPattern::Triangular,
        spacing_m: 1.5,
        equivalent_diameter_m: 0.0662,
        smear_ratio: 2.0,
        permeability_ratio_h_over_s: 3.0,
        discharge_m3_per_s: None,
        top_m: 0.0,
        base_m: 8.0,
        length_m: 8.0,
    }
}

/// The layer of the same table.
pub fn combined_clay() -> ColumnLayer {
    ColumnLayer { ch_m2_per_s: cv_per_day(0.016), ..clay(8.0, 0.008, 8e-6) }
}

/// The drains of `tests/oracle/consolidation_column.py`.
pub fn partial_drains() -> Drains {
    Drains {
        discharge_m3_per_s: Some(2e-7),
        top_m: 0.5,
        base_m: 9.3,
        length_m: 8.8,
        ..combined_drains()
    }
}

/// Column, state, time and the load so far.
pub struct Walk {
    pub stepper: Stepper<CELLS>,
    pub state: State<CELLS>,
    pub factor: Factor<CELLS>,
    pub time_s: f64,
    pub load_kpa: f64,
    pub influence: [f64; CELLS],
    pub worst_closing: f64,
    total: Balance,
}

impl Walk {
    pub fn new(ground: &Column<'_>) -> Self {
        let stepper = Stepper::new(ground).expect("a sound column");
        Self {
            state: stepper.at_rest(),
            factor: Factor::empty(),
            time_s: 0.0,
            load_kpa: 0.0,
            influence: [1.0; CELLS],
            worst_closing: 0.0,
            total: Balance::default(),
            stepper,
        }
    }

    /// Excess pressure per kPa of load, by depth of the cell's middle.
    pub fn influence_by(&mut self, ratio: impl Fn(f64) -> f64) {
        for (place, depth_m) in self.influence.iter_mut().zip(self.stepper.centre_depths_m()) {
            *place = ratio(depth_m);
        }
    }

    pub fn try_advance(&mut self, loading: Loading<'_, CELLS>, dt_s: f64) -> Result<(), Error> {
        let balance = self.stepper.advance(&mut self.state, loading, dt_s, &mut self.factor)?;
        self.worst_closing = self.worst_closing.max(balance.closing_error());
        self.total = Balance {
            stored_after_m: balance.stored_after_m,
            load_m: self.total.load_m + balance.load_m,
            top_m: self.total.top_m + balance.top_m,
            base_m: self.total.base_m + balance.base_m,
            layers_m: self.total.layers_m + balance.layers_m,
            drains_m: self.total.drains_m + balance.drains_m,
            ..self.total
        };
        self.time_s += dt_s;
        Ok(())
    }

    /// Loads at once by 1 kPa times a ratio over depth.
    pub fn jump_by(&mut self, ratio: impl Fn(f64) -> f64) {
        self.influence_by(ratio);
        let increments = self.influence;
        self.try_advance(Loading::Jump(&increments), 0.0).expect("a sound jump");
        self.load_kpa += 1.0;
    }

    pub fn hold_until(&mut self, time_s: f64, step_s: f64) {
        while self.time_s < time_s {
            let left_s = time_s - self.time_s;
            self.try_advance(Loading::Hold, left_s.min(step_s)).expect("a sound step");
            if left_s <= step_s {
                self.time_s = time_s;
            }
        }
    }

    /// Follows a load in kPa by time, linear in each step.
    pub fn ramp_until(&mut self, time_s: f64, step_s: f64, load_kpa: impl Fn(f64) -> f64) {
        while self.time_s < time_s {
            let left_s = time_s - self.time_s;
            let end_s = if left_s <= step_s { time_s } else { self.time_s + step_s };
            let change_kpa = load_kpa(end_s) - self.load_kpa;
            let increments = self.influence.map(|influence| influence * change_kpa);
            let loading =
                if change_kpa == 0.0 { Loading::Hold } else { Loading::Ramp(&increments) };
            self.try_advance(loading, end_s - self.time_s).expect("a sound step");
            self.load_kpa += change_kpa;
            self.time_s = end_s;
        }
    }

    pub fn settlement_m(&self) -> f64 {
        let applied = self.influence.map(|influence| influence * self.load_kpa);
        self.stepper.settlement_m(&self.state, &applied)
    }

    /// Settlement in the end, per kPa of load.
    pub fn settlement_per_kpa_m(&self) -> f64 {
        self.stepper.settlement_m(&self.stepper.at_rest(), &self.influence)
    }

    /// Settlement over that in the end under the load so far.
    pub fn degree(&self) -> f64 {
        self.settlement_m() / (self.settlement_per_kpa_m() * self.load_kpa)
    }

    pub fn excess_at(&self, depth_m: f64) -> f64 {
        self.stepper.excess_at_kpa(&self.state, depth_m).expect("a depth of the column")
    }

    pub fn balance(&self) -> Balance {
        self.total
    }
}
