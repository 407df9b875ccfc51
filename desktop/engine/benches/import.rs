//! How long a million readings take to come in, by the width of the file, and a site file.
//! Compare the ratios within one run; absolute times are those of the machine.

use brimstead_engine::{import, site};
use divan::Bencher;
use std::fmt::Write;

fn main() {
    divan::main();
}

const SITE: &str = include_str!("../tests/fixtures/site.json");

/// About `readings` readings in rows of `columns` values, every minute.
fn file(readings: usize, columns: &[&str]) -> String {
    let mut text = format!("a\nb\nTime,{}\n", columns.join(","));
    for row in 0..readings / columns.len() {
        let (day, hour, minute) = (row / 1440, row / 60 % 24, row % 60);
        let (year, month, day) = (2031 + day / 336, 1 + day / 28 % 12, 1 + day % 28);
        let _ = write!(text, "{year}-{month:02}-{day:02} {hour:02}:{minute:02}:00");
        for column in 0..columns.len() {
            let _ = write!(text, ",{}.{:02}", 10 + column, row % 100);
        }
        text.push('\n');
    }
    text
}

#[divan::bench(args = [1, 6], sample_count = 3)]
fn a_million_readings(bencher: Bencher<'_, '_>, width: usize) {
    let columns = ["P5", "Level", "S1 (mm)", "Baro kPa", "T_P4", "P4 digits"];
    let text = file(1_000_000, &columns[..width]);
    let site = site::parse(SITE, "site.json").expect("the fixture is good");
    bencher.bench_local(|| import::read_bytes(&site, &[("logger-1.csv", text.as_bytes())]));
}

#[divan::bench]
fn a_site_file(bencher: Bencher<'_, '_>) {
    bencher.bench_local(|| site::parse(SITE, "site.json"));
}
