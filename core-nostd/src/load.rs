//! Tanks, liquid, foundation and the contact pressure that a liquid level gives.

use crate::config::{MAX_TANKS, Name};
use heapless::Vec;
use serde::{Deserialize, Serialize};

/// A place in plan, m, in the site's own east (x) and north (y) axes.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct PlanPosition {
    /// East, m.
    pub x_m: f64,
    /// North, m.
    pub y_m: f64,
}

/// A storage tank as a load on the ground: a uniform disc (liquid, floor, pad, less excavated
/// soil) and a ring line load (shell, roof carried by it, ring wall).
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Tank {
    /// Name on drawings and in messages.
    pub name: Name,
    /// Axis in plan.
    pub axis: PlanPosition,
    /// Diameter, m.
    pub diameter_m: f64,
    /// Height of the shell, m: the liquid level cannot be above it.
    pub shell_height_m: f64,
    /// Depth of the loaded level below ground level, m (0 for a tank on a pad at ground level;
    /// the stress calculation starts there).
    pub loaded_depth_m: f64,
    /// Floor weight as a uniform pressure, kPa.
    pub floor_pressure_kpa: f64,
    /// Foundation pad weight as a uniform pressure, kPa.
    pub pad_pressure_kpa: f64,
    /// Excavated soil as a pressure taken away, kPa (given positive, subtracted).
    pub excavation_relief_kpa: f64,
    /// Shell, with the part of the roof it carries, as a line load, kN/m.
    pub shell_line_load_kn_m: f64,
    /// Ring wall or ring pad weight as a line load, kN/m.
    pub ring_line_load_kn_m: f64,
}

/// All tanks that load the site; the first is the tank under test.
pub type Tanks = Vec<Tank, MAX_TANKS>;
