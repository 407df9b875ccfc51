//! Everything around the series: headings, grid, lanes, marks and labels.

use super::axis::Plane;
use super::description::{Chart, Dash, Look};
use super::draw::{Drawn, End};
use super::labels::{Box2, spread};
use super::layout::{HEADING_PX, LABEL_GAP_PX, LEADER_PX, Layout, SMALL_PX, shortened};
use super::sheet::{Across, DrawError, Letters, Place, Sheet, Stroke};
use super::theme::Token;
use plotters_backend::DrawingBackend;

const MARK_RADIUS_PX: f64 = 6.5;
const MARK_GAP_PX: f64 = 14.0;
/// Lines that end this near to each other are named in one column.
const TOGETHER_PX: f64 = 12.0;

/// Draws what surrounds the series of one chart.
pub(crate) struct Furniture<'p, 's, B: DrawingBackend> {
    pub sheet: &'p Sheet<'s, B>,
    pub chart: &'p Chart,
    pub layout: &'p Layout,
    pub plane: &'p Plane<'p>,
    /// From values to pixels.
    pub x_px: &'p dyn Fn(f64) -> f64,
    pub y_px: &'p dyn Fn(f64) -> f64,
}

impl<B: DrawingBackend> Furniture<'_, '_, B> {
    /// What lies under the series.
    pub fn draw_under(&self) -> Result<(), DrawError> {
        self.shades()?;
        self.grid()
    }

    /// What lies over the series.
    pub fn draw_over(&self, mut drawn: Drawn) -> Result<(), DrawError> {
        self.heading()?;
        self.names()?;
        self.hatches()?;
        self.events()?;
        self.verticals()?;
        self.highlight(&mut drawn)?;
        self.ends(&mut drawn)?;
        if drawn.occupied.places.is_empty() {
            let plot = self.layout.plot;
            let middle = ((plot.from.0 + plot.to.0) / 2.0, (plot.from.1 + plot.to.1) / 2.0);
            let letters = Letters { across: Across::Middle, ..Letters::soft("empty") };
            self.sheet.text(letters, middle, "no values in this range")?;
        }
        Ok(())
    }

    /// The visible part of a stretch of the horizontal axis, in pixels.
    fn stretch(&self, from: f64, to: f64) -> Option<(f64, f64)> {
        let (from, to) = (from.max(self.plane.x.low), to.min(self.plane.x.high));
        (from < to).then(|| ((self.x_px)(from), (self.x_px)(to)))
    }

    fn visible_x(&self, x: f64) -> bool {
        self.plane.x.low <= x && x <= self.plane.x.high
    }

    fn shades(&self) -> Result<(), DrawError> {
        let plot = self.layout.plot;
        for shade in &self.chart.shades {
            if let Some((from, to)) = self.stretch(shade.from, shade.to) {
                self.sheet.rect("hold", Token::Hold, (from, plot.from.1), (to, plot.to.1))?;
            }
        }
        Ok(())
    }

    fn grid(&self) -> Result<(), DrawError> {
        let plot = self.layout.plot;
        for tick in &self.layout.y_ticks {
            let y = (self.y_px)(tick.at);
            let stroke = Stroke::hair("grid", Token::Line);
            self.sheet.line(stroke, &[(plot.from.0, y), (plot.to.0, y)])?;
        }
        let stroke = Stroke { width_px: 1.0, ..Stroke::hair("axis", Token::Soft) };
        self.sheet.line(stroke, &[(plot.from.0, plot.to.1), plot.to])?;
        let below = if self.layout.names_x { self.layout.tick_y - 9.0 } else { plot.to.1 + 4.0 };
        for tick in &self.layout.x_ticks {
            let x = (self.x_px)(tick.at);
            self.sheet.line(Stroke::hair("tick", Token::Line), &[(x, plot.to.1), (x, below)])?;
        }
        Ok(())
    }

    fn heading(&self) -> Result<(), DrawError> {
        let heading = &self.layout.heading;
        let Box2 { from, to } = self.layout.outer;
        let letters = Letters {
            token: Token::Ink,
            size_px: HEADING_PX,
            bold: true,
            ..Letters::soft("heading")
        };
        let row = from.1 + 11.0;
        self.sheet.text(letters, (from.0 + 2.0, row), &heading.title)?;
        let soft = Letters::soft("caption");
        let beside = from.0 + 2.0 + letters.width_px(&heading.title);
        let gap = if heading.title.is_empty() { 0.0 } else { 10.0 };
        let caption =
            if heading.caption_below { (from.0 + 2.0, row + 17.0) } else { (beside + gap, row) };
        self.sheet.text(soft, caption, &heading.caption)?;
        if !heading.zone.is_empty() {
            let right = Letters { across: Across::End, ..soft };
            self.sheet.text(right, (to.0 - 4.0, row), &heading.zone)?;
        }
        Ok(())
    }

    fn names(&self) -> Result<(), DrawError> {
        let layout = self.layout;
        let numbers = Letters { across: Across::End, ..Letters::soft("tick") };
        for tick in &layout.y_ticks {
            let place = (layout.plot.from.0 - 7.0, (self.y_px)(tick.at));
            self.sheet.text(numbers, place, &tick.label)?;
        }
        if layout.names_x {
            self.names_x()?;
        }
        Ok(())
    }

    fn names_x(&self) -> Result<(), DrawError> {
        let layout = self.layout;
        let letters = Letters { across: Across::Middle, ..Letters::soft("tick") };
        for tick in &layout.x_ticks {
            self.sheet.text(letters, ((self.x_px)(tick.at), layout.tick_y), &tick.label)?;
        }
        let mut free_from = f64::NEG_INFINITY;
        for tick in &layout.x_ticks {
            let Some(under) = &tick.under else { continue };
            let x = (self.x_px)(tick.at);
            let half = letters.width_px(under) / 2.0;
            if x - half >= free_from && x + half <= layout.outer.to.0 {
                self.sheet.text(letters, (x, layout.under_y), under)?;
                free_from = x + half + 8.0;
            }
        }
        let caption = self.plane.x.caption();
        if !caption.is_empty() {
            let letters = Letters { across: Across::End, ..Letters::soft("caption") };
            self.sheet.text(letters, (layout.plot.to.0, layout.under_y), &caption)?;
        }
        Ok(())
    }

    /// Faults of the equipment: a hatched strip under the plot with its words.
    fn hatches(&self) -> Result<(), DrawError> {
        let (middle, half) = (self.layout.hatch_y, self.layout.hatch_half);
        for hatch in &self.chart.hatches {
            let Some((from, to)) = self.stretch(hatch.from, hatch.to) else { continue };
            // A short fault must not vanish.
            let to = to.max(from + 2.0);
            let stroke = Stroke::hair("fault", Token::Fault);
            let mut x = from - 2.0 * half;
            while x < to {
                let (low, high) = (x.max(from), (x + 2.0 * half).min(to));
                if low < high {
                    let ends =
                        [(low, middle + half - (low - x)), (high, middle + half - (high - x))];
                    self.sheet.line(stroke, &ends)?;
                }
                x += 4.0;
            }
            let (top, bottom) = (middle - half, middle + half);
            let around = [(from, top), (to, top), (to, bottom), (from, bottom), (from, top)];
            self.sheet.line(Stroke { dash: Dash::Short, width_px: 1.0, ..stroke }, &around)?;
        }
        self.hatch_words()
    }

    fn hatch_words(&self) -> Result<(), DrawError> {
        let letters =
            Letters { token: Token::Fault, size_px: 11.0, rim: true, ..Letters::soft("fault") };
        let plot = self.layout.plot;
        let mut free_from = plot.from.0;
        for (index, hatch) in self.chart.hatches.iter().enumerate() {
            let Some((from, to)) = self.stretch(hatch.from, hatch.to) else { continue };
            let width = letters.width_px(&hatch.label);
            let next = self.chart.hatches.get(index + 1).map_or(plot.to.0, |n| (self.x_px)(n.from));
            // On the strip, else after it, else before it.
            let x = if width + 8.0 <= to - from {
                from + (to - from - width) / 2.0
            } else if to + 4.0 + width <= next {
                to + 4.0
            } else if from - 4.0 - width >= free_from {
                from - 4.0 - width
            } else {
                continue;
            };
            self.sheet.text(letters, (x, self.layout.hatch_y), &hatch.label)?;
            free_from = x + width + 4.0;
        }
        Ok(())
    }

    /// Changes of the trigger: marks in a lane of their own, never one on another.
    fn events(&self) -> Result<(), DrawError> {
        let plot = self.layout.plot;
        let seen: Vec<_> = self.chart.events.iter().filter(|e| self.visible_x(e.x)).collect();
        let wanted: Vec<f64> = seen.iter().map(|event| (self.x_px)(event.x)).collect();
        let (low, high) = (plot.from.0 + MARK_RADIUS_PX, self.layout.outer.to.0 - MARK_RADIUS_PX);
        let places = spread(&wanted, MARK_GAP_PX, low, high);
        let y = self.layout.event_y;
        for (index, event) in seen.iter().enumerate() {
            let x = places[index];
            let stroke = Stroke::hair("event", event.mark.token());
            self.sheet
                .line(stroke, &[(wanted[index], plot.to.1 - 4.0), (wanted[index], plot.to.1)])?;
            self.sheet.line(stroke, &[(wanted[index], plot.to.1), (x, y - MARK_RADIUS_PX)])?;
            event.mark.draw(self.sheet, (x, y), MARK_RADIUS_PX)?;
            let word = event.mark.word();
            let letters =
                Letters { token: event.mark.token(), size_px: 11.0, ..Letters::soft("event") };
            let from = x + MARK_RADIUS_PX + 3.0;
            let end = from + letters.width_px(word) + MARK_RADIUS_PX + 2.0;
            let blocked = places.iter().any(|other| *other > x && *other < end);
            if !blocked && end - MARK_RADIUS_PX <= self.layout.outer.to.0 {
                self.sheet.text(letters, (from, y), word)?;
            }
        }
        Ok(())
    }

    /// Moments, and the names of shaded stretches, on the row over the plot.
    fn verticals(&self) -> Result<(), DrawError> {
        let plot = self.layout.plot;
        let row = self.layout.over_y;
        let mut taken: Vec<(f64, f64)> = Vec::new();
        let letters = Letters { token: Token::Ink, bold: true, ..Letters::soft("moment") };
        for vertical in self.chart.verticals.iter().filter(|v| self.visible_x(v.x)) {
            let x = (self.x_px)(vertical.x);
            let stroke = Stroke { width_px: 1.2, ..Stroke::hair("moment", Token::Ink) };
            self.sheet.line(stroke, &[(x, plot.from.1 - 4.0), (x, plot.to.1)])?;
            let half = letters.width_px(&vertical.label) / 2.0;
            let middle = x.clamp(plot.from.0 + half, (self.layout.outer.to.0 - half).max(half));
            let centred = Letters { across: Across::Middle, ..letters };
            self.sheet.text(centred, (middle, row), &vertical.label)?;
            taken.push((middle - half - 6.0, middle + half + 6.0));
        }
        let letters = Letters { across: Across::Middle, ..Letters::soft("hold") };
        for shade in self.chart.shades.iter().filter(|shade| !shade.label.is_empty()) {
            let Some((from, to)) = self.stretch(shade.from, shade.to) else { continue };
            let label = shortened(&shade.label, SMALL_PX, false, to - from);
            let half = letters.width_px(&label) / 2.0;
            let free = |middle: &f64| {
                let room = (middle - half, middle + half);
                !taken.iter().any(|t| t.0 < room.1 && room.0 < t.1)
            };
            // In the middle of its stretch, else at its start, else at its end.
            let places = [(from + to) / 2.0, from + half, to - half];
            let Some(middle) = places.into_iter().find(free) else { continue };
            if label.chars().count() > 1 {
                self.sheet.text(letters, (middle, row), &label)?;
                taken.push((middle - half - 6.0, middle + half + 6.0));
            }
        }
        Ok(())
    }

    fn highlight(&self, drawn: &mut Drawn) -> Result<(), DrawError> {
        let Some(highlight) = &self.chart.highlight else { return Ok(()) };
        if !self.plane.window().holds(self.plane.project(highlight.at)) {
            return Ok(());
        }
        let at = ((self.x_px)(highlight.at.0), (self.y_px)(highlight.at.1));
        let width_px = 2.0 / self.sheet.theme.line_factor;
        let stroke = Stroke { width_px, ..Stroke::hair("picked", highlight.token) };
        self.sheet.ring(stroke, at, 5.5)?;
        drawn.occupied.places.push(at);
        let look = Look {
            class: "picked",
            label: highlight.label.clone(),
            token: Token::Ink,
            weight_px: 2.0,
            dash: Dash::Solid,
        };
        drawn.ends.push(End { at, look });
        Ok(())
    }

    fn label_in_plot(
        &self,
        letters: Letters,
        at: Place,
        text: &str,
        drawn: &mut Drawn,
    ) -> Result<(), DrawError> {
        let size = (letters.width_px(text), letters.size_px);
        let frame = Box2 {
            from: self.layout.plot.from,
            to: (self.layout.plot.to.0, self.layout.plot.to.1 - 2.0),
        };
        if let Some(room) = drawn.occupied.room_beside(at, size, &frame) {
            self.sheet.text(letters, (room.from.0, (room.from.1 + room.to.1) / 2.0), text)?;
        }
        Ok(())
    }

    /// Names of the lines where they end. Lines that end together are named in one column, beside
    /// the plot when that is at its edge; a line that ends alone is named where there is room.
    fn ends(&self, drawn: &mut Drawn) -> Result<(), DrawError> {
        let mut ends = std::mem::take(&mut drawn.ends);
        ends.sort_by(|a, b| a.at.0.total_cmp(&b.at.0));
        for together in ends.chunk_by(|a, b| b.at.0 - a.at.0 < TOGETHER_PX) {
            let last_px = together.iter().map(|end| end.at.0).fold(f64::MIN, f64::max);
            let wide = together.iter().map(|end| name_letters(end).width_px(&end.look.label));
            let column = if self.layout.ends_at_edge(last_px) {
                Some(self.layout.label_x())
            } else {
                let column = last_px + LEADER_PX;
                let fits = column + wide.fold(0.0, f64::max) <= self.layout.plot.to.0;
                (fits && together.len() > 1).then_some(column)
            };
            match column {
                Some(x) => self.column(together, x)?,
                None => {
                    for end in together {
                        self.label_in_plot(name_letters(end), end.at, &end.look.label, drawn)?;
                    }
                }
            }
        }
        Ok(())
    }

    fn column(&self, ends: &[End], x: f64) -> Result<(), DrawError> {
        let plot = self.layout.plot;
        let wanted: Vec<f64> = ends.iter().map(|end| end.at.1).collect();
        let places = spread(&wanted, LABEL_GAP_PX, plot.from.1, plot.to.1);
        for (end, y) in ends.iter().zip(places) {
            if (y - end.at.1).abs() > 2.5 {
                let leader = Stroke::hair("leader", end.look.token);
                let corner = x - 6.5;
                self.sheet.line(leader, &[(corner, end.at.1), (x - 2.0, y)])?;
            }
            self.sheet.text(name_letters(end), (x, y), &end.look.label)?;
        }
        Ok(())
    }
}

fn name_letters(end: &End) -> Letters {
    Letters { token: end.look.token, bold: true, rim: true, ..Letters::soft("name") }
}
