//! The document, its commands, undo, results by revision; no window
