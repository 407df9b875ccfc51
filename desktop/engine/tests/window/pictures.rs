//! Section, contours and charts.

use crate::{at, bad};
use brimstead_engine::window::ReadingChart;
use brimstead_engine::window::views::{Against, ChartView, Field, Hidden, Picture, Theme, Units};

const LOADED: &str = "2026-05-18T14:00:00Z";
const WIDE: Picture = Picture { width: 760.0, height: 300.0, theme: Theme::Light };

#[test]
fn the_section_holds_tanks_layers_and_near_instruments() {
    let section = bad().section(Units::Si);
    let [left_m, right_m, top_m, bottom_m] = section.extent_m;
    assert!(left_m < -59.0, "the neighbour's near edge at 59 m west is seen: {left_m}");
    assert!(right_m > 25.0 && top_m < -15.6 && (bottom_m - 26.0).abs() < 1e-9);
    assert_eq!(section.layers.len(), 5);
    assert_eq!((section.layers[1].top_m, section.layers[1].base_m), (1.5, 6.5));
    assert_eq!(section.tanks.len(), 2);
    assert_eq!(section.tanks[1].x_m, -82.0);
    assert_eq!(section.tanks[0].label, "T-7, 50.0 m across");
    assert_eq!(bad().section(Units::UsCustomary).tanks[0].label, "T-7, 164.0 ft across");
    let moment = bad().moment(at(LOADED), Units::Si);
    let east = moment.instruments.iter().find(|one| one.id == "PE1").unwrap();
    assert_eq!((east.section_x_m, east.depth_m, east.off_section_m), (23.5, 4.0, 0.0));
}

/// On the axis the vertical increment of a disc is `q (1 - (1 + (R/z)^2)^-1.5)` (Boussinesq, as in
/// any handbook, from memory).
#[test]
fn the_line_of_a_stress_lies_where_the_closed_form_has_it() {
    let view = bad().contours(Field::SigmaZ, at(LOADED), Units::Si).unwrap();
    assert_eq!(view.unit, "kPa");
    let of_120 = view.lines.iter().filter(|line| line.label == "120");
    let points = of_120.flat_map(|line| &line.points).copied();
    let [x_m, z_m] = points.min_by(|a, b| a[0].abs().total_cmp(&b[0].abs())).unwrap();
    assert!(x_m.abs() < 1.0, "the line crosses the axis");
    let q_kpa = 14.003 * 9.81 + 0.7 + 16.0;
    let disc = q_kpa * (1.0 - (1.0 + (25.0_f64 / z_m).powi(2)).powf(-1.5));
    // A ring of p kN/m gives 3 p R z^3 / (R^2 + z^2)^2.5 on the axis.
    let ring = 3.0 * 24.0 * 25.0 * z_m.powi(3) / (625.0 + z_m * z_m).powf(2.5);
    // The neighbour 82 m away adds less than a point load in its middle would by far.
    assert!((disc + ring - 120.0).abs() < 2.0, "{disc} + {ring} at {z_m} m");
}

#[test]
fn contours_follow_load_and_time() {
    let count = |field, when: &str| {
        bad()
            .contours(field, at(when), Units::Si)
            .unwrap()
            .lines
            .iter()
            .map(|l| l.points.len())
            .sum::<usize>()
    };
    for field in [Field::SigmaX, Field::SigmaY, Field::TauXz, Field::ExcessPorePressure] {
        assert!(count(field, LOADED) > 20, "{field:?}");
    }
    let deepest = |when: &str, units| {
        let view = bad().contours(Field::Settlement, at(when), units).unwrap();
        let value = |label: &str| label.replace('\u{2212}', "-").parse::<f64>().unwrap();
        view.lines.iter().map(|line| value(&line.label)).fold(0.0, f64::max)
    };
    assert!(deepest(LOADED, Units::Si) > 2.0 * deepest("2026-03-20T00:00:00Z", Units::Si));
    assert!(deepest(LOADED, Units::UsCustomary) < 40.0, "inches, not millimetres");
    let planned = bad().contours(Field::ExcessPorePressure, at("2026-05-30T00:00:00Z"), Units::Si);
    assert!(!planned.unwrap().lines.is_empty());
}

fn inside(chart: &ChartView) -> bool {
    chart.hover.iter().all(|point| {
        let [px0, px1, ..] = chart.x;
        (px0 - 1.0..=px1 + 1.0).contains(&point.px[0])
    })
}

#[test]
fn the_fill_line_maps_pixels_to_time_and_speaks() {
    let chart = bad().fill_line(WIDE, Units::Si).unwrap();
    assert!(chart.svg.starts_with("<svg") && chart.svg.contains("liquid level above floor, m"));
    assert!(chart.hover.len() > 50 && inside(&chart));
    let [px0, px1, v0, v1] = chart.x;
    let point = &chart.hover[20];
    let time_ms = (v0 + (point.px[0] - px0) / (px1 - px0) * (v1 - v0)) * 1000.0;
    assert!((time_ms - point.time_ms).abs() < 3_600_000.0, "within a pixel");
    assert!(point.text.contains("by LG1"), "{}", point.text);
    let us = bad().fill_line(WIDE, Units::UsCustomary).unwrap();
    assert!(us.svg.contains("liquid level above floor, ft") && us.hover[20].text.contains("psf"));
    assert!(chart.events.is_sorted_by(|a, b| a.time_ms <= b.time_ms));
    assert!(chart.events.iter().any(|event| event.text.contains("PE1 from Normal to Watch")));
    let tiny = Picture { width: 10.0, height: 10.0, ..WIDE };
    assert_eq!(bad().fill_line(tiny, Units::Si).unwrap_err().code(), "chart-failed");
}

fn asked(against: Against) -> ReadingChart {
    ReadingChart { id: "PE1".to_owned(), against, time_ms: at(LOADED), range: None, hidden: vec![] }
}

#[test]
fn a_reading_is_drawn_against_time_and_against_pressure() {
    for against in [Against::Time, Against::Pressure] {
        let chart = bad().reading_chart(&asked(against), WIDE, Units::Si).unwrap();
        assert!(chart.svg.len() < 250_000, "{against:?}: {} bytes", chart.svg.len());
        assert!(!chart.hover.is_empty() && inside(&chart));
        let words = &chart.hover[chart.hover.len() / 2].text;
        for part in ["kPa", "expected", "applied pressure", "of liquid"] {
            assert!(words.contains(part), "{part} in {words}");
        }
    }
    let us = bad().reading_chart(&asked(Against::Pressure), WIDE, Units::UsCustomary).unwrap();
    assert!(us.svg.contains("applied pressure, psf") && us.x[3] > 2000.0);
}

#[test]
fn series_can_be_left_out_and_time_cut() {
    let all = bad().reading_chart(&asked(Against::Time), WIDE, Units::Si).unwrap();
    let hidden = vec![Hidden::Limits, Hidden::Band, Hidden::Expected];
    let bare = ReadingChart { hidden, ..asked(Against::Time) };
    let bare = bad().reading_chart(&bare, WIDE, Units::Si).unwrap();
    assert!(bare.svg.len() < all.svg.len() && !bare.svg.contains("class=\"limit"));
    let ends = (at("2026-05-17T00:00:00Z"), at("2026-05-19T00:00:00Z"));
    let cut = bad().reading_chart(
        &ReadingChart { range: Some(ends), ..asked(Against::Time) },
        WIDE,
        Units::Si,
    );
    let cut = cut.unwrap();
    assert_eq!((cut.x[2] * 1000.0, cut.x[3] * 1000.0), ends);
    assert!(cut.hover.iter().all(|point| point.time_ms >= ends.0));
    let unknown = ReadingChart { id: "none".to_owned(), ..asked(Against::Time) };
    let refused = bad().reading_chart(&unknown, WIDE, Units::Si).unwrap_err();
    assert_eq!(refused.code(), "unknown-instrument");
    let digits = ReadingChart { id: "PM2".to_owned(), ..asked(Against::Time) };
    let drawn = bad().reading_chart(&digits, WIDE, Units::Si).unwrap();
    assert!(drawn.svg.contains("uncorrected"), "what the digits say before their corrections");
}
