//! An ordered list of preparation steps: reorder, take away, add.

use crate::app::editor::{Action, FIELD};
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::eval::kind::step::{parameters, step_name};
use crate::study::settings::prepare::{Shelf, Step};
use crate::study::settings::slot::Value;
use iced::widget::{Column, Row, column, row};
use iced::{Alignment, Length};

/// What happens to the steps.
#[derive(Clone, Debug)]
pub enum Message {
    /// A step is taken before the one above it.
    Up(usize),
    /// A step is taken after the one below it.
    Down(usize),
    /// A step is taken away.
    Remove(usize),
    /// A step of a shelf is added: the shelf, and the step on it.
    Add(usize, usize),
    /// The steps are as they should be.
    Done,
}

/// Steps that are being arranged.
#[derive(Clone, Debug)]
pub struct Steps {
    steps: Vec<Step>,
    began: Vec<Step>,
    shelves: Vec<Shelf>,
}

impl Steps {
    /// Begins with the steps that stand.
    #[must_use]
    pub fn new(value: Option<Value>) -> Self {
        let steps = match value {
            Some(Value::Steps(steps)) => steps,
            Some(_) | None => Vec::new(),
        };
        Self {
            began: steps.clone(),
            steps,
            shelves: Step::shelves(),
        }
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        let n_steps = self.steps.len();
        match message {
            Message::Up(at) if at > 0 && at < n_steps => self.steps.swap(at, at - 1),
            Message::Down(at) if at + 1 < n_steps => self.steps.swap(at, at + 1),
            Message::Remove(at) if at < n_steps => {
                let _ = self.steps.remove(at);
            }
            Message::Add(shelf, at) => {
                let steps = self.shelves.get(shelf).map(|shelf| &shelf.steps);
                if let Some(step) = steps.and_then(|steps| steps.get(at)) {
                    self.steps.insert(self.place_of(step), step.clone());
                }
            }
            Message::Done if self.steps == self.began => return Action::Close,
            Message::Done => return Action::Commit(Value::Steps(self.steps.clone())),
            Message::Up(_) | Message::Down(_) | Message::Remove(_) => {}
        }
        Action::None
    }

    /// Where a step is added: at the end, but before the centring and scaling that end the list,
    /// unless it belongs there itself.
    fn place_of(&self, step: &Step) -> usize {
        if ends(step) {
            return self.steps.len();
        }
        let ending = self.steps.iter().rev().take_while(|step| ends(step));
        self.steps.len() - ending.count()
    }

    /// The steps, and what can be added.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let n_steps = self.steps.len();
        let steps = self.steps.iter().enumerate().map(|(at, step)| {
            row![
                text::quiet(format!("{}.", at + 1)).width(space::GAP + space::SMALL),
                text::body(step_name(step)),
                text::quiet(details(step)).width(Length::Fill),
                press::words("Earlier", Message::Up(at)).only_if(at > 0),
                press::words("Later", Message::Down(at)).only_if(at + 1 < n_steps),
                press::words("Remove", Message::Remove(at)).look(Look::Attention),
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center)
            .into()
        });
        let shelves = self.shelves.iter().enumerate().map(|(shelf_at, shelf)| {
            let add = shelf.steps.iter().enumerate().map(|(at, step)| {
                press::words(step_name(step), Message::Add(shelf_at, at))
                    .look(Look::Accent)
                    .into()
            });
            column![
                text::quiet(shelf.purpose),
                Row::with_children(add).spacing(space::TIGHT).wrap(),
            ]
            .into()
        });
        column![
            Column::with_children(steps).spacing(space::TIGHT),
            row![press::main("Set", Message::Done).id(FIELD)],
            text::quiet("Press a step to add it; centring and scaling stay at the end."),
            Column::with_children(shelves).spacing(space::TIGHT),
        ]
        .spacing(space::SMALL)
        .into()
    }
}

/// Whether a step ends a list.
fn ends(step: &Step) -> bool {
    matches!(step, Step::Center | Step::Scale { .. })
}

/// The settings of a step and its class.
fn details(step: &Step) -> String {
    let class = step.class().words();
    match parameters(step) {
        none if none.is_empty() => class.to_owned(),
        parameters => format!("{parameters}; {class}"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn place(shelves: &[Shelf], name: &str) -> (usize, usize) {
        let on = |shelf: &Shelf| shelf.steps.iter().position(|step| step_name(step) == name);
        shelves
            .iter()
            .enumerate()
            .find_map(|(at, shelf)| on(shelf).map(|step| (at, step)))
            .expect("the step is on a shelf")
    }

    #[test]
    fn a_step_is_added_before_the_centring_and_scaling_at_the_end() {
        let mut steps = Steps::new(Some(Value::Steps(vec![Step::Center])));
        let (shelf, at) = place(&steps.shelves, "standard normal variate");
        let _ = steps.update(Message::Add(shelf, at));
        let (shelf, at) = place(&steps.shelves, "unit-variance scaling");
        let _ = steps.update(Message::Add(shelf, at));
        let names: Vec<&str> = steps.steps.iter().map(step_name).collect();
        let expected = [
            "standard normal variate",
            "centring",
            "unit-variance scaling",
        ];
        assert_eq!(names, expected);
    }

    #[test]
    fn steps_change_places_and_go_and_are_set_as_they_stand() {
        let mut steps = Steps::new(Some(Value::Steps(vec![
            Step::Center,
            Step::StandardNormalVariate,
            Step::AverageUnits,
        ])));
        let _ = steps.update(Message::Down(0));
        let _ = steps.update(Message::Remove(2));
        let Action::Commit(Value::Steps(set)) = steps.update(Message::Done) else {
            panic!("changed steps are set");
        };
        assert_eq!(set, [Step::StandardNormalVariate, Step::Center]);
    }
}
