//! The small bar beside a mark: where the reading stands in its band and before its limits.

use super::description::Dash;
use super::instrument::LimitKind;
use super::sheet::{Stroke, small_picture};
use super::theme::{Theme, Token};

const WIDTH_PX: f64 = 112.0;
const HEIGHT_PX: f64 = 16.0;
const EDGE_PX: f64 = 4.0;

/// Draws the bar as SVG; `name` says in words what it shows. Empty without a finite band.
pub fn band_bar(
    band: (f64, f64),
    limits: &[(LimitKind, f64)],
    reading: Option<f64>,
    name: &str,
    theme: &Theme,
) -> String {
    let (low, high) = band;
    let reading = reading.filter(|value| value.is_finite());
    let limits = limits.iter().filter(|(_, value)| value.is_finite());
    let shown = [low, high].into_iter().chain(reading).chain(limits.clone().map(|limit| limit.1));
    let (least, most) = shown.fold((f64::MAX, f64::MIN), |(l, m), v| (l.min(v), m.max(v)));
    if !(low.is_finite() && high.is_finite() && least < most) {
        return String::new();
    }
    // The band is never against the end of the bar, where a reading below it would be hidden.
    let air = 0.08 * (most - least);
    let px = |value: f64| {
        let part = (value - least + air) / (most - least + 2.0 * air);
        EDGE_PX + part * (WIDTH_PX - 2.0 * EDGE_PX)
    };
    let middle = HEIGHT_PX / 2.0;
    small_picture("band-bar", (WIDTH_PX, HEIGHT_PX), theme, name, |sheet| {
        sheet.rect("band", Token::Band, (px(low), middle - 4.5), (px(high), middle + 4.5))?;
        let rail = Stroke::hair("rail", Token::Soft);
        sheet.line(rail, &[(EDGE_PX, middle), (WIDTH_PX - EDGE_PX, middle)])?;
        for (kind, value) in limits {
            // Longer for graver: Stop is told from Watch without its colour.
            let half = match kind {
                LimitKind::Watch => 2.5,
                LimitKind::Review => 4.5,
                LimitKind::Stop => 7.0,
            };
            let stroke =
                Stroke { class: "limit", token: kind.token(), width_px: 1.6, dash: Dash::Solid };
            let x = px(*value);
            sheet.line(stroke, &[(x, middle - half), (x, middle + half)])?;
        }
        match reading {
            Some(value) => sheet.disc("reading", Token::Ink, (px(value), middle), 3.2),
            None => Ok(()),
        }
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::chart::theme::LIGHT;

    #[test]
    fn a_missing_reading_has_no_dot_and_a_missing_band_no_bar() {
        let limits = [(LimitKind::Stop, 96.0)];
        let with = band_bar((68.0, 81.0), &limits, Some(91.6), "in band", &LIGHT);
        assert!(with.contains("class=\"reading "));
        let without = band_bar((68.0, 81.0), &limits, Some(f64::NAN), "in band", &LIGHT);
        assert!(!without.contains("class=\"reading ") && without.contains("class=\"limit "));
        assert!(band_bar((f64::NAN, 81.0), &limits, Some(1.0), "", &LIGHT).is_empty());
    }
}
