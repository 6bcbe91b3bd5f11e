//! Where everything goes. A pure function of the window's size, so that its promises can be tested:
//! the chart never falls under its least size, and CAPE with its range never disappears.

use eframe::egui::{Rect, Vec2, pos2, vec2};

/// Narrower than this, findings and numbers share a column and the tray becomes a drop-down.
pub(crate) const NARROW: f32 = 1100.0;
/// Lower than this, the response becomes its sentence.
pub(crate) const LOW: f32 = 650.0;
/// The chart never falls under this.
pub(crate) const LEAST_CHART: Vec2 = vec2(420.0, 380.0);
/// The smallest window for which all of this holds.
pub(crate) const LEAST_WINDOW: Vec2 = vec2(720.0, 530.0);

const BAR: f32 = 28.0;
const VERDICT: f32 = 38.0;
const STATUS: f32 = 20.0;
const TITLE: f32 = 50.0;
const LOW_TITLE: f32 = 28.0;
/// Two lines.
const SENTENCE: f32 = 36.0;
/// Three parcels with value and range.
const CAPE: f32 = 78.0;
const GAP: f32 = 4.0;

/// Rectangles of one frame, in points.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Layout {
    /// Menus, messages, and in a narrow window the tray's drop-down.
    pub bar: Rect,
    /// Tray; `None`: a drop-down in the bar.
    pub tray: Option<Rect>,
    /// Station and times.
    pub title: Rect,
    /// The title takes one line.
    pub low: bool,
    /// Chart.
    pub chart: Rect,
    /// The sentence above the response.
    pub sentence: Rect,
    /// Response curve; `None`: the sentence only.
    pub response: Option<Rect>,
    /// Findings and numbers.
    pub side: Side,
    /// Verdict.
    pub verdict: Rect,
    /// Status line.
    pub status: Rect,
}

/// The right-hand column.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Side {
    /// One above the other.
    Stacked {
        /// Findings.
        findings: Rect,
        /// Numbers, CAPE first.
        numbers: Rect,
    },
    /// One at a time; CAPE stays above them.
    Tabbed {
        /// CAPE with its range.
        cape: Rect,
        /// The chosen one, with its tabs.
        tabs: Rect,
    },
}

impl Layout {
    /// For a window of this size.
    pub fn of(window: Rect) -> Self {
        let (width, height) = (window.width(), window.height());
        let narrow = width < NARROW;
        let low = height < LOW;

        let bar = Rect::from_min_size(window.min, vec2(width, BAR));
        let status_top = window.top() + (height - STATUS).max(BAR);
        let status = Rect::from_min_size(pos2(window.left(), status_top), vec2(width, STATUS));
        let verdict = Rect::from_min_size(
            pos2(window.left(), status.top() - VERDICT),
            vec2(width, VERDICT),
        );
        let (top, bottom) = (bar.bottom(), verdict.top());

        let tray_width = (!narrow).then(|| (width * 0.16).clamp(230.0, 320.0));
        let left = window.left() + tray_width.map_or(0.0, |tray| tray + GAP);
        let side_width = if narrow {
            (width - LEAST_CHART.x - GAP).min(width * 0.46).min(430.0)
        } else {
            (width * 0.27).clamp(394.0, 600.0)
        }
        .max(0.0);
        let side_left = (window.right() - side_width).max(left + LEAST_CHART.x + GAP);
        let centre = |from: f32, high: f32| {
            Rect::from_min_max(pos2(left, from), pos2(side_left - GAP, from + high))
        };

        let title_high = if low { LOW_TITLE } else { TITLE };
        let title = centre(top, title_high);
        let room = bottom - title.bottom() - SENTENCE;
        let response_high = if low {
            0.0
        } else {
            (room * 0.24).clamp(110.0, 280.0).min(room - LEAST_CHART.y)
        };
        let chart = centre(title.bottom(), (room - response_high).max(LEAST_CHART.y));
        let sentence = centre(chart.bottom(), SENTENCE);
        let response = (!low).then(|| centre(sentence.bottom(), response_high));

        let side = Rect::from_min_max(
            pos2(side_left, top),
            pos2(window.right().max(side_left), bottom),
        );
        let side = if narrow {
            Side::Tabbed {
                cape: Rect::from_min_size(side.min, vec2(side.width(), CAPE)),
                tabs: Rect::from_min_max(pos2(side.left(), side.top() + CAPE + GAP), side.max),
            }
        } else {
            // All rows of the table and a note or two; what is left goes to the findings.
            let numbers_high = (side.height() * 0.5).clamp(270.0, 370.0);
            let split = (side.bottom() - numbers_high).max(side.top());
            Side::Stacked {
                findings: Rect::from_min_max(side.min, pos2(side.right(), split - GAP)),
                numbers: Rect::from_min_max(pos2(side.left(), split), side.max),
            }
        };
        Self {
            bar,
            tray: tray_width.map(|tray| {
                Rect::from_min_max(pos2(window.left(), top), pos2(window.left() + tray, bottom))
            }),
            title,
            low,
            chart,
            sentence,
            response,
            side,
            verdict,
            status,
        }
    }

    /// The whole of the centre below the title, for a page that takes it all.
    pub fn page(&self) -> Rect {
        self.chart
            .union(self.sentence)
            .union(self.response.unwrap_or(self.sentence))
    }

    /// The strips between the panels: all that shows of the desk behind them.
    pub fn gaps(&self) -> Vec<Rect> {
        let (top, bottom) = (self.bar.bottom(), self.verdict.top());
        let strip = |left: f32| Rect::from_min_max(pos2(left, top), pos2(left + GAP, bottom));
        let mut gaps: Vec<Rect> = self
            .tray
            .map(|tray| strip(tray.right()))
            .into_iter()
            .collect();
        gaps.push(strip(self.chart.right()));
        let above = match self.side {
            Side::Stacked { findings, .. } => findings,
            Side::Tabbed { cape, .. } => cape,
        };
        gaps.push(Rect::from_min_size(
            above.left_bottom(),
            vec2(above.width(), GAP),
        ));
        gaps
    }

    #[cfg(test)]
    fn named(&self) -> Vec<(&'static str, Rect)> {
        let mut all = vec![
            ("bar", self.bar),
            ("title", self.title),
            ("chart", self.chart),
            ("sentence", self.sentence),
            ("verdict", self.verdict),
            ("status", self.status),
        ];
        all.extend(self.tray.map(|tray| ("tray", tray)));
        all.extend(self.response.map(|response| ("response", response)));
        match self.side {
            Side::Stacked { findings, numbers } => {
                all.extend([("findings", findings), ("numbers", numbers)]);
            }
            Side::Tabbed { cape, tabs } => all.extend([("cape", cape), ("tabs", tabs)]),
        }
        all
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn sizes() -> impl Iterator<Item = Vec2> {
        let widths = (LEAST_WINDOW.x as u32..3000).step_by(61);
        widths.flat_map(|w| {
            (LEAST_WINDOW.y as u32..1700)
                .step_by(47)
                .map(move |h| vec2(w as f32, h as f32))
        })
    }

    fn layout(size: Vec2) -> (Rect, Layout) {
        let window = Rect::from_min_size(pos2(0.0, 0.0), size);
        (window, Layout::of(window))
    }

    #[test]
    fn nothing_overlaps_or_leaves_the_window() {
        for size in sizes() {
            let (window, layout) = layout(size);
            let all = layout.named();
            for (i, (name, rect)) in all.iter().enumerate() {
                assert!(rect.is_positive(), "{size:?}: {name} is {rect:?}");
                assert!(
                    window.expand(0.01).contains_rect(*rect),
                    "{size:?}: {name} is {rect:?}"
                );
                for (other_name, other) in all.iter().skip(i + 1) {
                    let shared = rect.shrink(0.01).intersect(other.shrink(0.01));
                    assert!(!shared.is_positive(), "{size:?}: {name} and {other_name}");
                }
            }
        }
    }

    #[test]
    fn panels_and_gaps_cover_the_window_once() {
        for size in sizes() {
            let (window, layout) = layout(size);
            let area: f32 = layout
                .named()
                .into_iter()
                .map(|(_, rect)| rect.area())
                .chain(layout.gaps().into_iter().map(|gap| gap.area()))
                .sum();
            assert!((area - window.area()).abs() < 2.0, "{size:?}: {area}");
        }
    }

    #[test]
    fn the_chart_keeps_its_least_size() {
        for size in sizes() {
            let (_, layout) = layout(size);
            assert!(
                layout.chart.width() >= LEAST_CHART.x - 0.01,
                "{size:?}: {:?}",
                layout.chart
            );
            assert!(
                layout.chart.height() >= LEAST_CHART.y - 0.01,
                "{size:?}: {:?}",
                layout.chart
            );
        }
        // Even in a window smaller than it was made for.
        let (_, tiny) = layout(vec2(300.0, 200.0));
        assert!(tiny.chart.width() >= LEAST_CHART.x && tiny.chart.height() >= LEAST_CHART.y);
    }

    #[test]
    fn small_window_rules() {
        for size in sizes() {
            let (_, layout) = layout(size);
            assert_eq!(layout.tray.is_none(), size.x < NARROW, "{size:?}");
            assert_eq!(layout.response.is_none(), size.y < LOW, "{size:?}");
            match layout.side {
                Side::Stacked { numbers, .. } => {
                    assert!(size.x >= NARROW, "{size:?}");
                    assert!(numbers.height() >= 150.0, "{size:?}: {numbers:?}");
                }
                Side::Tabbed { cape, tabs } => {
                    assert!(size.x < NARROW, "{size:?}");
                    assert!(
                        cape.height() >= CAPE - 0.01 && cape.width() >= 290.0,
                        "{size:?}: {cape:?}"
                    );
                    assert!(tabs.height() >= 200.0, "{size:?}: {tabs:?}");
                }
            }
        }
    }
}
