//! The picture as a whole: structure, mapping, missing and outlying values, hostile text.

use super::theme::{DARK, LIGHT};
use super::*;
use jiff::tz::TimeZone;
use proptest::prelude::*;

const SIZE: Size = Size { width_px: 480.0, height_px: 260.0 };
const START_S: i64 = 1_773_644_400;

fn quantity() -> Quantity {
    Quantity {
        name: "excess pore pressure".to_owned(),
        unit: "kPa".to_owned(),
        decimals: 1,
        downward: false,
    }
}

/// Six days, one reading missing, one doubtful.
fn instrument() -> InstrumentChart {
    let day = |count: i64| START_S + count * 86_400;
    let likely = |count: i64| 10.0 * count as f64;
    let days = 0..=6;
    let limit = |kind, factor: f64| Limit {
        kind,
        points: days.clone().map(|d| (day(d), likely(d) * factor + 5.0)).collect(),
    };
    InstrumentChart {
        title: "P9 piezometer".to_owned(),
        quantity: quantity(),
        zone: TimeZone::get("Europe/Amsterdam").unwrap(),
        span_s: None,
        expected: days
            .clone()
            .map(|d| Expected {
                x: day(d),
                low: likely(d) * 0.9,
                likely: likely(d),
                high: likely(d) * 1.1,
            })
            .collect(),
        readings: days
            .clone()
            .map(|d| Reading {
                x: day(d),
                value: if d == 3 { f64::NAN } else { likely(d) + 1.0 },
                good: d != 4,
            })
            .collect(),
        limits: vec![limit(LimitKind::Watch, 1.2), limit(LimitKind::Stop, 1.5)],
        trigger_changes: vec![TriggerChange {
            time_s: day(5),
            mark: Mark::Watch { confirmed: false },
        }],
        faults: vec![Stretch { from_s: day(3), to_s: day(4), label: "not read".to_owned() }],
        holds: vec![Stretch { from_s: day(1), to_s: day(3), label: "hold 1".to_owned() }],
        moment: Some((day(5), "now".to_owned())),
        mark: Mark::Watch { confirmed: false },
    }
}

fn line(points: Vec<(f64, f64)>, y: (f64, f64)) -> Chart {
    Chart {
        y: Axis { range: Some(y), ..Axis::default() },
        series: vec![Series {
            look: Look {
                class: "line",
                label: String::new(),
                token: Token::Water,
                weight_px: 1.0,
                dash: Dash::Solid,
            },
            kind: Kind::Line { points, max_gap: None },
        }],
        ..Chart::default()
    }
}

/// The polylines of a class, as numbers.
fn polylines(svg: &str, class: &str) -> Vec<Vec<(f64, f64)>> {
    let open = format!("<g class=\"{class} ");
    let groups = svg.split(&open).skip(1).map(|rest| rest.split("</g>").next().unwrap());
    groups
        .flat_map(|group| group.split("<polyline points=\"").skip(1))
        .map(|rest| {
            let pairs = rest.split('"').next().unwrap().split(' ');
            let number = |text: &str| text.parse().unwrap();
            pairs
                .map(|pair| pair.split_once(',').map(|(x, y)| (number(x), number(y))).unwrap())
                .collect()
        })
        .collect()
}

fn is_well_formed(svg: &str) -> bool {
    resvg::usvg::roxmltree::Document::parse(svg).is_ok()
}

#[test]
fn an_instrument_against_time() {
    let drawn = instrument().chart().render(SIZE, &LIGHT).unwrap();
    assert!(is_well_formed(&drawn.svg));
    assert!(!drawn.svg.contains("style="), "looks are attributes only");
    insta::assert_snapshot!("instrument_against_time", drawn.svg);
}

#[test]
fn a_theme_changes_colours_and_nothing_else() {
    let colourless = |theme| {
        let svg = instrument().chart().render(SIZE, theme).unwrap().svg;
        Token::ALL.iter().fold(svg, |svg, token| svg.replace(&theme.hex(*token), token.name()))
    };
    assert_eq!(colourless(&LIGHT), colourless(&DARK));
}

#[test]
fn text_from_outside_cannot_become_markup() {
    let hostile = "<script>alert(\"1\")</script>&'\u{1}";
    let mut chart = instrument();
    chart.title = hostile.to_owned();
    chart.quantity.name = hostile.to_owned();
    chart.quantity.unit = hostile.to_owned();
    chart.faults[0].label = hostile.to_owned();
    chart.holds[0].label = hostile.to_owned();
    chart.moment = Some((START_S, hostile.to_owned()));
    let svg = chart.chart().render(SIZE, &LIGHT).unwrap().svg;
    assert!(is_well_formed(&svg));
    assert!(!svg.contains("<script") && !svg.contains('\u{1}'));
}

#[test]
fn a_missing_reading_breaks_the_line_and_is_drawn_nowhere() {
    let points = vec![(0.0, 1.0), (1.0, 2.0), (2.0, f64::NAN), (3.0, 4.0), (4.0, 5.0)];
    let drawn = line(points, (0.0, 6.0)).render(SIZE, &LIGHT).unwrap();
    let lines = polylines(&drawn.svg, "line");
    assert_eq!(lines.len(), 2, "{lines:?}");
    assert!(lines.concat().iter().all(|p| p.1 < drawn.mapping.y.px0 - 10.0));
}

#[test]
fn a_point_out_of_range_does_not_bend_the_line() {
    // From (0, 1) up to (1, 101): leaves the window of 0 to 11 after a tenth of the way.
    let drawn = line(vec![(0.0, 1.0), (1.0, 101.0)], (0.0, 11.0)).render(SIZE, &LIGHT).unwrap();
    let lines = polylines(&drawn.svg, "line");
    let [[_, (x, y)]] = [lines[0][..].try_into().unwrap()];
    assert!((drawn.mapping.x.value(x) - 0.1).abs() < 0.002, "{x}");
    assert!((drawn.mapping.y.value(y) - 11.0).abs() < 0.02, "{y}");
}

#[test]
fn a_reading_beyond_the_scale_is_an_arrow_and_is_told() {
    let mut chart = instrument();
    // A failed transducer: far out, and it must not flatten the rest.
    chart.readings[4].value = 1e6;
    let drawn = chart.chart().render(SIZE, &LIGHT).unwrap();
    assert!(drawn.mapping.y.v1 < 1e3);
    assert!(drawn.svg.contains("class=\"off-scale "));
    assert!(drawn.svg.contains("1 values lie beyond the scale"));
}

#[test]
fn a_peak_of_one_reading_is_drawn_at_its_height() {
    let mut points: Vec<_> = (0..200_000).map(|i| (f64::from(i), 1.0)).collect();
    points[77_777].1 = 9.0;
    let drawn = line(points, (0.0, 10.0)).render(SIZE, &LIGHT).unwrap();
    let top = polylines(&drawn.svg, "line").concat().iter().map(|p| p.1).fold(f64::MAX, f64::min);
    assert!((drawn.mapping.y.value(top) - 9.0).abs() < 0.03);
    assert!(drawn.svg.len() < 60_000, "{} bytes", drawn.svg.len());
}

#[test]
fn nothing_to_draw_says_so() {
    let drawn = Chart::default().render(SIZE, &LIGHT).unwrap();
    assert!(drawn.svg.contains("no values in this range"));
}

#[test]
fn impossible_axes_and_sizes_are_refused() {
    let upside_down = line(vec![], (5.0, 1.0)).render(SIZE, &LIGHT);
    assert!(matches!(upside_down, Err(ChartError::Axis(AxisError::Range { .. }))));
    let mut chart = line(vec![], (0.0, 10.0));
    chart.y.scale = Scale::Log;
    let from_zero = chart.render(SIZE, &LIGHT);
    assert!(matches!(from_zero, Err(ChartError::Axis(AxisError::NotAboveZero { .. }))));
    let tiny = Size { width_px: 40.0, height_px: 30.0 };
    let too_small = instrument().chart().render(tiny, &LIGHT);
    assert!(matches!(too_small, Err(ChartError::TooSmall { .. })));
}

#[test]
fn charts_under_each_other_share_the_horizontal_axis() {
    let mut lower = instrument();
    lower.quantity.downward = true;
    lower.limits.clear();
    let charts = [instrument().chart(), lower.chart()];
    let size = Size { height_px: 520.0, ..SIZE };
    let drawn = Stack { charts: &charts }.render(size, &LIGHT).unwrap();
    assert!(is_well_formed(&drawn.svg));
    let [upper, lower] = drawn.mappings[..] else { panic!("two charts") };
    assert_eq!(upper.x, lower.x);
    assert!(upper.y.px0 > upper.y.px1, "larger values are higher up");
    assert!(lower.y.px0 < lower.y.px1, "larger settlement is further down");
    assert!(lower.y.px0 > upper.y.px0);
}

#[test]
fn a_logarithmic_axis_maps_there_and_back() {
    let mut chart = line(vec![(1.0, 1.0), (1_000.0, 2.0)], (0.0, 3.0));
    chart.x.scale = Scale::Log;
    let drawn = chart.render(SIZE, &LIGHT).unwrap();
    let x = drawn.mapping.x;
    assert!(x.log);
    let middle = x.px(1_000f64.sqrt());
    assert!((middle - (x.px0 + x.px1) / 2.0).abs() < 1e-6);
    assert!((x.value(middle) / 1_000f64.sqrt() - 1.0).abs() < 1e-9);
}

#[test]
fn a_picture_of_pixels_is_made_with_the_shipped_font() {
    let drawn = instrument().chart().render(SIZE, &LIGHT).unwrap();
    let picture = png(&drawn.svg, 2.0).unwrap();
    let picture = resvg::tiny_skia::Pixmap::decode_png(&picture).unwrap();
    assert_eq!((picture.width(), picture.height()), (960, 520));
    // Ink of the heading, upper left: without the font there would be none.
    let dark = |x, y| picture.pixel(x, y).unwrap().red() < 90;
    assert!((0..250).any(|x| (0..40).any(|y| dark(x, y))));
    assert!(png("<svg", 1.0).is_err());
}

proptest! {
    #[test]
    fn what_is_drawn_maps_back_to_its_value(
        values in prop::collection::vec(-500.0..500.0f64, 2..40),
        downward: bool,
    ) {
        let points: Vec<_> = values.iter().enumerate().map(|(i, v)| (i as f64, *v)).collect();
        let mut chart = line(points.clone(), (-600.0, 600.0));
        chart.y.downward = downward;
        let drawn = chart.render(SIZE, &LIGHT).unwrap();
        let found = polylines(&drawn.svg, "line").concat();
        prop_assert_eq!(found.len(), points.len());
        for (pixel, value) in found.iter().zip(&points) {
            prop_assert!((drawn.mapping.x.px(value.0) - pixel.0).abs() <= 0.5);
            prop_assert!((drawn.mapping.y.px(value.1) - pixel.1).abs() <= 0.5);
            let half_px = 0.5 * (1_200.0 / (drawn.mapping.y.px0 - drawn.mapping.y.px1)).abs();
            prop_assert!((drawn.mapping.y.value(pixel.1) - value.1).abs() <= half_px);
        }
    }

    /// Whatever comes in, a whole picture or an error comes out.
    #[test]
    fn any_values_make_a_well_formed_picture(
        values in prop::collection::vec((prop::num::f64::ANY, prop::num::f64::ANY), 0..60),
        log: bool,
    ) {
        let mut chart = line(values, (0.0, 1.0));
        chart.y.range = None;
        if log {
            chart.x.scale = Scale::Log;
        }
        if let Ok(drawn) = chart.render(SIZE, &LIGHT) {
            prop_assert!(is_well_formed(&drawn.svg));
            prop_assert!(!drawn.svg.contains("NaN") && !drawn.svg.contains("inf"));
        }
    }
}
