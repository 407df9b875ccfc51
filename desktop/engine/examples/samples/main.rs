//! Draws sample charts and a report of an invented test, to be looked at:
//! `cargo run -p brimstead-engine --example samples -- FOLDER`.
//! Every number is invented.

mod report;

use brimstead_engine::chart::theme::{DARK, LIGHT, SUNLIGHT};
use brimstead_engine::chart::{
    Chart, Expected, FillLine, InstrumentChart, Limit, LimitKind, Mark, PressureChart, Quantity,
    Reading, Size, Stack, Stretch, Theme, TriggerChange, png,
};
use brimstead_engine::report::{HtmlOptions, TerminalOptions, colour_wanted};
use jiff::tz::TimeZone;
use std::path::Path;

const HOUR_S: i64 = 3_600;
const DAY_S: i64 = 24 * HOUR_S;
/// 16 March 2026, 07:00 UTC.
const START_S: i64 = 1_773_644_400;

/// Day of the test and level, m: planned, and as it went.
const PLAN: [(f64, f64); 9] = [
    (0.0, 0.0),
    (8.0, 5.0),
    (20.0, 5.0),
    (27.0, 9.0),
    (42.0, 9.0),
    (49.0, 12.5),
    (66.0, 12.5),
    (73.0, 16.5),
    (96.0, 16.5),
];
const ACTUAL: [(f64, f64); 11] = [
    (0.0, 0.0),
    (9.0, 5.0),
    (21.0, 5.0),
    (29.0, 9.0),
    (36.0, 9.0),
    (38.0, 7.4),
    (41.0, 7.4),
    (44.0, 9.0),
    (46.0, 9.0),
    (53.0, 12.5),
    (68.2, 13.42),
];

fn at(day: f64) -> i64 {
    START_S + (day * DAY_S as f64) as i64
}

fn level_m(course: &[(f64, f64)], day: f64) -> f64 {
    let next = course.partition_point(|point| point.0 < day).clamp(1, course.len() - 1);
    let (a, b) = (course[next - 1], course[next]);
    a.1 + (b.1 - a.1) * ((day - a.0) / (b.0 - a.0)).clamp(0.0, 1.0)
}

/// Noise from -1 to 1, the same in every run.
fn noise(seed: f64) -> f64 {
    (seed * 12.9898).sin() * 43_758.547 % 1.0
}

fn zone() -> TimeZone {
    TimeZone::get("Europe/Amsterdam").expect("the bundled zones hold it")
}

fn hold(from: f64, to: f64, label: &str) -> Stretch {
    Stretch { from_s: at(from), to_s: at(to), label: label.to_owned() }
}

fn holds() -> Vec<Stretch> {
    vec![hold(9.0, 21.0, "hold 1"), hold(29.0, 42.0, "hold 2"), hold(53.0, 67.0, "hold 3")]
}

fn changes() -> Vec<TriggerChange> {
    [
        (31.0, Mark::Watch { confirmed: true }),
        (35.0, Mark::Normal),
        (55.0, Mark::Watch { confirmed: false }),
        (67.6, Mark::Watch { confirmed: true }),
        (68.1, Mark::Review { confirmed: true }),
    ]
    .map(|(day, mark)| TriggerChange { time_s: at(day), mark })
    .to_vec()
}

fn fill_line() -> FillLine {
    let actual = (0..).map(|step| f64::from(step) * 0.25).take_while(|day| *day <= 68.2);
    FillLine {
        title: "Fill line, tank T2 (invented)".to_owned(),
        unit: "m".to_owned(),
        zone: zone(),
        span_s: None,
        plan: PLAN.iter().map(|(day, level)| (at(*day), *level)).collect(),
        actual: actual.map(|day| (at(day), level_m(&ACTUAL, day))).collect(),
        max_gap_s: Some(DAY_S),
        holds: vec![hold(73.0, 90.0, "hold 4, planned")].into_iter().chain(holds()).collect(),
        trigger_changes: changes(),
        faults: vec![],
        moment: Some((at(68.2), "23 May 14:30".to_owned())),
    }
}

/// Days, and the expected excess pore pressure, kPa.
fn expected_kpa() -> Vec<(f64, f64)> {
    let mut excess = 0.0;
    let mut before = 0.0;
    (0..=682)
        .map(|step| {
            let day = f64::from(step) * 0.1;
            let level = level_m(&ACTUAL, day);
            excess = (excess + 7.0 * (level - before)) * (1.0 - 0.0016);
            before = level;
            (day, excess)
        })
        .collect()
}

fn limits() -> [(LimitKind, f64); 3] {
    [(LimitKind::Watch, 1.16), (LimitKind::Review, 1.28), (LimitKind::Stop, 1.4)]
}

fn piezometer(title: &str, days: (f64, f64), apart: f64) -> InstrumentChart {
    let course: Vec<_> =
        expected_kpa().into_iter().filter(|(day, _)| (days.0..=days.1).contains(day)).collect();
    let value = |day: f64| {
        let late = ((day - 66.0).max(0.0) * 9.0).min(24.0);
        level_m(&course, day) * (1.0 + 0.03 * noise(day)) + late
    };
    let steps = (0..).map(|step| days.0 + f64::from(step) * apart);
    let reading = |day: f64| {
        let bad = (50.0..51.5).contains(&day);
        let silent = (24.0..27.0).contains(&day);
        let value = if silent {
            f64::NAN
        } else if bad {
            5.0
        } else {
            value(day)
        };
        Reading { x: at(day), value, good: !bad }
    };
    InstrumentChart {
        title: title.to_owned(),
        quantity: Quantity {
            name: "excess pore pressure".to_owned(),
            unit: "kPa".to_owned(),
            decimals: 1,
            downward: false,
        },
        zone: zone(),
        span_s: Some((at(days.0), at(days.1))),
        expected: course
            .iter()
            .map(|(day, kpa)| Expected {
                x: at(*day),
                low: kpa * 0.88,
                likely: *kpa,
                high: kpa * 1.08 + 1.0,
            })
            .collect(),
        readings: steps.take_while(|day| *day <= days.1).map(reading).collect(),
        limits: limits()
            .map(|(kind, factor)| Limit {
                kind,
                points: course.iter().map(|(day, kpa)| (at(*day), kpa * factor + 3.0)).collect(),
            })
            .to_vec(),
        trigger_changes: changes(),
        faults: vec![hold(24.0, 27.0, "not read"), hold(50.0, 51.5, "out of range")],
        holds: holds(),
        moment: None,
        mark: Mark::Review { confirmed: true },
    }
}

fn against_pressure() -> PressureChart {
    let kpa = |step: i32| 60.0 + f64::from(step);
    let likely = |pressure: f64| 0.48 * pressure + 4.0;
    PressureChart {
        title: "P9 piezometer".to_owned(),
        quantity: piezometer("", (0.0, 1.0), 1.0).quantity,
        pressure_unit: "kPa".to_owned(),
        expected: (0..=95)
            .map(kpa)
            .map(|p| Expected {
                x: p,
                low: likely(p) * 0.84,
                likely: likely(p),
                high: likely(p) * 1.16,
            })
            .collect(),
        readings: (18..=80)
            .map(kpa)
            .map(|p| Reading {
                x: p,
                value: likely(p) * (1.0 + 0.03 * noise(p)) + (p - 126.0).max(0.0) * 1.3,
                good: true,
            })
            .collect(),
        limits: limits()
            .map(|(kind, factor)| Limit {
                kind,
                points: (0..=95).map(kpa).map(|p| (p, likely(p) * factor)).collect(),
            })
            .to_vec(),
        mark: Mark::Review { confirmed: true },
    }
}

fn settlement() -> InstrumentChart {
    let mut chart = piezometer("M3 settlement plate, north edge", (0.0, 68.2), 1.0);
    chart.quantity = Quantity {
        name: "settlement".to_owned(),
        unit: "mm".to_owned(),
        decimals: 0,
        downward: true,
    };
    chart.trigger_changes.clear();
    chart.faults.clear();
    chart.mark = Mark::Normal;
    for reading in &mut chart.readings {
        reading.good = true;
        reading.value = level_m(&expected_kpa(), (reading.x - START_S) as f64 / DAY_S as f64);
    }
    chart
}

fn save(folder: &Path, name: &str, svg: &str) -> Result<(), Box<dyn std::error::Error>> {
    std::fs::write(folder.join(format!("{name}.svg")), svg)?;
    std::fs::write(folder.join(format!("{name}.png")), png(svg, 1.5)?)?;
    Ok(())
}

fn main() -> Result<(), Box<dyn std::error::Error>> {
    let folder = std::env::args().nth(1).ok_or("name a folder for the pictures")?;
    let folder = Path::new(&folder);
    std::fs::create_dir_all(folder)?;
    let wide = Size { width_px: 720.0, height_px: 320.0 };
    let panel = Size { width_px: 380.0, height_px: 260.0 };
    let day = piezometer("P9 piezometer, last day", (67.2, 68.2), 0.01);
    let charts: [(&str, Chart, Size); 5] = [
        (
            "time",
            piezometer("P9 piezometer, east edge, 10.2 m deep", (0.0, 68.2), 1.0).chart(),
            wide,
        ),
        ("day", day.chart(), panel),
        ("pressure", against_pressure().chart(), panel),
        ("fill", fill_line().chart(), wide),
        ("settlement", settlement().chart(), wide),
    ];
    let themes: [&Theme; 3] = [&LIGHT, &DARK, &SUNLIGHT];
    for theme in themes {
        for (name, chart, size) in &charts {
            save(folder, &format!("{name}-{}", theme.name), &chart.render(*size, theme)?.svg)?;
        }
        let panels = [charts[3].1.clone(), charts[0].1.clone(), charts[4].1.clone()];
        let stack = Stack { charts: &panels };
        let tall = Size { width_px: 720.0, height_px: 760.0 };
        save(folder, &format!("stack-{}", theme.name), &stack.render(tall, theme)?.svg)?;
    }
    let page = report::page(&[&charts[3].1, &charts[0].1, &charts[2].1, &charts[4].1])?;
    std::fs::write(folder.join("report.html"), page.to_html(HtmlOptions { embed_font: true }))?;
    std::fs::write(folder.join("report.json"), page.to_json()?)?;
    print!("{}", page.to_text(TerminalOptions { width: Some(140), colour: colour_wanted(true) }));
    Ok(())
}
