//! Waking the window from a worker.

use crate::Waker;
use std::sync::{Arc, Mutex, PoisonError};

/// A waker that may be set after the workers have started.
#[derive(Clone, Default)]
pub(crate) struct SharedWaker(Arc<Mutex<Option<Waker>>>);

impl SharedWaker {
    pub(crate) fn set(&self, waker: Waker) {
        *self.0.lock().unwrap_or_else(PoisonError::into_inner) = Some(waker);
    }

    pub(crate) fn wake(&self) {
        let waker = self
            .0
            .lock()
            .unwrap_or_else(PoisonError::into_inner)
            .clone();
        if let Some(waker) = waker {
            waker();
        }
    }
}
