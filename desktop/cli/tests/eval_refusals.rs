//! What the batch refuses, where it lays the refusal, and what it gives back whatever happens.

mod program;

use program::{eval, run, run_with_input, text};
use serde_json::{Value, json};

/// Answers to requests of these quantities and inputs, written as JSON text.
fn refusals(cases: &[(&str, &str)]) -> Vec<Value> {
    let lines: Vec<String> = cases
        .iter()
        .map(|(quantity, input)| format!(r#"{{"id":7,"quantity":"{quantity}","input":{input}}}"#))
        .collect();
    let ran = eval(&lines);
    assert_eq!(ran.status, 1);
    let answers = ran.lines();
    assert_eq!(answers.len(), cases.len());
    answers
}

/// Each case: quantity, input, the field that the refusal is laid at, words it must hold.
fn assert_refused(cases: &[(&str, &str, &str, &str)]) {
    let asked: Vec<(&str, &str)> = cases.iter().map(|case| (case.0, case.1)).collect();
    for (answer, (quantity, input, field, words)) in refusals(&asked).iter().zip(cases) {
        let what = format!("{quantity} {input} gave {answer}");
        assert!(answer.get("result").is_none(), "no result beside an error: {what}");
        assert_eq!(answer["error"]["field"], *field, "{what}");
        let message = answer["error"]["message"].as_str().expect("a message");
        assert!(message.contains(words), "no \"{words}\": {what}");
        assert_eq!(answer["id"], 7, "{what}");
    }
}

#[test]
fn values_that_cannot_be_are_laid_at_their_key() {
    let disc = |radius: &str, poisson: &str, points: &str| {
        format!(
            r#"{{"radius_m":{radius},"pressure_kpa":100,"poisson":{poisson},"points":{points}}}"#
        )
    };
    let layered = |layer: &str, base: &str| {
        format!(
            r#"{{"radius_m":20,"pressure_kpa":100,"points":[[0,1],[0,30]],"base":{base},"layers":[
            {{"thickness_m":3,"young_kpa":9000,"poisson":0.3}},{layer}]}}"#
        )
        .replace('\n', "")
    };
    let half = r#"{"kind":"half_space","young_kpa":9000,"poisson":0.3}"#;
    let good = r#"{"thickness_m":5,"young_kpa":3000,"poisson":0.5}"#;
    let edge = |layer: &str, width: &str| {
        format!(
            r#"{{"diameter_m":30,"pressure_kpa":90,"layers":[{layer}],"smallest_width_m":{width}}}"#
        )
    };
    let slice = r#"{"thickness_m":9,"undrained_strength_kpa":20,"gradient_kpa_per_m":1}"#;
    let perimeter = |angle: &str, survey: &str| {
        format!(
            r#"{{"diameter_m":30,"height_m":15,"yield_mpa":250,"young_mpa":2e5,
            "survey_sd_mm":{survey},"points":[{{"angle_deg":0,"settlement_mm":3}},
            {{"angle_deg":90,"settlement_mm":4}},{{"angle_deg":{angle},"settlement_mm":5}},
            {{"angle_deg":270,"settlement_mm":4}}]}}"#
        )
        .replace('\n', "")
    };
    let cases = [
        ("disc_stress", disc("-25", "0.3", "[]"), "radius_m", "-25 m; allowed is"),
        ("disc_stress", disc("25", "0.51", "[]"), "poisson", "0.51"),
        ("disc_stress", disc("25", "0.3", "[[0,1],[-1,0]]"), "points[1]", "never negative"),
        ("disc_stress", disc("25", "0.3", "[[0,-1]]"), "points[0]", "positive downwards"),
        (
            "layered_response",
            layered(r#"{"thickness_m":5,"young_kpa":-1,"poisson":0.5}"#, half),
            "layers[1].young_kpa",
            "Young's modulus is -1 kPa",
        ),
        (
            "layered_response",
            layered(r#"{"thickness_m":0,"young_kpa":1,"poisson":0.5}"#, half),
            "layers[1].thickness_m",
            "not the depth of its bottom",
        ),
        (
            "layered_response",
            layered(
                r#"{"thickness_m":5,"young_kpa":3000,"poisson":0.5,"young_gradient_kpa_per_m":-700}"#,
                half,
            ),
            "layers[1].young_gradient_kpa_per_m",
            "at the base of the layer",
        ),
        (
            "layered_response",
            layered(good, r#"{"kind":"half_space","young_kpa":9000}"#),
            "base.poisson",
            "missing",
        ),
        (
            "layered_response",
            layered(good, r#"{"kind":"half_space","young_kpa":0,"poisson":0}"#),
            "base.young_kpa",
            "Young's modulus is 0 kPa",
        ),
        (
            "layered_response",
            layered(good, r#"{"kind":"rigid_rough","young_kpa":9000}"#),
            "base.young_kpa",
            "leave it out",
        ),
        ("layered_response", layered(good, r#"{"kind":"rigid"}"#), "base.kind", "rigid_smooth"),
        ("layered_response", layered(good, r#"{"kind":"rigid_rough"}"#), "points[1]", "rigid base"),
        (
            "undrained_pore_pressure",
            r#"{"sigma_1_kpa":50,"sigma_2_kpa":60,"sigma_3_kpa":10,
            "method":{"kind":"henkel","a":0,"b":1}}"#
                .replace('\n', ""),
            "sigma_2_kpa",
            "from the largest",
        ),
        (
            "undrained_pore_pressure",
            r#"{"sigma_1_kpa":50,"sigma_2_kpa":20,"sigma_3_kpa":10,
            "method":{"kind":"skempton","a":0.5,"b":1.1}}"#
                .replace('\n', ""),
            "method.b",
            "1.1",
        ),
        ("edge_stability", edge(slice, "31"), "smallest_width_m", "at most the diameter"),
        ("edge_stability", edge("", "3"), "layers", "holds no slices"),
        (
            "edge_stability",
            edge(r#"{"thickness_m":9,"undrained_strength_kpa":20,"gradient_kpa_per_m":-3}"#, "3"),
            "layers[0].gradient_kpa_per_m",
            "at the base of the layer",
        ),
        (
            "circular_bearing",
            r#"{"diameter_m":30,"undrained_strength_kpa":20,"gradient_kpa_per_m":-1,"base":"rough"}"#
                .to_owned(),
            "gradient_kpa_per_m",
            "search a slip circle",
        ),
        (
            "circular_bearing",
            r#"{"diameter_m":30,"undrained_strength_kpa":20,"gradient_kpa_per_m":1,"base":"stiff"}"#
                .to_owned(),
            "base",
            "`rough` or `smooth`",
        ),
        (
            "strength_gain",
            r#"{"effective_stress_kpa":-1,"preconsolidation_kpa":80,"ratio":0.22,
            "exponent":0.8}"#
                .replace('\n', ""),
            "effective_stress_kpa",
            "-1 kPa",
        ),
        ("perimeter_fit", perimeter("80", "1"), "points[2].angle_deg", "growing angle"),
        ("perimeter_fit", perimeter("1800", "1"), "points[2].angle_deg", "1800 degrees"),
        ("perimeter_fit", perimeter("180", "-1"), "survey_sd_mm", "-1 mm"),
        (
            "asaoka",
            r#"{"day":[0,10,9],"settlement_m":[0,1,2],"step_days":1}"#.to_owned(),
            "day[2]",
            "order of time",
        ),
        (
            "asaoka",
            r#"{"day":[0,10],"settlement_m":[0],"step_days":1}"#.to_owned(),
            "settlement_m",
            "one for each day",
        ),
        (
            "asaoka",
            r#"{"day":[0,10,20],"settlement_m":[0,1,99],"step_days":5}"#.to_owned(),
            "settlement_m[2]",
            "not a level",
        ),
        (
            "asaoka",
            r#"{"day":[0,10,20],"settlement_m":[0,1,2],"step_days":0}"#.to_owned(),
            "step_days",
            "time step",
        ),
        ("asaoka", r#"{"day":[],"settlement_m":[],"step_days":5}"#.to_owned(), "day", "add"),
        (
            "hyperbolic",
            r#"{"day":[0,10,20],"settlement_m":[0,0.1,0.15]}"#.to_owned(),
            "day[0]",
            "leave that reading out",
        ),
    ];
    let cases: Vec<(&str, &str, &str, &str)> = cases
        .iter()
        .map(|(quantity, input, field, words)| (*quantity, input.as_str(), *field, *words))
        .collect();
    assert_refused(&cases);
}

/// Every kind of mistake in the form of a request, for two quantities deep enough to have paths.
#[test]
fn mistakes_of_form_are_laid_at_their_path() {
    assert_refused(&[
        (
            "strength_gain",
            r#"{"effective_stress_kpa":50,"preconsolidation_kpa":80,"ratio":0.22}"#,
            "exponent",
            "missing",
        ),
        (
            "strength_gain",
            r#"{"effective_stress_kpa":50,"preconsolidation_kpa":80,"ratio":0.22,"exponent":0.8,"m":1}"#,
            "m",
            "not known",
        ),
        (
            "strength_gain",
            r#"{"effective_stress_kpa":"50","preconsolidation_kpa":80,"ratio":0.22,"exponent":0.8}"#,
            "effective_stress_kpa",
            "string",
        ),
        (
            "strength_gain",
            r#"{"effective_stress_kpa":null,"preconsolidation_kpa":80,"ratio":0.22,"exponent":0.8}"#,
            "effective_stress_kpa",
            "null",
        ),
        (
            "strength_gain",
            r#"{"effective_stress_kpa":1e999,"preconsolidation_kpa":80,"ratio":0.22,"exponent":0.8}"#,
            "effective_stress_kpa",
            "out of range",
        ),
        (
            "edge_stability",
            r#"{"diameter_m":30,"pressure_kpa":90,"layers":[{"thickness_m":3,"undrained_strength_kpa":20,"gradient_kpa_per_m":1},{"thickness_m":3,"undrained_strength_kpa":20}]}"#,
            "layers[1].gradient_kpa_per_m",
            "missing",
        ),
        (
            "edge_stability",
            r#"{"diameter_m":30,"pressure_kpa":90,"layers":[{"thickness_m":3,"strength":20,"gradient_kpa_per_m":1}]}"#,
            "layers[0].strength",
            "not known",
        ),
        (
            "edge_stability",
            r#"{"diameter_m":30,"pressure_kpa":90,"layers":[{"thickness_m":[3],"undrained_strength_kpa":20,"gradient_kpa_per_m":1}]}"#,
            "layers[0].thickness_m",
            "sequence",
        ),
        (
            "edge_stability",
            r#"{"diameter_m":30,"pressure_kpa":90,"layers":[{"thickness_m":1e400,"undrained_strength_kpa":20,"gradient_kpa_per_m":1}]}"#,
            "layers[0].thickness_m",
            "out of range",
        ),
        (
            "disc_stress",
            r#"{"radius_m":5,"pressure_kpa":90,"poisson":0.3,"points":[[0,1],[0]]}"#,
            "points[1]",
            "length",
        ),
        (
            "disc_stress",
            r#"{"radius_m":5,"radius_m":6,"pressure_kpa":90,"poisson":0.3,"points":[]}"#,
            "radius_m",
            "given twice",
        ),
        ("disc_stress", "[5,90,0.3,[[0,1]]]", "", "object"),
        ("schmertmann_1970", "{}", "quantity", "not built or not known"),
    ]);
}

/// JSON has no NaN; what writes one has made a line that is no JSON at all.
#[test]
fn a_line_that_is_no_request_says_which_line_and_the_others_go_on() {
    let good = r#"{"id":"a","quantity":"strength_gain","input":{"effective_stress_kpa":100,"preconsolidation_kpa":50,"ratio":0.25,"exponent":0.8}}"#;
    let lines: Vec<String> = [
        good,
        "junk",
        "",
        r#"{"id":3,"quantity":"strength_gain","input":{"effective_stress_kpa":NaN}}"#,
        r#"{"id":4,"quantity":"strength_gain"}"#,
        r#"{"id":5,"quantity":"strength_gain","input":{},"units":"kPa"}"#,
        r#"{"id":6,"quantity":7,"input":{}}"#,
        good,
    ]
    .map(str::to_owned)
    .to_vec();
    let ran = eval(&lines);
    assert_eq!(ran.status, 1);
    let answers = ran.lines();
    assert_eq!(answers.len(), 7, "an empty line asks nothing: {}", ran.out);
    for answer in [&answers[0], &answers[6]] {
        assert_eq!(answer["result"]["undrained_strength_kpa"], 25.0);
        assert_eq!(answer["id"], "a");
    }
    for (answer, number) in answers[1..6].iter().zip([2, 4, 5, 6, 7]) {
        let message = answer["error"]["message"].as_str().expect("a message");
        assert!(message.starts_with(&format!("line {number}:")), "{message}");
    }
    assert_eq!(answers[3]["error"]["field"], "input");
    assert_eq!(answers[4]["error"]["field"], "units");
    assert_eq!([&answers[3]["id"], &answers[4]["id"], &answers[5]["id"]], [4, 5, 6]);
}

/// An id may be any JSON, with more digits than a number can hold, and comes back as it was
/// written.
#[test]
fn ids_come_back_as_they_were_written() {
    let ids = [
        "123456789012345678901234567890",
        "0.1000000000000000055511151231257827021181583404541015625",
        r#"{"b": [1, {"a": null}],  "a": "\u00e9"}"#,
        "null",
        "true",
        r#""""#,
        "1e5",
    ];
    let asked = r#""quantity":"strength_gain","input":"#;
    let good = r#"{"effective_stress_kpa":1,"preconsolidation_kpa":1,"ratio":0.2,"exponent":1}"#;
    for input in [good, "{}"] {
        let lines: Vec<String> =
            ids.iter().map(|id| format!(r#"{{"id":{id},{asked}{input}}}"#)).collect();
        let ran = eval(&lines);
        for (answer, id) in ran.out.lines().zip(ids) {
            assert!(answer.starts_with(&format!(r#"{{"id":{id},"#)), "{id} in {answer}");
        }
        assert_eq!(ran.out.lines().count(), ids.len());
    }
    let without = eval(&[format!(r#"{{{asked}{good}}}"#)]);
    assert!(without.out.starts_with(r#"{"id":null,"#), "{}", without.out);
}

#[test]
fn the_exit_status_tells_results_errors_and_unread_input_apart() {
    let good = r#"{"quantity":"strength_gain","input":{"effective_stress_kpa":1,"preconsolidation_kpa":1,"ratio":0.2,"exponent":1}}"#;
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("requests.jsonl");
    std::fs::write(&file, format!("{good}\n")).unwrap();
    let ran = run(&["eval", &text(&file)]);
    assert_eq!((ran.status, ran.lines().len()), (0, 1));
    std::fs::write(&file, format!("{good}\njunk\n")).unwrap();
    assert_eq!(run(&["eval", &text(&file)]).status, 1);
    assert_eq!(eval(&[]).status, 0, "an empty batch has no error");
    let missing = run(&["eval", &text(&folder.path().join("none.jsonl"))]);
    assert_eq!((missing.status, missing.out.as_str()), (2, ""));
    assert!(missing.err.contains("none.jsonl"), "{}", missing.err);
    let binary = run_with_input(&["eval", "-"], b"\xff\xfe\n");
    assert_eq!(binary.status, 2, "not text: {}", binary.err);
}

/// The last step of the working is the result, in the same digits.
#[test]
fn working_is_written_where_it_is_asked_for() {
    let ask = |quantity: &str, input: Value| {
        json!({"quantity": quantity, "input": input, "working": true}).to_string()
    };
    let layer = json!({"thickness_m": 4.0, "young_kpa": 5000.0, "poisson": 0.3});
    let slice =
        json!({"thickness_m": 9.0, "undrained_strength_kpa": 20.0, "gradient_kpa_per_m": 1.0});
    let day: Vec<f64> = (1..9).map(|step| f64::from(step) * 10.0).collect();
    let settled: Vec<f64> = day.iter().map(|day| day / (300.0 + 2.2 * day)).collect();
    let lines = [
        ask(
            "layered_response",
            json!({"radius_m": 10.0, "pressure_kpa": 80.0, "layers": [layer],
                "base": {"kind": "rigid_rough"}, "points": [[0.0, 1.0]]}),
        ),
        ask(
            "undrained_pore_pressure",
            json!({"sigma_1_kpa": 50.0, "sigma_2_kpa": 20.0, "sigma_3_kpa": 10.0,
                "method": {"kind": "skempton", "a": 0.5, "b": 1.0}}),
        ),
        ask("edge_stability", json!({"diameter_m": 30.0, "pressure_kpa": 90.0, "layers": [slice]})),
        ask(
            "strength_gain",
            json!({"effective_stress_kpa": 50.0, "preconsolidation_kpa": 80.0, "ratio": 0.22,
                "exponent": 0.8}),
        ),
        ask("asaoka", json!({"day": day, "settlement_m": settled, "step_days": 10.0})),
        ask("hyperbolic", json!({"day": day, "settlement_m": settled})),
    ];
    let ends = [
        "/radial_m/0",
        "/excess_pore_pressure_kpa",
        "/factor_of_safety",
        "/undrained_strength_kpa",
        "/ultimate_m",
        "/ultimate_m",
    ];
    let ran = eval(&lines);
    assert_eq!(ran.status, 0, "{}", ran.out);
    for ((answer, pointer), line) in ran.lines().iter().zip(ends).zip(&lines) {
        let steps = answer["working"].as_array().unwrap_or_else(|| panic!("{answer}"));
        for step in steps {
            for key in ["name", "unit", "formula"] {
                assert!(step[key].is_string(), "{key} of {step}");
            }
        }
        let result = answer["result"].pointer(pointer).expect(pointer);
        assert!(steps.iter().any(|step| step["value"] == *result), "{result} of {line}: {steps:?}");
    }
    let silent = eval(&[lines[3].replace("true", "false")]);
    assert!(silent.lines()[0].get("working").is_none(), "{}", silent.out);
}
