//! Every quantity of the batch against the reference tables, at full size: the tables are
//! dimensionless or in their own units, the requests in those of a tank. Tolerances are those of
//! the core's own tests, as shares of the largest value.

mod program;

use program::eval;
use serde_json::{Value, json};
use std::collections::HashMap;
use std::path::Path;

/// A power of two, so that depths of interfaces are the same number however they are added up.
const RADIUS_M: f64 = 16.0;
const PRESSURE_KPA: f64 = 135.0;
const YOUNG_KPA: f64 = 8_200.0;
const DAYS_A_YEAR: f64 = 365.25;
/// Closed forms, printed to 15 digits or more.
const CLOSED: f64 = 1e-11;

type Row = HashMap<String, String>;

fn table(name: &str) -> Vec<Row> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../tests/reference").join(name);
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_path(&path).expect(name);
    let headings = reader.headers().expect("headings").clone();
    let rows: Vec<Row> = reader
        .records()
        .map(|record| {
            let record = record.expect("a readable row");
            headings.iter().zip(&record).map(|(h, c)| (h.to_owned(), c.to_owned())).collect()
        })
        .collect();
    assert!(!rows.is_empty(), "{name} holds no rows");
    rows
}

fn number(row: &Row, column: &str) -> f64 {
    let cell = row.get(column).unwrap_or_else(|| panic!("no column {column}"));
    cell.parse().unwrap_or_else(|_| panic!("{column} holds {cell:?}"))
}

struct Expected {
    pointer: String,
    value: f64,
    tolerance: f64,
}

/// Requests with what is known of their answers.
#[derive(Default)]
struct Batch {
    lines: Vec<String>,
    expected: Vec<Vec<Expected>>,
}

impl Batch {
    fn ask(&mut self, quantity: &str, input: &Value) {
        let id = self.lines.len();
        self.lines.push(json!({"id": id, "quantity": quantity, "input": input}).to_string());
        self.expected.push(Vec::new());
    }

    /// What the last request should give at a place of its result, to an absolute tolerance.
    fn expect(&mut self, pointer: impl Into<String>, value: f64, tolerance: f64) {
        let pointer = pointer.into();
        self.expected.last_mut().expect("a request").push(Expected { pointer, value, tolerance });
    }

    fn check(self) {
        let ran = eval(&self.lines);
        let answers = ran.lines();
        assert_eq!(answers.len(), self.lines.len(), "{}", ran.err);
        for ((answer, expected), line) in answers.iter().zip(&self.expected).zip(&self.lines) {
            assert!(answer["error"].is_null(), "{answer} to {line}");
            for one in expected {
                let found = answer["result"].pointer(&one.pointer).and_then(Value::as_f64);
                let found = found.unwrap_or_else(|| panic!("no {} in {answer}", one.pointer));
                let difference = (found - one.value).abs();
                assert!(
                    difference <= one.tolerance,
                    "{}: {found} for {}, off by {difference:e}: {line}",
                    one.pointer,
                    one.value
                );
            }
        }
        assert_eq!(ran.status, 0);
    }
}

/// Stresses are infinite or jump on the edge of the load at the surface.
fn on_the_edge(row: &Row) -> bool {
    number(row, "r/R") == 1.0 && number(row, "z/R") == 0.0
}

fn point(row: &Row) -> Value {
    json!([[RADIUS_M * number(row, "r/R"), RADIUS_M * number(row, "z/R")]])
}

const STRESSES: [&str; 4] = ["sigma_z", "sigma_r", "sigma_theta", "tau_rz"];

fn expect_stresses(batch: &mut Batch, row: &Row, over: &str, unit_kpa: f64, tolerance: f64) {
    for name in STRESSES {
        let value = number(row, &format!("{name}{over}"));
        // Close to an edge stresses are large and depend on the last digit of r.
        let tolerance = tolerance * value.abs().max(1.0);
        batch.expect(format!("/{name}_kpa/0"), unit_kpa * value, unit_kpa * tolerance);
    }
}

fn expect_moved(batch: &mut Batch, row: &Row, over: &str, unit_m: f64, tolerance: f64) {
    for (name, key) in [("u_z", "settlement_m"), ("u_r", "radial_m")] {
        let value = number(row, &format!("{name}*{over}"));
        let tolerance = tolerance * value.abs().max(1.0);
        batch.expect(format!("/{key}/0"), unit_m * value, unit_m * tolerance);
    }
}

#[test]
fn disc_and_ring_on_a_half_space() {
    let mut batch = Batch::default();
    for row in table("elastic/table1_uniform_circle.csv") {
        let mut input = json!({
            "radius_m": RADIUS_M, "pressure_kpa": PRESSURE_KPA, "poisson": number(&row, "nu"),
            "points": point(&row),
        });
        batch.ask("disc_stress", &input);
        if on_the_edge(&row) {
            batch.expect("/sigma_z_kpa/0", 0.5 * PRESSURE_KPA, 0.0);
        } else {
            expect_stresses(&mut batch, &row, "/q", PRESSURE_KPA, CLOSED);
        }
        input["young_kpa"] = YOUNG_KPA.into();
        batch.ask("disc_displacement", &input);
        let unit_m = PRESSURE_KPA * RADIUS_M / YOUNG_KPA;
        expect_moved(&mut batch, &row, "E/(q*R)", unit_m, CLOSED);
    }
    for row in table("elastic/table2_ring_load.csv").iter().filter(|row| !on_the_edge(row)) {
        let load = 62.0;
        let mut input = json!({
            "radius_m": RADIUS_M, "line_load_kn_per_m": load, "poisson": number(row, "nu"),
            "points": point(row),
        });
        batch.ask("ring_stress", &input);
        expect_stresses(&mut batch, row, "*R/p", load / RADIUS_M, CLOSED);
        input["young_kpa"] = YOUNG_KPA.into();
        batch.ask("ring_displacement", &input);
        expect_moved(&mut batch, row, "E/p", load / YOUNG_KPA, CLOSED);
    }
    batch.check();
}

#[test]
fn rigid_plate_and_westergaards_material() {
    let mut batch = Batch::default();
    for row in table("elastic/table3_rigid_footing.csv").iter().filter(|row| !on_the_edge(row)) {
        let input = json!({
            "radius_m": RADIUS_M, "mean_pressure_kpa": PRESSURE_KPA, "points": point(row),
        });
        batch.ask("rigid_disc_stress", &input);
        let value = number(row, "sigma_z/q");
        let tolerance = CLOSED * value.abs().max(1.0);
        batch.expect("/sigma_z_kpa/0", PRESSURE_KPA * value, PRESSURE_KPA * tolerance);
        if number(row, "z/R") == 0.0 && number(row, "r/R") < 1.0 {
            let input = json!({
                "radius_m": RADIUS_M, "mean_pressure_kpa": PRESSURE_KPA, "young_kpa": YOUNG_KPA,
                "poisson": number(row, "nu"),
            });
            batch.ask("rigid_disc_settlement", &input);
            let unit_m = PRESSURE_KPA * RADIUS_M / YOUNG_KPA;
            batch.expect("/settlement_m", unit_m * number(row, "u_z*E/(q*R)"), unit_m * CLOSED);
        }
    }
    for row in table("elastic/table4_westergaard.csv") {
        let input = json!({
            "radius_m": RADIUS_M, "pressure_kpa": PRESSURE_KPA, "poisson": number(&row, "nu"),
            "points": point(&row),
        });
        batch.ask("westergaard_disc_stress", &input);
        let value = PRESSURE_KPA * number(&row, "sigma_z/q");
        batch.expect("/sigma_z_kpa/0", value, PRESSURE_KPA * CLOSED);
    }
    batch.check();
}

/// "h/R : E : nu | ..." in terms of the table's first modulus.
fn layers(text: &str) -> Vec<[f64; 3]> {
    let parts = text.split('|').map(|layer| {
        let numbers: Vec<f64> =
            layer.split(':').map(|part| part.trim().parse().expect("a number")).collect();
        [numbers[0], numbers[1], numbers[2]]
    });
    parts.collect()
}

fn base(text: &str) -> Value {
    match text.split_once(':') {
        None => json!({"kind": format!("rigid_{text}")}),
        Some((kind, rest)) => {
            assert_eq!(kind.trim(), "half");
            let (young, poisson) = rest.split_once(':').expect("modulus and ratio");
            let part = |text: &str| text.trim().parse::<f64>().expect("a number");
            json!({
                "kind": "half_space", "young_kpa": YOUNG_KPA * part(young),
                "poisson": part(poisson),
            })
        }
    }
}

/// The bound of the layered integral is 1e-9 of the largest stress; under a modulus ratio of
/// thousands the crust carries many times the pressure.
#[test]
fn layered_ground() {
    let cases = table("elastic/table5_cases.csv");
    let mut batch = Batch::default();
    for row in table("elastic/table5_layered.csv") {
        let case = cases.iter().find(|case| case["case"] == row["case"]).expect("a case");
        let above = layers(&case["layers (h/R : E : nu, top down)"]);
        let within = number(&row, "layer(1=top; interface depths appear once per side)") as usize;
        let top: f64 = above.iter().take(within - 1).map(|layer| layer[0]).sum();
        // The lower side of an interface is not what is answered there; the edge has no shear.
        if (within > 1 && (number(&row, "z/R") - top).abs() < 1e-9) || on_the_edge(&row) {
            continue;
        }
        let listed: Vec<Value> = above
            .iter()
            .map(|[h, e, nu]| {
                json!({"thickness_m": RADIUS_M * h, "young_kpa": YOUNG_KPA * e, "poisson": nu})
            })
            .collect();
        batch.ask(
            "layered_response",
            &json!({
                "radius_m": RADIUS_M, "pressure_kpa": PRESSURE_KPA, "layers": listed,
                "base": base(&case["base"]), "points": point(&row),
            }),
        );
        expect_stresses(&mut batch, &row, "/q", PRESSURE_KPA, 1e-9);
        let unit_m = PRESSURE_KPA * RADIUS_M / (YOUNG_KPA * above[0][1]);
        expect_moved(&mut batch, &row, "E1/(q*R)", unit_m, 1e-9);
    }
    // Moduli that grow with depth; the table is printed to ten digits.
    for row in table("elastic/table7_gibson.csv") {
        let growth = number(&row, "k*R/E0") * YOUNG_KPA / RADIUS_M;
        let layer = json!({
            "thickness_m": RADIUS_M * number(&row, "H/R"), "young_kpa": YOUNG_KPA,
            "poisson": number(&row, "nu"), "young_gradient_kpa_per_m": growth,
        });
        batch.ask(
            "layered_response",
            &json!({
                "radius_m": RADIUS_M, "pressure_kpa": PRESSURE_KPA, "layers": [layer],
                "base": {"kind": "rigid_rough"}, "points": [[0.0, 0.0], [RADIUS_M, 0.0]],
            }),
        );
        let unit_m = PRESSURE_KPA * RADIUS_M / YOUNG_KPA;
        for (index, place) in ["centre", "edge"].into_iter().enumerate() {
            let value = unit_m * number(&row, &format!("u_z*E0/(q*R) {place}"));
            batch.expect(format!("/settlement_m/{index}"), value, 1e-6 * value.abs());
        }
    }
    batch.check();
}

#[test]
fn two_tanks_and_undrained_pore_pressure() {
    let mut batch = Batch::default();
    for row in table("elastic/table6_two_tanks.csv") {
        let at = |axis: &str| RADIUS_M * number(&row, axis);
        let disc = |x: f64, radius: f64, times: f64| {
            json!({
                "x_m": RADIUS_M * x, "y_m": 0.0, "radius_m": RADIUS_M * radius,
                "pressure_kpa": PRESSURE_KPA * times,
            })
        };
        batch.ask(
            "site_stress",
            &json!({
                "discs": [disc(0.0, 1.0, 1.0), disc(2.2, 0.6, 1.5)], "rings": [],
                "poisson": number(&row, "nu"), "points": [[at("x"), at("y"), at("z")]],
            }),
        );
        for name in ["sigma_z", "sigma_1", "sigma_2", "sigma_3"] {
            let value = PRESSURE_KPA * number(&row, name);
            batch.expect(format!("/{name}_kpa/0"), value, PRESSURE_KPA * CLOSED);
        }
    }
    for row in table("elastic/table8_pore_pressure.csv") {
        let sigma = |index: u8| PRESSURE_KPA * number(&row, &format!("dsigma_{index}/q"));
        for (a, written) in [(0.0, "0"), (0.5, "0.5"), (0.8, "0.8"), (1.0, "1")] {
            for (kind, coefficient, column) in [
                ("skempton", a, format!("du_Skempton/(B*q) A={written}")),
                (
                    "henkel",
                    (3.0 * a - 1.0) / 2.0_f64.sqrt(),
                    format!("du_Henkel/(B*q) a=(3A-1)/sqrt(2) A={written}"),
                ),
            ] {
                batch.ask(
                    "undrained_pore_pressure",
                    &json!({
                        "sigma_1_kpa": sigma(1), "sigma_2_kpa": sigma(2), "sigma_3_kpa": sigma(3),
                        "method": {"kind": kind, "a": coefficient, "b": 0.96},
                    }),
                );
                let value = 0.96 * PRESSURE_KPA * number(&row, &column);
                batch.expect("/excess_pore_pressure_kpa", value, PRESSURE_KPA * CLOSED);
            }
        }
    }
    batch.check();
}

#[test]
fn terzaghi_and_drains() {
    let mut batch = Batch::default();
    for row in table("time/t01_U_Tv.csv") {
        let initial = match row["shape"].as_str() {
            "uniform" => "uniform",
            "lin_base" => "triangle_zero_at_drain",
            "lin_top" => "triangle_zero_at_base",
            "sin_half" => "half_sine",
            other => panic!("unknown shape {other}"),
        };
        batch.ask(
            "terzaghi",
            &json!({
                "time_factor": [0.3, number(&row, "Tv")], "initial": initial,
                "drainage": row["drainage"],
            }),
        );
        batch.expect("/degree_of_consolidation/1", number(&row, "U"), 1e-12);
    }
    for row in table("time/t04_Uh.csv") {
        batch.ask(
            "drain_consolidation",
            &json!({
                "equivalent_spacing_ratio_n": number(&row, "n"), "smear_ratio": number(&row, "s"),
                "permeability_ratio_h_over_s": number(&row, "kh_over_ks"),
                "well_resistance_term": 0.0, "time_factor_h": [number(&row, "Th")],
            }),
        );
        batch.expect("/degree_of_consolidation/0", number(&row, "U_h_exact_mu"), 1e-12);
    }
    batch.check();
}

fn column(rows: &[Row], name: &str) -> Vec<f64> {
    rows.iter().map(|row| number(row, name)).collect()
}

#[test]
fn layers_consolidating_with_and_without_drains() {
    let mut batch = Batch::default();
    let rows = table("time/t03_A_U.csv");
    let listed: Vec<Value> = table("time/t03_layers.csv")
        .iter()
        .filter(|row| row["case"] == "A")
        .map(|row| {
            json!({
                "thickness_m": number(row, "h_m"),
                "cv_m2_per_year": DAYS_A_YEAR * number(row, "cv_m2_day"),
                "mv_per_kpa": number(row, "mv_per_kPa"),
            })
        })
        .collect();
    let points = table("time/t03_A_isochrones.csv");
    let days = column(&rows, "t_day");
    let mut depths = column(&points, "z_m");
    depths.truncate(points.iter().filter(|row| number(row, "t_day") == days[0]).count());
    batch.ask(
        "consolidation",
        &json!({
            "layers": listed, "top": "drained", "base": "drained", "load_kpa": [[0.0, 100.0]],
            "at_days": days, "at_depths_m": depths,
        }),
    );
    for (index, row) in rows.iter().enumerate() {
        let pointer = format!("/degree_of_consolidation/{index}");
        batch.expect(pointer, number(row, "U_eigen"), 1e-7);
    }
    for (index, row) in points.iter().enumerate() {
        let (time, depth) = (index / depths.len(), index % depths.len());
        let pointer = format!("/excess_pore_pressure_kpa/{time}/{depth}");
        batch.expect(pointer, 100.0 * number(row, "u_eigen"), 2e-4);
    }
    // The numbers in the head of the table: band drains in triangles of 1.5 m.
    let rows = table("time/t04_combined.csv");
    batch.ask(
        "consolidation",
        &json!({
            "layers": [{
                "thickness_m": 8.0, "cv_m2_per_year": DAYS_A_YEAR * 0.008, "mv_per_kpa": 5e-4,
                "ch_m2_per_year": DAYS_A_YEAR * 0.016,
            }],
            "top": "drained", "base": "closed", "load_kpa": [[0.0, 0.0], [60.0, 40.0]],
            "drains": {
                "spacing_m": 1.5, "pattern": "triangular", "equivalent_diameter_m": 0.0662,
                "smear_ratio": 2.0, "permeability_ratio_h_over_s": 3.0,
                "well_resistance": null, "top_m": 0.0, "base_m": 8.0, "length_m": 8.0,
            },
            "at_days": column(&rows, "t_day"), "at_depths_m": [],
        }),
    );
    for (index, row) in rows.iter().enumerate() {
        let pointer = format!("/degree_of_consolidation/{index}");
        batch.expect(pointer, number(row, "U_ramp_exact_of_carrillo"), 1e-6);
        let pointer = format!("/settlement_m/{index}");
        let settled_m = 8.0 * 5e-4 * 40.0 * number(row, "U_ramp_exact_of_carrillo");
        batch.expect(pointer, settled_m, 2e-7);
    }
    batch.check();
}

#[test]
fn primary_settlement_and_sand() {
    let mut batch = Batch::default();
    // The profile in the head of the table.
    let layer = |thickness: f64, weight: f64, e0: f64, cc: f64, cr: f64, history: Value| {
        json!({
            "thickness_m": thickness, "unit_weight_kn_m3": weight, "void_ratio": e0, "cc": cc,
            "cr": cr, "preconsolidation": history,
        })
    };
    let listed = [
        layer(2.0, 18.5, 0.90, 0.25, 0.040, json!({"pop_kpa": 80.0})),
        layer(3.0, 16.5, 1.60, 0.70, 0.080, json!({"ocr": 1.6})),
        layer(4.0, 16.0, 1.85, 0.85, 0.090, json!({"ocr": 1.15})),
        layer(5.0, 17.0, 1.40, 0.60, 0.070, json!({"ocr": 1.0})),
    ];
    let rows = table("time/t05_oc_nc_sublayers.csv");
    for (location, r_m) in [("centre", 0.0), ("edge", 18.0)] {
        let here: Vec<&Row> = rows.iter().filter(|row| row["location"] == location).collect();
        let from_disc = json!({"disc": {"radius_m": 18.0, "pressure_kpa": 150.0}, "r_m": r_m});
        let values: Vec<[f64; 2]> =
            here.iter().map(|row| [number(row, "z_mid_m"), number(row, "dsig_kPa")]).collect();
        for increment in [from_disc, json!({"values": values})] {
            batch.ask(
                "primary_settlement",
                &json!({
                    "layers": listed, "water_table_m": 1.0, "unit_weight_water_kn_m3": 9.81,
                    "sublayer_m": 0.5, "increment": increment,
                }),
            );
            let mut total_m = 0.0;
            for index in 1..=4 {
                let mm: f64 = here
                    .iter()
                    .filter(|row| row["layer"] == index.to_string())
                    .map(|row| number(row, "settlement_mm"))
                    .sum();
                total_m += 1e-3 * mm;
                batch.expect(format!("/by_layer_m/{}", index - 1), 1e-3 * mm, 1e-12);
            }
            batch.expect("/settlement_m", total_m, 1e-12);
        }
    }
    // The case of tests/oracle/settlement_sand.py by that name; slices of 0.02 mm.
    let rows = table("time/settlement_sand.csv");
    let row = rows.iter().find(|row| row["case"] == "deep level, long before a month").unwrap();
    batch.ask(
        "schmertmann",
        &json!({
            "diameter_m": 5.0, "embedment_m": 3.0, "net_pressure_kpa": 60.0,
            "overburden_kpa": 90.0, "effective_overburden_at_peak_kpa": 115.0, "time_years": 0.05,
            "layers": [
                {"top_m": 0.0, "base_m": 2.0, "modulus_kpa": 8000.0},
                {"top_m": 2.0, "base_m": 10.0, "modulus_kpa": 14000.0},
            ],
        }),
    );
    batch.expect("/settlement_m", number(row, "settlement_m"), 1e-9);
    for name in ["c1", "c2", "peak_influence"] {
        batch.expect(format!("/{name}"), number(row, name), 1e-13);
    }
    batch.check();
}

#[test]
fn edges_and_strength() {
    let mut batch = Batch::default();
    let profiles = table("time/t06_slip_profiles.csv");
    for row in table("time/t06_slip_circle.csv") {
        let listed: Vec<Value> = profiles
            .iter()
            .filter(|slice| slice["profile"] == row["profile"])
            .map(|slice| {
                let thickness = number(slice, "z_bot_m") - number(slice, "z_top_m");
                let (top, base) = (number(slice, "su_top_kPa"), number(slice, "su_bot_kPa"));
                json!({
                    "thickness_m": thickness, "undrained_strength_kpa": top,
                    "gradient_kpa_per_m": (base - top) / thickness,
                })
            })
            .collect();
        batch.ask(
            "edge_stability",
            &json!({
                "diameter_m": number(&row, "tank_diameter_m"), "pressure_kpa": number(&row, "q_kPa"),
                "layers": listed,
            }),
        );
        let factor = number(&row, "FS_min");
        batch.expect("/factor_of_safety", factor, 1e-10 * factor);
        // The factor is flat about its least value: the circle is known to the square root of it.
        batch.expect("/circle/x_m", number(&row, "xc_m"), 2e-5);
        batch.expect("/circle/z_m", -number(&row, "centre_height_m"), 2e-4);
        batch.expect("/circle/radius_m", number(&row, "R_m"), 2e-4);
    }
    // Known to 1e-4 (see the core's `bearing`); rows that did not converge are empty.
    for row in table("time/t06_circular_bearing.csv") {
        for base in ["smooth", "rough"] {
            let Ok(factor) = row[&format!("Nc_{base}_extrapolated")].parse::<f64>() else {
                continue;
            };
            let (diameter, strength) = (32.0, 15.0);
            batch.ask(
                "circular_bearing",
                &json!({
                    "diameter_m": diameter, "undrained_strength_kpa": strength, "base": base,
                    "gradient_kpa_per_m": number(&row, "kB_over_su0") * strength / diameter,
                }),
            );
            batch.expect("/factor", factor, 1e-4 * factor);
            batch.expect("/ultimate_kpa", strength * factor, 1e-4 * strength * factor);
        }
    }
    for row in table("time/t06_shansep.csv") {
        batch.ask(
            "strength_gain",
            &json!({
                "effective_stress_kpa": number(&row, "sv_kPa"),
                "preconsolidation_kpa": number(&row, "sp_kPa"), "ratio": number(&row, "S"),
                "exponent": number(&row, "m"),
            }),
        );
        batch.expect("/undrained_strength_kpa", number(&row, "su_kPa"), 1e-12);
    }
    batch.check();
}

/// Diameter 40 m; steel as in the head of `t07_points.csv`.
#[test]
fn perimeter_survey() {
    let mut batch = Batch::default();
    let (readings, points, summary) = (
        table("time/t07_readings.csv"),
        table("time/t07_points.csv"),
        table("time/t07_summary.csv"),
    );
    for set in ["S1_even16", "S2_even24_dip"] {
        let here: Vec<Value> = readings
            .iter()
            .filter(|row| row["set"] == set)
            .map(|row| {
                json!({"angle_deg": number(row, "theta_deg"), "settlement_mm": number(row, "s_mm")})
            })
            .collect();
        batch.ask(
            "perimeter_fit",
            &json!({
                "diameter_m": 40.0, "height_m": 18.0, "yield_mpa": 250.0, "young_mpa": 200_000.0,
                "survey_sd_mm": 1.0, "points": here,
            }),
        );
        for (pointer, quantity) in [
            ("/uniform_mm", "mean_A_mm"),
            ("/tilt_across_diameter_mm", "tilt_across_diameter_mm"),
            ("/tilt_azimuth_deg", "azimuth_deg"),
            ("/r_squared", "R2"),
        ] {
            let known = summary.iter().find(|row| row["set"] == set && row["quantity"] == quantity);
            let value = number(known.expect(quantity), "value");
            batch.expect(pointer, value, 1e-12 * value.abs().max(10.0));
        }
        for row in points.iter().filter(|row| row["set"] == set) {
            let index = number(row, "i");
            for (key, name) in [
                ("residual_mm", "residual_U_mm"),
                ("out_of_plane_mm", "second_difference_mm"),
                ("permitted_mm", "permissible_S_mm"),
            ] {
                batch.expect(format!("/{key}/{index}"), number(row, name), 1e-11);
            }
        }
    }
    // Even points: w'w is 1.5; of it the plane takes (1 - cos 22.5)^2 times 2/16 by its tilt.
    let taken = 1.0 - 22.5_f64.to_radians().cos();
    batch.expected[0].push(Expected {
        pointer: "/noise_mm/3".to_owned(),
        value: (1.5 - taken * taken / 8.0).sqrt(),
        tolerance: 1e-12,
    });
    batch.check();
}

#[test]
fn forecasts() {
    let mut batch = Batch::default();
    let (data, answers) = (table("time/t08_data.csv"), table("time/t08_answers.csv"));
    let known = |set: &str, quantity: &str| {
        let row = answers.iter().find(|row| row["set"] == set && row["quantity"] == quantity);
        number(row.unwrap_or_else(|| panic!("{set} {quantity}")), "value")
    };
    let series = |set: &str| {
        let rows: Vec<Row> = data.iter().filter(|row| row["set"] == set).cloned().collect();
        let settled: Vec<f64> = column(&rows, "s").iter().map(|mm| 1e-3 * mm).collect();
        (column(&rows, "t_day"), settled)
    };
    let expect = |batch: &mut Batch, pointer: &str, value: f64, relative: f64| {
        batch.expect(pointer, value, relative * value.abs());
    };
    // The scatter of the exact set is lost in its printed digits.
    for (set, tolerance) in
        [("A3_exact_terzaghi_U_ge_60", 1e-9), ("A4_terzaghi_noise2mm_all", 1e-12)]
    {
        let (day, settled) = series(set);
        let step = day[1] - day[0];
        batch.ask("asaoka", &json!({"day": day, "settlement_m": settled, "step_days": step}));
        expect(&mut batch, "/slope", known(set, "beta1"), tolerance);
        for (pointer, quantity) in [
            ("/intercept_m", "beta0"),
            ("/ultimate_m", "S_ult"),
            ("/interval_95_m/0", "S_ult_lo95_fieller"),
            ("/interval_95_m/1", "S_ult_hi95_fieller"),
        ] {
            expect(&mut batch, pointer, 1e-3 * known(set, quantity), tolerance);
        }
    }
    for set in ["H1_exact_hyperbola", "H2_hyperbola_noise3mm"] {
        let (day, settled) = series(set);
        batch.ask("hyperbolic", &json!({"day": day, "settlement_m": settled}));
        expect(&mut batch, "/ultimate_m", 1e-3 * known(set, "S_ult"), 1e-12);
    }
    for (end, quantity) in ["S_ult_lo95", "S_ult_hi95"].into_iter().enumerate() {
        let value = 1e-3 * known("H2_hyperbola_noise3mm", quantity);
        expect(&mut batch, &format!("/interval_95_m/{end}"), value, 1e-12);
    }
    batch.check();
}

/// Gauge constants as in the head of the table.
#[test]
fn vibrating_wire() {
    let mut batch = Batch::default();
    for row in table("time/t10_vibrating_wire.csv") {
        for (key, conversion, column) in [
            ("linear", json!({"factor_kpa_per_digit": 0.07021}), "P_linear_kPa"),
            (
                "polynomial",
                json!({"a": -4.812e-9, "b": -0.07012, "c": 640.133341689419}),
                "P_polynomial_kPa",
            ),
        ] {
            let mut input = json!({
                "digits": number(&row, "digits"), "digits_zero": 9123.4,
                "temperature_c": number(&row, "T_C"), "temperature_zero_c": 21.3,
                "temperature_factor_kpa_per_c": -0.0453, "barometer_kpa": number(&row, "baro_kPa"),
                "barometer_zero_kpa": 99.87, "apply_temperature": true, "apply_barometer": true,
            });
            input[key] = conversion;
            batch.ask("wire_pressure", &input);
            batch.expect("/pressure_kpa", number(&row, column), 1e-9);
        }
    }
    batch.check();
}
