//! How long the computing inside frames takes.

use std::collections::VecDeque;
use std::time::{Duration, Instant};

/// Frames remembered.
const KEPT: usize = 400;

/// Frames that follow each other sooner than this belong to one movement.
const TOGETHER: Duration = Duration::from_millis(250);

/// Computing times of the last frames that had something to compute.
#[derive(Debug, Clone, Default)]
pub(crate) struct Timing {
    frames: VecDeque<Duration>,
    painting: Duration,
    last: Option<Instant>,
    intervals: VecDeque<Duration>,
}

impl Timing {
    /// A frame has computed for so long.
    pub fn computed(&mut self, time: Duration) {
        keep(&mut self.frames, time);
    }

    /// A frame was put together in so long, and is done now.
    pub fn painted(&mut self, time: Duration, now: Instant) {
        self.painting = time;
        let since = self.last.replace(now).map(|last| now - last);
        if let Some(since) = since.filter(|&since| since < TOGETHER) {
            keep(&mut self.intervals, since);
        }
    }

    /// Frames a second while something moves, from the median interval.
    fn rate(&self) -> Option<f64> {
        quantile(&self.intervals, 0.5).map(|interval| 1.0 / interval.as_secs_f64().max(1e-6))
    }

    /// One line for people.
    pub fn line(&self) -> String {
        let ms = |time: Option<Duration>| {
            time.map_or_else(
                || "–".to_owned(),
                |time| format!("{:.2} ms", time.as_secs_f64() * 1e3),
            )
        };
        format!(
            "last {}, p50 {}, p99 {} of {} · layout {} · {} frames/s",
            ms(self.frames.back().copied()),
            ms(quantile(&self.frames, 0.5)),
            ms(quantile(&self.frames, 0.99)),
            self.frames.len(),
            ms(Some(self.painting)),
            self.rate()
                .map_or_else(|| "–".to_owned(), |rate| format!("{rate:.0}")),
        )
    }
}

fn keep(times: &mut VecDeque<Duration>, time: Duration) {
    if times.len() == KEPT {
        times.pop_front();
    }
    times.push_back(time);
}

/// The value below which a share of the times lies (nearest rank).
fn quantile(times: &VecDeque<Duration>, share: f64) -> Option<Duration> {
    let mut sorted: Vec<Duration> = times.iter().copied().collect();
    sorted.sort_unstable();
    let rank = (share * sorted.len() as f64).ceil() as usize;
    sorted.get(rank.saturating_sub(1)).copied()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nearest_rank() {
        let mut timing = Timing::default();
        assert_eq!(quantile(&timing.frames, 0.5), None);
        for ms in (1..=100).rev() {
            timing.computed(Duration::from_millis(ms));
        }
        assert_eq!(
            quantile(&timing.frames, 0.5),
            Some(Duration::from_millis(50))
        );
        assert_eq!(
            quantile(&timing.frames, 0.99),
            Some(Duration::from_millis(99))
        );
        assert_eq!(
            quantile(&timing.frames, 1.0),
            Some(Duration::from_millis(100))
        );
    }

    #[test]
    fn pauses_do_not_count() {
        let mut timing = Timing::default();
        let mut now = Instant::now();
        for step in [0, 50, 50, 5000, 50, 50] {
            now += Duration::from_millis(step);
            timing.painted(Duration::ZERO, now);
        }
        assert_eq!(timing.intervals.len(), 4);
        assert!((timing.rate().unwrap() - 20.0).abs() < 1e-9);
    }

    #[test]
    fn old_frames_go() {
        let mut timing = Timing::default();
        for _ in 0..KEPT {
            timing.computed(Duration::from_secs(1));
        }
        for _ in 0..KEPT {
            timing.computed(Duration::from_millis(1));
        }
        assert_eq!(
            quantile(&timing.frames, 1.0),
            Some(Duration::from_millis(1))
        );
    }
}
