//! Undo and redo by name. A gesture (a drag, a value being typed) is one step, however many changes it
//! makes on the way.

use super::state::Document;

/// One step: its name and the document on the other side of it.
#[derive(Clone, Debug)]
struct Step {
    name: String,
    document: Document,
}

/// Past and future of the document.
#[derive(Clone, Debug, Default)]
pub struct History {
    past: Vec<Step>,
    future: Vec<Step>,
    /// Name of the gesture under way.
    gesture: Option<String>,
}

/// Steps kept.
const MOST_STEPS: usize = 500;

impl History {
    /// Notes the document as it is before a change. `gesture` joins the change to a gesture of the
    /// same name under way.
    pub fn note(&mut self, name: &str, before: &Document, gesture: bool) {
        self.future.clear();
        if gesture && self.gesture.as_deref() == Some(name) {
            return;
        }
        self.gesture = gesture.then(|| name.to_owned());
        self.past.push(Step { name: name.to_owned(), document: before.clone() });
        if self.past.len() > MOST_STEPS {
            self.past.remove(0);
        }
    }

    /// Ends the gesture under way.
    pub fn settle(&mut self) {
        self.gesture = None;
    }

    /// The name of the step that undo would take back.
    pub fn undo_name(&self) -> Option<&str> {
        self.past.last().map(|s| s.name.as_str())
    }

    /// The name of the step that redo would do again.
    pub fn redo_name(&self) -> Option<&str> {
        self.future.last().map(|s| s.name.as_str())
    }

    /// Takes the latest step back; gives its name.
    pub fn undo(&mut self, document: &mut Document) -> Option<String> {
        self.settle();
        let step = self.past.pop()?;
        let now = std::mem::replace(document, step.document);
        self.future.push(Step { name: step.name.clone(), document: now });
        Some(step.name)
    }

    /// Does the latest step taken back again; gives its name.
    pub fn redo(&mut self, document: &mut Document) -> Option<String> {
        self.settle();
        let step = self.future.pop()?;
        let now = std::mem::replace(document, step.document);
        self.past.push(Step { name: step.name.clone(), document: now });
        Some(step.name)
    }
}
