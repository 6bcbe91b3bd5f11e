//! How long the computing inside frames takes.

use std::collections::VecDeque;
use std::time::Duration;

/// Frames remembered.
const KEPT: usize = 400;

/// Computing times of the last frames that had something to compute.
#[derive(Debug, Clone, Default)]
pub(crate) struct Timing {
    frames: VecDeque<Duration>,
    painting: Duration,
}

impl Timing {
    /// A frame has computed for so long.
    pub fn computed(&mut self, time: Duration) {
        if self.frames.len() == KEPT {
            self.frames.pop_front();
        }
        self.frames.push_back(time);
    }

    /// A frame was put together in so long.
    pub fn painted(&mut self, time: Duration) {
        self.painting = time;
    }

    /// The value below which a share of the frames lies (nearest rank).
    fn quantile(&self, share: f64) -> Option<Duration> {
        let mut sorted: Vec<Duration> = self.frames.iter().copied().collect();
        sorted.sort_unstable();
        let rank = (share * sorted.len() as f64).ceil() as usize;
        sorted.get(rank.saturating_sub(1)).copied()
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
            "last {}, p50 {}, p99 {} of {} · layout {}",
            ms(self.frames.back().copied()),
            ms(self.quantile(0.5)),
            ms(self.quantile(0.99)),
            self.frames.len(),
            ms(Some(self.painting)),
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nearest_rank() {
        let mut timing = Timing::default();
        assert_eq!(timing.quantile(0.5), None);
        for ms in (1..=100).rev() {
            timing.computed(Duration::from_millis(ms));
        }
        assert_eq!(timing.quantile(0.5), Some(Duration::from_millis(50)));
        assert_eq!(timing.quantile(0.99), Some(Duration::from_millis(99)));
        assert_eq!(timing.quantile(1.0), Some(Duration::from_millis(100)));
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
        assert_eq!(timing.quantile(1.0), Some(Duration::from_millis(1)));
    }
}
