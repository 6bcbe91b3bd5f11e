//! Undo, redo and gestures: a line of documents with a place in it.

use crate::{Document, SurfaceQuantity};

/// Edits that join the undo step before them when that was of the same kind.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Joining {
    /// A key held down on a handle.
    Nudge(SurfaceQuantity),
    /// A key held down on the storm motion.
    Motion,
    /// Typing reasons.
    Reasons,
}

/// The document and its past and undone future.
///
/// **Invariant:** undoing gives back exactly the document that was there, because whole documents are kept.
#[derive(Debug, Clone, PartialEq, Default)]
pub(crate) struct History {
    document: Document,
    undo: Vec<Document>,
    redo: Vec<Document>,
    /// The document when the gesture under way began.
    gesture: Option<Document>,
    last: Option<Joining>,
}

impl History {
    pub(crate) fn of(document: Document) -> Self {
        Self {
            document,
            ..Self::default()
        }
    }

    pub(crate) fn document(&self) -> &Document {
        &self.document
    }

    pub(crate) fn in_gesture(&self) -> bool {
        self.gesture.is_some()
    }

    pub(crate) fn can_undo(&self) -> bool {
        !self.undo.is_empty()
    }

    pub(crate) fn can_redo(&self) -> bool {
        !self.redo.is_empty()
    }

    /// Puts a new document in place. `kind` and `join`: the edit's kind, and whether it joins a step of that kind before it.
    /// True when it differs from the one before.
    pub(crate) fn set(&mut self, document: Document, kind: Option<Joining>, join: bool) -> bool {
        if document == self.document {
            return false;
        }
        let before = std::mem::replace(&mut self.document, document);
        if self.gesture.is_none() {
            let joins = join && kind.is_some() && self.last == kind;
            if !joins {
                self.undo.push(before);
            }
            self.redo.clear();
            self.last = kind;
        }
        true
    }

    pub(crate) fn begin(&mut self) {
        if self.gesture.is_none() {
            self.gesture = Some(self.document.clone());
        }
        self.last = None;
    }

    /// Ends the gesture; true when it changed anything.
    pub(crate) fn end(&mut self) -> bool {
        self.last = None;
        match self.gesture.take() {
            Some(before) if before != self.document => {
                self.undo.push(before);
                self.redo.clear();
                true
            }
            _ => false,
        }
    }

    /// Gives the gesture up; true when that changed the document.
    pub(crate) fn cancel(&mut self) -> bool {
        self.last = None;
        match self.gesture.take() {
            Some(before) => {
                let changed = before != self.document;
                self.document = before;
                changed
            }
            None => false,
        }
    }

    /// One step back; true when there was one.
    pub(crate) fn undo(&mut self) -> bool {
        self.last = None;
        let Some(before) = self.undo.pop() else {
            return false;
        };
        let after = std::mem::replace(&mut self.document, before);
        self.redo.push(after);
        true
    }

    /// One step forward; true when there was one.
    pub(crate) fn redo(&mut self) -> bool {
        self.last = None;
        let Some(after) = self.redo.pop() else {
            return false;
        };
        let before = std::mem::replace(&mut self.document, after);
        self.undo.push(before);
        true
    }

    /// The next edit starts a step of its own.
    pub(crate) fn settle(&mut self) {
        self.last = None;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn document(reasons: &str) -> Document {
        Document {
            reasons: reasons.to_owned(),
            ..Document::default()
        }
    }

    #[test]
    fn undo_and_redo_walk_the_same_documents() {
        let mut history = History::default();
        let steps: Vec<Document> = ["a", "b", "c"].map(document).into();
        for step in &steps {
            assert!(history.set(step.clone(), None, false));
        }
        for step in steps.iter().rev().skip(1) {
            assert!(history.undo());
            assert_eq!(history.document(), step);
        }
        assert!(history.undo());
        assert_eq!(*history.document(), Document::default());
        assert!(!history.undo());
        for step in &steps {
            assert!(history.redo());
            assert_eq!(history.document(), step);
        }
        assert!(!history.redo());
    }

    #[test]
    fn a_gesture_is_one_step_and_can_be_given_up_without_losing_the_future() {
        let mut history = History::default();
        history.set(document("a"), None, false);
        history.set(document("b"), None, false);
        history.undo();
        history.begin();
        for text in ["x", "y", "z"] {
            history.set(document(text), None, false);
        }
        assert!(history.cancel());
        assert_eq!(*history.document(), document("a"));
        assert!(history.can_redo(), "giving a drag up is not a change");

        history.begin();
        for text in ["x", "y", "z"] {
            history.set(document(text), None, false);
        }
        assert!(history.end());
        assert!(!history.can_redo());
        history.undo();
        assert_eq!(*history.document(), document("a"));
    }

    #[test]
    fn a_gesture_without_effect_is_no_step() {
        let mut history = History::default();
        history.begin();
        history.set(document("x"), None, false);
        history.set(Document::default(), None, false);
        assert!(!history.end());
        assert!(!history.can_undo());
    }

    #[test]
    fn typing_is_one_step_until_something_else_happens() {
        let mut history = History::default();
        for text in ["w", "we", "wet"] {
            history.set(document(text), Some(Joining::Reasons), true);
        }
        history.settle();
        history.set(document("wet!"), Some(Joining::Reasons), true);
        history.undo();
        assert_eq!(*history.document(), document("wet"));
        history.undo();
        assert_eq!(*history.document(), Document::default());
    }
}
