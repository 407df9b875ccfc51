//! In-situ stress and stress history of ground profiles, and what is refused at the door.

mod sample_ground;

use brimstead_core::ground::{
    Compressibility, Ground, GroundError, GroundWater, Layer, Preconsolidation, Profile,
};
use brimstead_core::working::{Step, Working};
use proptest::prelude::*;
use sample_ground::{crust_over_soft_clay, ground, layer};

const CLAY: Compressibility = Compressibility::Index { void_ratio: 1.2, cc: 0.5, cr: 0.06 };

fn assert_close(got: f64, want: f64, what: &str) {
    let tolerance = 1e-12 * want.abs().max(1.0);
    assert!((got - want).abs() <= tolerance, "{what}: got {got}, want {want}");
}

/// Collects values and names of steps.
#[derive(Default)]
struct Sheet(Vec<(String, f64)>);

impl Working for Sheet {
    fn step(&mut self, step: Step<'_>) {
        assert!(!step.formula.is_empty(), "{} shows no formula", step.name);
        assert!(step.formula.is_ascii(), "{} is not plain", step.formula);
        self.0.push((step.name.to_owned(), step.value));
    }
}

/// Craig, Soil Mechanics, chapter 7, wide fill over sand over clay (inputs and result from memory,
/// recomputed): sand 8 m of 17 and 19 kN/m3, water table at 2 m, clay 6 m of 20 kN/m3, water 9.8:
/// effective stress in the middle of the clay 119.8 kPa.
#[test]
fn effective_stress_below_a_water_table_inside_a_layer_agrees_with_a_textbook() {
    let sand = Layer {
        unit_weight_above_water_kn_m3: 17.0,
        ..layer(8.0, 19.0, CLAY, Preconsolidation::Ocr(1.0))
    };
    let clay = layer(6.0, 20.0, CLAY, Preconsolidation::Ocr(1.0));
    let site = Ground { water_unit_weight_kn_m3: 9.8, ..ground([sand, clay], 2.0) };
    let profile = Profile::new(&site).unwrap();
    assert_close(profile.effective_stress_kpa(11.0).unwrap(), 119.8, "middle of the clay");
    assert_close(profile.total_stress_kpa(11.0).unwrap(), 208.0, "17*2 + 19*6 + 20*3");
}

#[test]
fn stress_history_follows_its_rule() {
    let site = crust_over_soft_clay();
    let profile = Profile::new(&site).unwrap();
    // 18.5*1.25 - 9.81*0.25; POP 80.
    assert_close(profile.effective_stress_kpa(1.25).unwrap(), 20.6725, "crust");
    assert_close(profile.preconsolidation_kpa(1.25).unwrap(), 100.6725, "crust, POP");
    assert_close(profile.preconsolidation_kpa(3.25).unwrap(), 1.6 * 35.5525, "OCR");
    let value = ground([layer(10.0, 19.81, CLAY, Preconsolidation::ValueKpa(60.0))], 0.0);
    let profile = Profile::new(&value).unwrap();
    assert_close(profile.preconsolidation_kpa(2.0).unwrap(), 60.0, "above the meeting point");
    assert_close(profile.preconsolidation_kpa(8.0).unwrap(), 80.0, "below it: in-situ stress");
}

#[test]
fn free_water_on_the_ground_loads_but_does_not_compress() {
    let site = |water_table_m| {
        ground([layer(10.0, 16.0, CLAY, Preconsolidation::Ocr(1.3))], water_table_m)
    };
    let (flooded, level) = (site(-2.0), site(0.0));
    let (flooded, level) = (Profile::new(&flooded).unwrap(), Profile::new(&level).unwrap());
    assert_close(flooded.total_stress_kpa(0.0).unwrap(), 19.62, "2 m of water");
    assert_close(flooded.pore_pressure_kpa(5.0).unwrap(), 9.81 * 7.0, "7 m below the water");
    for depth_m in [0.0, 0.1, 5.0, 10.0] {
        let (wet, dry) =
            (flooded.effective_stress_kpa(depth_m), level.effective_stress_kpa(depth_m));
        assert_close(wet.unwrap(), dry.unwrap(), "effective stress does not know of it");
    }
}

#[test]
fn measured_pore_pressure_is_linear_between_points_and_hydrostatic_beyond() {
    let water = GroundWater::Profile {
        water_table_m: 1.0,
        points: [(3.0, 15.0), (7.0, 35.0)].into_iter().collect(),
    };
    let clay = layer(10.0, 16.0, CLAY, Preconsolidation::Ocr(1.3));
    let site = Ground { water, ..ground([clay], 1.0) };
    let profile = Profile::new(&site).unwrap();
    for (depth_m, want) in
        [(0.5, 0.0), (2.0, 15.0 - 9.81), (3.0, 15.0), (5.0, 25.0), (7.0, 35.0), (9.0, 54.62)]
    {
        assert_close(profile.pore_pressure_kpa(depth_m).unwrap(), want, "pore pressure");
    }
}

#[test]
fn an_interface_belongs_to_the_layer_below_and_the_base_to_the_last() {
    let site = crust_over_soft_clay();
    let profile = Profile::new(&site).unwrap();
    for (depth_m, index) in [(0.0, 0), (1.999, 0), (2.0, 1), (5.0, 2), (14.0, 3)] {
        assert_eq!(profile.layer_at(depth_m).unwrap().index, index, "{depth_m} m");
    }
    for depth_m in [-0.001, 14.001, f64::NAN, f64::INFINITY] {
        let refused = profile.effective_stress_kpa(depth_m).unwrap_err();
        assert!(matches!(refused, GroundError::OutsideProfile { .. }), "{refused}");
    }
}

#[test]
fn strength_is_none_where_nothing_is_known() {
    let mut site = crust_over_soft_clay();
    site.layers[1].drained = true;
    site.layers[2].undrained_strength_kpa = 0.0;
    site.layers[2].undrained_strength_gradient_kpa_per_m = 0.0;
    let profile = Profile::new(&site).unwrap();
    assert_eq!(profile.undrained_strength_kpa(1.0).unwrap(), Some(21.5));
    assert_eq!(profile.undrained_strength_kpa(3.0).unwrap(), None, "drained");
    assert_eq!(profile.undrained_strength_kpa(6.0).unwrap(), None, "not given");
}

#[test]
fn the_sheet_ends_in_the_value_and_shows_each_layer() {
    let site = crust_over_soft_clay();
    let profile = Profile::new(&site).unwrap();
    let mut sheet = Sheet::default();
    let value = profile.preconsolidation_kpa_with(6.0, &mut sheet).unwrap();
    assert_eq!(sheet.0.last().unwrap(), &("preconsolidation pressure".to_owned(), value));
    let totals: Vec<f64> =
        sheet.0.iter().filter(|(name, _)| name.starts_with("total")).map(|step| step.1).collect();
    assert_eq!(totals.len(), 3, "one line a layer");
    assert_close(totals[0], 37.0, "crust");
    assert_close(totals[2], 37.0 + 49.5 + 16.0, "1 m into the third layer");
    let mut sheet = Sheet::default();
    profile.undrained_strength_kpa_with(6.0, &mut sheet).unwrap();
    assert_eq!(sheet.0.len(), 1);
}

/// What each spoilt profile must be refused for, and a word its message must hold.
#[test]
fn contradictions_are_refused_with_what_to_check() {
    type Spoil = fn(&mut Ground);
    let cases: [(Spoil, &str); 14] = [
        (|g| g.layers.clear(), "no layer"),
        (|g| g.layers[1].thickness_m = -1.0, "layer thickness (item 2)"),
        (|g| g.layers[0].cv_m2_per_s = f64::NAN, "coefficient of consolidation"),
        (|g| g.layers[2].unit_weight_below_water_kn_m3 = 9.5, "buoyant"),
        (|g| g.layers[2].unit_weight_above_water_kn_m3 = 19.0, "layer 3 weighs"),
        (
            |g| {
                g.layers[3].compressibility =
                    Compressibility::Ratio { compression_ratio: 0.02, recompression_ratio: 0.2 }
            },
            "exchanged",
        ),
        (|g| g.layers[3].preconsolidation = Preconsolidation::Ocr(0.9), "normally consolidated"),
        (|g| g.layers[3].preconsolidation = Preconsolidation::ValueKpa(70.0), "layer 4"),
        (|g| g.layers[1].undrained_strength_gradient_kpa_per_m = -9.0, "falls to -7 kPa"),
        (|g| g.water = GroundWater::Hydrostatic { water_table_m: f64::NAN }, "water table"),
        (
            |g| g.water = GroundWater::Profile { water_table_m: 1.0, points: heapless::Vec::new() },
            "no point",
        ),
        (
            |g| {
                let points = [(3.0, 20.0), (3.0, 21.0)].into_iter().collect();
                g.water = GroundWater::Profile { water_table_m: 1.0, points };
            },
            "rising depth",
        ),
        (
            |g| {
                let points = [(3.0, 20.0), (9.0, 160.0)].into_iter().collect();
                g.water = GroundWater::Profile { water_table_m: 1.0, points };
            },
            "no effective stress",
        ),
        (|g| g.water_unit_weight_kn_m3 = 1000.0, "Fresh water is 9.81"),
    ];
    for (spoil, word) in cases {
        let mut site = crust_over_soft_clay();
        site.check().expect("sound before it is spoilt");
        spoil(&mut site);
        let message = site.check().expect_err(word).to_string();
        assert!(message.contains(word), "{message:?} should mention {word:?}");
    }
}

proptest! {
    #[test]
    fn stress_grows_downwards_and_a_cut_through_a_layer_changes_nothing(
        cut_m in 0.1..3.9_f64,
        depth_m in 0.0..14.0_f64,
        water_table_m in -3.0..20.0_f64,
    ) {
        let site = Ground {
            water: GroundWater::Hydrostatic { water_table_m },
            ..crust_over_soft_clay()
        };
        let mut layers: Vec<Layer> = site.layers.iter().cloned().collect();
        let mut lower = layers[2].clone();
        lower.thickness_m -= cut_m;
        layers[2].thickness_m = cut_m;
        layers.insert(3, lower);
        let cut = Ground { layers: layers.into_iter().collect(), ..site.clone() };
        let (whole, cut) = (Profile::new(&site).unwrap(), Profile::new(&cut).unwrap());
        let here = whole.in_situ(depth_m).unwrap();
        let there = cut.in_situ(depth_m).unwrap();
        prop_assert!((here.effective_kpa - there.effective_kpa).abs() < 1e-10);
        prop_assert!(here.preconsolidation_kpa >= here.effective_kpa);
        let below = whole.in_situ((depth_m + 0.5).min(14.0)).unwrap();
        prop_assert!(below.effective_kpa >= here.effective_kpa - 1e-10);
        prop_assert!((here.total_kpa - here.pore_kpa - here.effective_kpa).abs() < 1e-10);
    }
}
