//! The site file, declared key by key.

mod instruments;
mod readings;

pub use instruments::{
    Calibration, Direction, Instrument, InstrumentKind, InstrumentUnit, Limit, LimitDefaults,
    LimitRule, Persistence, Trigger,
};
pub use readings::{Column, Decimal, Delimiter, FileEncoding, ReadingsLayout, Signal};

use super::bounds as b;
use super::check;
use super::reader::{
    ByChoice, Flag, Instant, InstantText, List, Maybe, Nested, Number, OneOf, OrNull, Pair, Text,
    choices, record, union,
};
use brimstead_core::config::{MAX_LAYERS, MAX_PROFILE_POINTS, MAX_TANKS, NAME_BYTES};
use brimstead_core::{ground, load};
use std::collections::BTreeMap;

/// A name that crosses to the core and the loggers.
const NAME: Text = Text(1..=NAME_BYTES);
/// Any other short text.
const SHORT: Text = Text(1..=200);
/// Free text.
const FREE: Text = Text(0..=20_000);
/// Most entries of a list that has no fixed capacity elsewhere.
const MANY: usize = 1000;

record! {
    /// A site: ground, tanks, load history, plan, instruments, limits and how its readings are
    /// written.
    pub struct SiteFile {
        /// Format and version of this file.
        format: Format => OneOf::new(),
        /// What the site is.
        site: Site => Nested::new(),
        /// Ground water before loading.
        water: Water => Nested::new(),
        /// Layers from ground level down, best estimate.
        layers: Vec<Layer> => List(Nested::new(), 1..=MAX_LAYERS),
        /// What lies below the lowest layer.
        base: Base => Nested::new(),
        /// Vertical drains, or null for none.
        drains: Option<Drains> => OrNull(Nested::new()),
        /// Tanks that load the ground; the first is the tank under test.
        tanks: Vec<Tank> => List(Nested::new(), 1..=MAX_TANKS),
        /// What the tank under test holds, from when.
        liquids: Vec<Liquid> => List(Nested::new(), 1..=MANY),
        /// When the dead load of the tanks came on.
        dead_load_since: InstantText => Instant,
        /// Instant of the agreed reference set: settlement and excess pore pressure count from it.
        baseline: InstantText => Instant,
        /// Planned rises and holds, in order.
        stages: Vec<Stage> => List(Nested::new(), 0..=MANY),
        /// The cases that span the expected band.
        band: Band => Nested::new(),
        /// The instruments.
        instruments: Vec<Instrument> => List(Nested::new(), 0..=MANY),
        /// Limits of every instrument of a kind that has none of its own.
        limit_defaults: BTreeMap<InstrumentKind, LimitDefaults> => ByChoice(OneOf::new(), Nested::new()),
        /// How files of readings are written, one entry for each kind of file.
        readings: Vec<ReadingsLayout> => List(Nested::new(), 0..=MANY),
    }
    between SiteParts => check::between_sections
}

choices! {
    /// Format and version of a site file.
    pub enum Format {
        /// The first version.
        V1 = "brimstead-site/1",
    }
}

record! {
    /// What the site is.
    pub struct Site {
        /// Name of the site.
        name: String => SHORT,
        /// true when site, people and readings are invented.
        invented: bool => Flag,
        /// Time zone in which times are shown (IANA name).
        time_zone: String => SHORT,
        /// Anything worth knowing.
        note: String => FREE,
    }
}

record! {
    /// Ground water before loading.
    pub struct Water {
        /// Depth of the water table, m.
        water_table_m: f64 => Number(&ground::WATER_TABLE),
        /// Unit weight of the ground water, kN/m3.
        unit_weight_kn_m3: f64 => Number(&ground::WATER_UNIT_WEIGHT),
        /// Measured pore pressure as [depth m, kPa] by rising depth; hydrostatic when left out.
        profile: Option<Vec<(f64, f64)>> =>
            Maybe(List(Pair(Number(&b::DEPTH), Number(&ground::WATER_POINT_PRESSURE)), 2..=MAX_PROFILE_POINTS)),
    }
}

record! {
    /// One horizontal layer, best estimate.
    pub struct Layer {
        /// Name on drawings and in messages.
        name: String => NAME,
        /// Thickness, m.
        thickness_m: f64 => Number(&ground::LAYER_THICKNESS),
        /// Bulk unit weight above the water table, kN/m3.
        unit_weight_above_water_kn_m3: f64 => Number(&ground::UNIT_WEIGHT_ABOVE_WATER),
        /// Bulk (saturated) unit weight below the water table, kN/m3.
        unit_weight_below_water_kn_m3: f64 => Number(&ground::UNIT_WEIGHT_BELOW_WATER),
        /// One-dimensional compressibility.
        compressibility: Compressibility => Nested::new(),
        /// Stress history.
        preconsolidation: Preconsolidation => Nested::new(),
        /// Secondary compression as strain per log10 cycle of time; 0 for none.
        secondary_ratio: f64 => Number(&ground::SECONDARY_RATIO),
        /// Coefficient of consolidation for vertical flow, m2/year.
        cv_m2_per_year: f64 => Number(&b::CONSOLIDATION_COEFFICIENT),
        /// Coefficient of consolidation for horizontal flow, m2/year.
        ch_m2_per_year: f64 => Number(&b::CONSOLIDATION_COEFFICIENT),
        /// Vertical permeability, m/s.
        permeability_m_per_s: f64 => Number(&ground::PERMEABILITY),
        /// Undrained Young's modulus, kPa.
        young_undrained_kpa: f64 => Number(&ground::YOUNG_MODULUS),
        /// Drained Young's modulus, kPa.
        young_drained_kpa: f64 => Number(&ground::YOUNG_MODULUS),
        /// Drained Poisson's ratio.
        poisson_drained: f64 => Number(&ground::POISSON_RATIO),
        /// Undrained shear strength at the top of the layer, kPa; 0 for a drained layer.
        undrained_strength_kpa: f64 => Number(&ground::UNDRAINED_STRENGTH),
        /// Its gradient with depth, kPa/m.
        undrained_strength_gradient_kpa_per_m: f64 => Number(&ground::STRENGTH_GRADIENT),
        /// Excess pore pressure per kPa of vertical total stress increment.
        pore_pressure_response: f64 => Number(&ground::PORE_PRESSURE_RESPONSE),
        /// true for a free-draining layer.
        drained: bool => Flag,
    }
}

union! {
    /// One-dimensional compressibility.
    pub enum Compressibility {
        words {}
        forms {
            /// By compression and recompression index.
            Index {
                /// Initial void ratio.
                void_ratio: f64 => Number(&ground::VOID_RATIO),
                /// Compression index Cc.
                cc: f64 => Number(&ground::COMPRESSION_INDEX),
                /// Recompression index Cr.
                cr: f64 => Number(&ground::RECOMPRESSION_INDEX),
            }
            /// By strain per log10 cycle of effective stress.
            Ratio {
                /// Compression ratio CR = Cc/(1+e0).
                compression_ratio: f64 => Number(&ground::COMPRESSION_RATIO),
                /// Recompression ratio RR = Cr/(1+e0).
                recompression_ratio: f64 => Number(&ground::RECOMPRESSION_RATIO),
            }
            /// By a constant modulus, for sands and stiff layers.
            Modulus {
                /// Constrained modulus, kPa.
                constrained_modulus_kpa: f64 => Number(&ground::CONSTRAINED_MODULUS),
            }
        }
    }
}

union! {
    /// Stress history of a layer.
    pub enum Preconsolidation {
        words {}
        forms {
            /// By overconsolidation ratio.
            Ocr {
                /// Overconsolidation ratio.
                ocr: f64 => Number(&ground::OVERCONSOLIDATION_RATIO),
            }
            /// By pre-overburden pressure.
            Pop {
                /// Pre-overburden pressure, kPa.
                pop_kpa: f64 => Number(&ground::PRE_OVERBURDEN),
            }
            /// By the pressure itself.
            Value {
                /// Preconsolidation pressure, constant over the layer, kPa.
                value_kpa: f64 => Number(&ground::PRECONSOLIDATION_PRESSURE),
            }
        }
    }
}

record! {
    /// What lies below the lowest layer.
    pub struct Base {
        /// Flow at the base.
        drainage: BaseDrainage => OneOf::new(),
        /// Stiffness of the base.
        stiffness: BaseStiffness => Nested::new(),
    }
}

choices! {
    /// Flow at the base of the lowest layer.
    pub enum BaseDrainage {
        /// Excess pore pressure is zero there.
        Drained = "drained",
        /// No flow.
        Closed = "closed",
    }
}

union! {
    /// Stiffness below the lowest layer.
    pub enum BaseStiffness {
        words {
            /// Nothing moves there.
            Rigid = "rigid",
        }
        forms {
            /// An elastic half-space.
            HalfSpace {
                /// Young's modulus, kPa.
                young_kpa: f64 => Number(&ground::YOUNG_MODULUS),
                /// Poisson's ratio.
                poisson: f64 => Number(&ground::POISSON_RATIO),
            }
        }
    }
}

record! {
    /// Vertical drains.
    pub struct Drains {
        /// Pattern in plan.
        pattern: DrainPattern => OneOf::new(),
        /// Spacing, m.
        spacing_m: f64 => Number(&b::DRAIN_SPACING),
        /// Equivalent diameter, m.
        equivalent_diameter_m: f64 => Number(&b::DRAIN_DIAMETER),
        /// Diameter of the smear zone by that of the drain.
        smear_ratio: f64 => Number(&b::SMEAR_RATIO),
        /// Horizontal permeability undisturbed by that in the smear zone.
        permeability_ratio_h_over_s: f64 => Number(&b::SMEAR_PERMEABILITY_RATIO),
        /// Discharge capacity, m3/year; null for no well resistance.
        discharge_m3_per_year: Option<f64> => OrNull(Number(&b::DRAIN_DISCHARGE)),
        /// Depth of the top, m.
        top_m: f64 => Number(&b::DEPTH),
        /// Depth of the tip, m.
        base_m: f64 => Number(&b::DEPTH),
        /// Longest way of the water inside a drain, m.
        length_m: f64 => Number(&b::DRAIN_LENGTH),
        /// Radius around the axis of the tank under test that has drains, m.
        zone_radius_m: f64 => Number(&b::ZONE_RADIUS),
    }
}

choices! {
    /// Pattern of drains in plan.
    pub enum DrainPattern {
        /// Equilateral triangles.
        Triangular = "triangular",
        /// Squares.
        Square = "square",
    }
}

record! {
    /// A storage tank.
    pub struct Tank {
        /// Name on drawings and in messages.
        name: String => NAME,
        /// Axis, east, m.
        x_m: f64 => Number(&load::COORDINATE),
        /// Axis, north, m.
        y_m: f64 => Number(&load::COORDINATE),
        /// Diameter, m.
        diameter_m: f64 => Number(&load::TANK_DIAMETER),
        /// Height of the shell, m.
        shell_height_m: f64 => Number(&load::SHELL_HEIGHT),
        /// Depth of the loaded level below ground level, m.
        loaded_depth_m: f64 => Number(&load::LOADED_DEPTH),
        /// Floor weight, kPa.
        floor_pressure_kpa: f64 => Number(&load::PART_PRESSURE),
        /// Foundation pad weight, kPa.
        pad_pressure_kpa: f64 => Number(&load::PART_PRESSURE),
        /// Excavated soil, kPa, given positive and taken off.
        excavation_relief_kpa: f64 => Number(&load::PART_PRESSURE),
        /// Shell with the part of the roof it carries, kN/m.
        shell_line_load_kn_m: f64 => Number(&load::LINE_LOAD),
        /// Ring wall or ring pad, kN/m.
        ring_line_load_kn_m: f64 => Number(&load::LINE_LOAD),
        /// Constant liquid level of a neighbour, m; not for the tank under test.
        liquid_level_m: Option<f64> => Maybe(Number(&b::LIQUID_LEVEL)),
        /// Stated rate at which the tank can be lowered, m3/h.
        pump_rate_m3_per_h: Option<f64> => Maybe(Number(&b::PUMP_RATE)),
    }
}

record! {
    /// What the tank under test holds from an instant on.
    pub struct Liquid {
        /// From when.
        from: InstantText => Instant,
        /// Name of the liquid.
        name: String => NAME,
        /// Unit weight, kN/m3.
        unit_weight_kn_m3: f64 => Number(&load::LIQUID_UNIT_WEIGHT),
    }
}

record! {
    /// A planned change of the liquid level with its hold.
    pub struct Stage {
        /// Name of the stage.
        name: String => NAME,
        /// Start of the change.
        start: InstantText => Instant,
        /// End of the change.
        end: InstantText => Instant,
        /// Liquid level at the end, m.
        to_level_m: f64 => Number(&b::LIQUID_LEVEL),
        /// Until when it is held.
        hold_until: InstantText => Instant,
    }
}

record! {
    /// The cases that span the expected band.
    pub struct Band {
        /// Each case multiplies the best estimate.
        cases: Vec<BandCase> => List(Nested::new(), 1..=16),
    }
}

record! {
    /// One case: multipliers of the best estimate.
    pub struct BandCase {
        /// Name of the case.
        name: String => NAME,
        /// On the compressibility of every layer.
        compressibility: f64 => Number(&b::MULTIPLIER),
        /// On cv.
        cv: f64 => Number(&b::MULTIPLIER),
        /// On ch.
        ch: f64 => Number(&b::MULTIPLIER),
        /// On the pore-pressure response.
        pore_pressure_response: f64 => Number(&b::MULTIPLIER),
        /// On Young's moduli.
        young: f64 => Number(&b::MULTIPLIER),
    }
}
