//! The series of one chart, cut to the window, thinned to the pixels, drawn by plotters.

use super::axis::Plane;
use super::clip;
use super::description::{BandPoint, Dash, Dot, Kind, Look, Series};
use super::labels::Occupied;
use super::layout::Layout;
use super::sheet::{DrawError, Place, Sheet, Stroke};
use crate::series::{self, Point};
use plotters::coord::types::RangedCoordf64;
use plotters::element::{Circle, Cross, Polygon};
use plotters::prelude::{Cartesian2d, ChartContext, LineSeries};
use plotters_backend::DrawingBackend;
use std::collections::HashSet;

/// The plot as the drawing library knows it.
pub(crate) type Plot<'a, B> = ChartContext<'a, B, Cartesian2d<RangedCoordf64, RangedCoordf64>>;

/// Where a line ends and what is to be written there.
#[derive(Debug, Clone)]
pub(crate) struct End {
    pub at: Place,
    pub look: Look,
}

/// What drawing the series leaves behind for the furniture.
#[derive(Debug, Default)]
pub(crate) struct Drawn {
    pub ends: Vec<End>,
    pub occupied: Occupied,
    /// Values beyond the ends of the vertical axis, shown as arrows at the edge.
    pub off_scale: usize,
}

/// Draws the series of one chart.
pub(crate) struct Artist<'p, 'a, 's, B: DrawingBackend> {
    pub sheet: &'p Sheet<'s, B>,
    pub plot: &'p mut Plot<'a, B>,
    pub plane: &'p Plane<'p>,
    pub layout: &'p Layout,
    pub drawn: Drawn,
}

impl<B: DrawingBackend> Artist<'_, '_, '_, B> {
    pub fn series(&mut self, series: &Series) -> Result<(), DrawError> {
        let look = &series.look;
        match &series.kind {
            Kind::Band { points } => self.band(look, points),
            Kind::Line { points, max_gap } => {
                let runs = series::thin(points, self.columns(), *max_gap);
                self.lines(look, &runs)
            }
            Kind::Path { points } => {
                let runs = series::thin_path(points, self.columns());
                self.lines(look, &runs)
            }
            Kind::Step { points } => {
                let runs = series::thin(&staircase(points), self.columns(), None);
                self.lines(look, &runs)
            }
            Kind::Dots { points, dot } => self.dots(look, points, *dot),
        }
    }

    fn columns(&self) -> usize {
        self.layout.width_px().max(1.0) as usize
    }

    /// Points on the plane of the drawing, finite only.
    /// One point of all that fall on the same pixel: more would not be seen.
    fn distinct(&self, points: Vec<Point>) -> Vec<Point> {
        let mut taken = HashSet::new();
        let pixel = |point: Point| {
            let (x, y) = place(self.plot, point);
            (x.round() as i64, y.round() as i64)
        };
        points.into_iter().filter(|point| taken.insert(pixel(*point))).collect()
    }

    fn projected(&self, points: &[Point]) -> Vec<Point> {
        let placed = points.iter().map(|point| self.plane.project(*point));
        placed.filter(|point| point.0.is_finite() && point.1.is_finite()).collect()
    }

    fn places(&self, points: &[Point]) -> Vec<Place> {
        points.iter().map(|point| place(self.plot, *point)).collect()
    }

    fn lines(&mut self, look: &Look, runs: &[Vec<Point>]) -> Result<(), DrawError> {
        let window = self.plane.window();
        let stroke = Stroke {
            class: look.class,
            token: look.token,
            width_px: look.weight_px,
            dash: look.dash,
        };
        let mut end = None;
        for run in runs {
            let run = self.projected(run);
            if let [only] = run[..] {
                // A reading alone between two gaps: a line of one point would not show.
                if window.holds(only) {
                    let radius = super::canvas::step(look.weight_px);
                    let style = self.sheet.filling(look.class, look.token);
                    self.draw_all([Circle::new(only, radius, style)])?;
                    end = Some(only);
                }
                continue;
            }
            for piece in clip::polyline(&run, &window) {
                end = piece.last().copied().or(end);
                let places = self.places(&piece);
                self.drawn.occupied.add_curve(&places);
                let style = self.sheet.stroke(stroke);
                let line = LineSeries::new(piece, style);
                self.plot.draw_series(line).map_err(DrawError::from_display)?;
            }
        }
        self.end(look, end);
        Ok(())
    }

    fn band(&mut self, look: &Look, points: &[BandPoint]) -> Result<(), DrawError> {
        let window = self.plane.window();
        // Missing on one side is missing on both.
        let whole: Vec<Point> = points.iter().map(|p| (p.x, p.low + p.high)).collect();
        for run in series::runs(&whole, None) {
            let run = &points[run];
            let side = |value: fn(&BandPoint) -> f64| {
                let edge: Vec<Point> = run.iter().map(|point| (point.x, value(point))).collect();
                series::thin(&edge, self.columns(), None).concat()
            };
            let mut outline = self.projected(&side(|point| point.low));
            outline.extend(self.projected(&side(|point| point.high)).into_iter().rev());
            let area = clip::polygon(&outline, &window);
            if area.len() > 2 {
                let style = self.sheet.filling(look.class, look.token);
                self.draw_all([Polygon::new(area, style)])?;
            }
        }
        Ok(())
    }

    fn dots(&mut self, look: &Look, points: &[Point], dot: Dot) -> Result<(), DrawError> {
        let window = self.plane.window();
        let projected = self.distinct(self.projected(points));
        let (seen, outside): (Vec<_>, Vec<_>) =
            projected.into_iter().partition(|p| window.holds(*p));
        // Bolder with the lines, but less, so that neighbours stay apart.
        let size = super::canvas::step(look.weight_px * self.sheet.theme.line_factor.sqrt());
        match dot {
            Dot::Full => {
                let style = self.sheet.filling(look.class, look.token);
                self.draw_all(seen.iter().map(|point| Circle::new(*point, size, style)))?;
            }
            Dot::Cross => {
                let stroke = Stroke {
                    class: look.class,
                    token: look.token,
                    width_px: 1.2,
                    dash: Dash::Solid,
                };
                let style = self.sheet.stroke(stroke);
                self.draw_all(seen.iter().map(|point| Cross::new(*point, size, style)))?;
            }
        }
        let places = self.places(&seen);
        self.drawn.occupied.places.extend(places);
        let beside = |p: &Point| (window.x.0..=window.x.1).contains(&p.0);
        for point in outside.into_iter().filter(beside) {
            self.drawn.off_scale += 1;
            self.arrow_at_edge(look, window.nearest(point))?;
        }
        self.end(look, seen.last().copied());
        Ok(())
    }

    /// A value beyond the scale is not left out and not moved onto it: an arrow says where it went.
    fn arrow_at_edge(&mut self, look: &Look, edge: Point) -> Result<(), DrawError> {
        let (x, y) = place(self.plot, edge);
        let middle = (self.layout.plot.from.1 + self.layout.plot.to.1) / 2.0;
        let inward = if y < middle { 7.0 } else { -7.0 };
        let arrow = [(x, y), (x - 3.5, y + inward), (x + 3.5, y + inward)];
        self.sheet.area("off-scale", look.token, &arrow)
    }

    fn end(&mut self, look: &Look, end: Option<Point>) {
        if let (Some(end), false) = (end, look.label.is_empty()) {
            let at = place(self.plot, end);
            self.drawn.ends.push(End { at, look: look.clone() });
        }
    }

    fn draw_all<E>(&mut self, elements: impl IntoIterator<Item = E>) -> Result<(), DrawError>
    where
        for<'b> &'b E: plotters::element::PointCollection<'b, Point>,
        E: plotters::element::Drawable<B>,
    {
        self.plot.draw_series(elements).map(|_| ()).map_err(DrawError::from_display)
    }
}

/// Pixel of a point on the plane of the drawing.
pub(crate) fn place<B: DrawingBackend>(plot: &Plot<'_, B>, point: Point) -> Place {
    let (x, y) = plot.backend_coord(&point);
    (f64::from(x) / super::canvas::STEPS, f64::from(y) / super::canvas::STEPS)
}

/// The corners of a series whose values hold until the next one.
fn staircase(points: &[Point]) -> Vec<Point> {
    let mut corners: Vec<Point> = Vec::with_capacity(2 * points.len());
    for point in points {
        if let Some(&(_, before)) = corners.last() {
            corners.push((point.0, before));
        }
        corners.push(*point);
    }
    corners
}
