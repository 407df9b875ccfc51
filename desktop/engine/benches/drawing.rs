//! `cargo bench -p brimstead-engine --bench drawing`: thinning beside a plain pass over the same
//! points, and drawing raw beside thinned. Read the ratios, not the times.

use brimstead_engine::chart::theme::LIGHT;
use brimstead_engine::chart::{Chart, Dash, Kind, Look, Series, Size, Token};
use brimstead_engine::series::{Point, thin};
use divan::{Bencher, black_box};

fn main() {
    divan::main();
}

fn wave(count: u32) -> Vec<Point> {
    (0..count).map(|i| (f64::from(i), (f64::from(i) * 0.001).sin())).collect()
}

#[divan::bench]
fn sum_of_a_million_points(bencher: Bencher<'_, '_>) {
    let points = wave(1_000_000);
    bencher.bench(|| black_box(&points).iter().map(|point| point.0 + point.1).sum::<f64>());
}

#[divan::bench]
fn thin_a_million_points(bencher: Bencher<'_, '_>) {
    let points = wave(1_000_000);
    bencher.bench(|| thin(black_box(&points), 640, Some(10.0)));
}

#[divan::bench(args = [1_000, 100_000])]
fn draw_one_line(bencher: Bencher<'_, '_>, count: u32) {
    let look = Look {
        class: "line",
        label: "line".to_owned(),
        token: Token::Water,
        weight_px: 1.6,
        dash: Dash::Solid,
    };
    let kind = Kind::Line { points: wave(count), max_gap: None };
    let chart = Chart { series: vec![Series { look, kind }], ..Chart::default() };
    let size = Size { width_px: 720.0, height_px: 320.0 };
    bencher.bench(|| chart.render(black_box(size), &LIGHT).map(|drawn| drawn.svg.len()).ok());
}
