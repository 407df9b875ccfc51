//! The section: west to east through the axis of the tank under test.

use super::session::Session;
use super::shown::Shown;
use super::views::{LayerView, SectionView, TankView, Units};
use crate::site::{Instrument, SiteFile, Tank};

/// Part of the diameter that is seen of a neighbour beyond its near edge.
const NEIGHBOUR_SHARE: f64 = 0.35;
/// A neighbour farther than this many radii from the axis is not drawn.
const FARTHEST_RADII: f64 = 4.0;
/// Ground beside the outermost thing drawn, in radii of the tank.
const MARGIN_RADII: f64 = 0.12;
/// Instruments within this many radii of the axis along the section are taken into the drawing.
const NEAR_RADII: f64 = 2.0;
/// Air above the shell, as a share of its height.
const AIR_SHARE: f64 = 0.15;

/// Where something lies on the section.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Place {
    /// East of the axis of the tank under test, m.
    pub x_m: f64,
    /// Depth, m.
    pub depth_m: f64,
    /// North of the plane of the section, m.
    pub off_m: f64,
}

impl Place {
    pub fn of(site: &SiteFile, given: &Instrument) -> Self {
        let (x_m, y_m) = axis(site);
        Self { x_m: given.x_m - x_m, depth_m: given.depth_m, off_m: given.y_m - y_m }
    }
}

/// Axis of the tank under test, east and north, m.
pub(super) fn axis(site: &SiteFile) -> (f64, f64) {
    site.tanks.first().map_or((0.0, 0.0), |tank| (tank.x_m, tank.y_m))
}

/// Left, right, top and bottom of the drawing, m.
pub(super) fn extent_m(site: &SiteFile) -> [f64; 4] {
    let Some(tank) = site.tanks.first() else { return [-1.0, 1.0, -1.0, 1.0] };
    let radius_m = 0.5 * tank.diameter_m;
    let (mut left_m, mut right_m) = (-1.4 * radius_m, 1.4 * radius_m);
    for given in &site.instruments {
        let x_m = Place::of(site, given).x_m;
        if x_m.abs() <= NEAR_RADII * radius_m {
            left_m = left_m.min(x_m - MARGIN_RADII * radius_m);
            right_m = right_m.max(x_m + MARGIN_RADII * radius_m);
        }
    }
    for neighbour in site.tanks.iter().skip(1) {
        let x_m = neighbour.x_m - tank.x_m;
        let near_m = x_m.abs() - 0.5 * neighbour.diameter_m;
        if near_m > FARTHEST_RADII * radius_m {
            continue;
        }
        let seen_m = near_m + NEIGHBOUR_SHARE * neighbour.diameter_m;
        if x_m < 0.0 { left_m = left_m.min(-seen_m) } else { right_m = right_m.max(seen_m) }
    }
    [left_m, right_m, -(1.0 + AIR_SHARE) * tank.shell_height_m, bottom_m(site)]
}

/// The base of the lowest layer, or less where the ground goes on far below tank and instruments.
fn bottom_m(site: &SiteFile) -> f64 {
    let base_m: f64 = site.layers.iter().map(|layer| layer.thickness_m).sum();
    let radius_m = site.tanks.first().map_or(0.0, |tank| 0.5 * tank.diameter_m);
    let deepest_m = site.instruments.iter().map(|given| given.depth_m).fold(0.0, f64::max);
    base_m.min((2.0 * radius_m).max(1.2 * deepest_m))
}

impl Session {
    /// The fixed drawing of the section.
    #[must_use]
    pub fn section(&self, units: Units) -> SectionView {
        section_of(&self.site, units)
    }
}

/// The section of a site.
pub(super) fn section_of(site: &SiteFile, units: Units) -> SectionView {
    let extent_m = extent_m(site);
    let mut top_m = 0.0;
    let layers = site.layers.iter().map(|layer| {
        let view = LayerView {
            name: layer.name.clone(),
            top_m,
            base_m: (top_m + layer.thickness_m).min(extent_m[3]),
            drained: layer.drained,
        };
        top_m += layer.thickness_m;
        view
    });
    let layers = layers.filter(|layer| layer.top_m < extent_m[3]).collect();
    let under_test = site.tanks.first().map_or("the tank", |tank| tank.name.as_str());
    SectionView {
        title: format!("west to east through {under_test}, heights and lengths to one scale"),
        extent_m,
        layers,
        water_table_m: site.water.water_table_m,
        drains: site.drains.as_ref().map(|drains| {
            let half_m = drains.zone_radius_m;
            [-half_m, half_m, drains.top_m, drains.base_m, drawn_spacing_m(half_m)]
        }),
        tanks: tanks(site, units),
    }
}

/// Drains stand too close to be drawn each; so many are drawn that the eye reads a zone of drains.
fn drawn_spacing_m(half_m: f64) -> f64 {
    2.0 * half_m / 24.0
}

fn tanks(site: &SiteFile, units: Units) -> Vec<TankView> {
    let (axis_m, _) = axis(site);
    let view = |(index, tank): (usize, &Tank)| TankView {
        name: tank.name.clone(),
        under_test: index == 0,
        x_m: tank.x_m - axis_m,
        diameter_m: tank.diameter_m,
        shell_height_m: tank.shell_height_m,
        liquid_level_m: tank.liquid_level_m,
        label: format!("{}, {} across", tank.name, Shown::length(units).text(tank.diameter_m)),
    };
    site.tanks.iter().enumerate().map(view).collect()
}
