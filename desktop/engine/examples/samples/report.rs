//! A report of the invented test.

use brimstead_engine::chart::theme::LIGHT;
use brimstead_engine::chart::{Chart, ChartError, LimitKind, Mark, Size};
use brimstead_engine::report::{
    ChartSection, Fact, FaultRow, ImportFile, ImportMessage, InstrumentRow, LimitValue,
    LoadAtReading, Margin, ReportPage, values,
};

const MOMENT_S: i64 = 1_779_539_400;

struct Point {
    mark: Mark,
    id: &'static str,
    kind: &'static str,
    place: &'static str,
    unit: &'static str,
    decimals: usize,
    reading: Option<f64>,
    expected: f64,
    data: &'static str,
    age_s: i64,
}

const fn piezometer(
    id: &'static str,
    place: &'static str,
    mark: Mark,
    reading: f64,
    expected: f64,
) -> Point {
    Point {
        mark,
        id,
        kind: "piezometer",
        place,
        unit: "kPa",
        decimals: 1,
        reading: Some(reading),
        expected,
        data: "good",
        age_s: 130,
    }
}

const POINTS: [Point; 8] = [
    piezometer(
        "P9",
        "east edge, 10.2 m deep, soft clay, upper",
        Mark::Review { confirmed: true },
        91.6,
        74.2,
    ),
    piezometer(
        "P7",
        "east edge, 7.0 m deep, soft clay, upper",
        Mark::Watch { confirmed: true },
        70.4,
        60.1,
    ),
    Point {
        mark: Mark::Watch { confirmed: false },
        id: "I2",
        kind: "inclinometer",
        place: "east edge, 9.5 m deep",
        unit: "mm",
        decimals: 0,
        reading: Some(31.0),
        expected: 26.0,
        data: "good",
        age_s: 27_000,
    },
    piezometer("P1", "centre, 4.1 m deep, crust", Mark::Normal, 40.2, 41.0),
    piezometer("P2", "centre, 8.4 m deep, soft clay, upper", Mark::Normal, 83.0, 85.5),
    piezometer("P8", "east edge, 14.0 m deep, soft clay, lower", Mark::Normal, 50.9, 52.7),
    Point {
        mark: Mark::Normal,
        id: "M3",
        kind: "settlement plate",
        place: "north-east edge, at ground level",
        unit: "mm",
        decimals: 0,
        reading: Some(212.0),
        expected: 214.0,
        data: "good",
        age_s: 27_000,
    },
    Point {
        mark: Mark::NotJudged,
        id: "P5",
        kind: "piezometer",
        place: "west edge, 8.0 m deep, soft clay, upper",
        unit: "kPa",
        decimals: 1,
        reading: None,
        expected: 63.0,
        data: "not read",
        age_s: 400_000,
    },
];

fn row(point: &Point) -> InstrumentRow {
    let limits = [(LimitKind::Watch, 1.12), (LimitKind::Review, 1.21), (LimitKind::Stop, 1.3)]
        .map(|(trigger, factor)| LimitValue { trigger, value: point.expected * factor });
    let margin = point.reading.map(|reading| {
        let next = limits.iter().find(|limit| limit.value > reading).unwrap_or(&limits[2]);
        let value = next.value - reading;
        Margin { to: next.trigger, value, percent: Some(100.0 * value / next.value) }
    });
    InstrumentRow {
        mark: point.mark,
        id: point.id.to_owned(),
        kind: point.kind.to_owned(),
        place: point.place.to_owned(),
        unit: point.unit.to_owned(),
        decimals: point.decimals,
        reading: point.reading,
        load: point.reading.map(|_| LoadAtReading {
            liquid_level_m: if point.age_s < 3_600 { 13.42 } else { 13.1 },
            applied_pressure_kpa: if point.age_s < 3_600 { 139.8 } else { 136.5 },
            stage: "stage 4".to_owned(),
            hours_in_stage: 6.5,
        }),
        expected: Some(point.expected),
        band_low: Some(point.expected * 0.92),
        band_high: Some(point.expected * 1.09),
        limits: limits.to_vec(),
        margin,
        data_state: point.data.to_owned(),
        age_s: Some(point.age_s),
    }
}

fn fact(name: &str, value: &str) -> Fact {
    Fact { name: name.to_owned(), value: value.to_owned() }
}

/// The report with these charts.
pub fn page(charts: &[&Chart]) -> Result<ReportPage, ChartError> {
    let size = Size { width_px: 720.0, height_px: 300.0 };
    let section = |chart: &&Chart| {
        Ok(ChartSection {
            caption: chart.description.clone(),
            svg: chart.render(size, &LIGHT)?.svg,
            values: Some(values(chart, 200)),
        })
    };
    Ok(ReportPage {
        site: "Gannet Flats terminal".to_owned(),
        invented: true,
        title: "Tank T2, water test".to_owned(),
        moment_s: MOMENT_S,
        zone: super::zone(),
        load: vec![
            fact("water above floor", "13.42 m"),
            fact("applied pressure", "139.8 kPa"),
            fact("stage 4, rise", "6.5 h in it"),
            fact("to Stop at this rate", "1 h 40 min"),
            fact("to lower 1 m", "5 h 10 min"),
        ],
        headline: vec![
            "Pressure at P9 rises 1.9 times faster than expected since 126 kPa applied pressure; P7 and I2 on the same side agree, P5 opposite is silent.".to_owned(),
            "Site plan for Review: stop raising, read every 5 min, call the responsible engineer.".to_owned(),
        ],
        instruments: POINTS.iter().map(row).collect(),
        faults: vec![FaultRow {
            id: "P5".to_owned(),
            kind: "piezometer".to_owned(),
            place: "west edge, 8.0 m deep".to_owned(),
            data_state: "not read".to_owned(),
            evidence: "No value in 14 scans; its neighbours on the same logger answer.".to_owned(),
            since_s: Some(MOMENT_S - 400_000),
            until_s: None,
            next_step: "Check the cable at the junction box.".to_owned(),
        }],
        charts: charts.iter().map(section).collect::<Result<_, ChartError>>()?,
        import: vec![ImportFile {
            name: "round-23-may.csv".to_owned(),
            rows: 4_212,
            kept: 4_090,
            duplicates: 117,
            refused: 5,
            messages: vec![ImportMessage {
                line: Some(17),
                lost_data: true,
                text: "The value \"1,2,3\" is not a number.".to_owned(),
            }],
        }],
    })
}
