//! The table of a Data cell, opened in place: look, jump to a column, correct a value, exclude a
//! sample; each with a reason.

use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::grid::{Align, Condition, Did, Field, Grid, Show, Source, StandsOut};
use crate::app::widget::press;
use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::eval::kind::data::Dataset;
use crate::figure::Meaning;
use crate::study::cell::CellId;
use crate::study::settings::Settings;
use crate::study::settings::data::{Correction, Data, Exclusion, OutcomeSeen};
use crate::table::Table;
use crate::table::column::Value;
use iced::widget::{Row, column, row, text_input};
use iced::{Alignment, Length, Task};
use std::borrow::Cow;
use std::sync::Arc;

/// The name by which the field of the form is given the focus.
pub const FIELD: &str = "table field";

/// What happens to the table.
#[derive(Clone, Debug)]
pub enum Message {
    /// Something was done in the grid.
    Did(Did),
    /// A part of a column's name is being typed.
    Jumping(String),
    /// The column whose name is typed is shown.
    Jump,
    /// The corrected value is being typed.
    Value(String),
    /// The reason is being typed.
    Reason(String),
    /// It is said whether the outcome had been seen.
    Seen(OutcomeSeen),
    /// The form is as it should be.
    Record,
    /// The form is left.
    Leave,
    /// The table is closed.
    Close,
}

/// What the table wants of the screen.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// Settings are to be set.
    Commit {
        /// The label of the step.
        label: String,
        /// The settings.
        settings: Box<Settings>,
    },
    /// The table is to be closed.
    Close,
    /// Something is done outside.
    Run(Task<Message>),
}

/// What is being recorded.
#[derive(Clone, Debug, PartialEq, Eq)]
enum Act {
    /// A change of a value: the sample, the column, and the value as it stands.
    Correct {
        sample: String,
        column: String,
        from: String,
    },
    /// The removal of a sample.
    Exclude { sample: String },
}

#[derive(Clone, Debug)]
struct Form {
    act: Act,
    value: String,
    reason: String,
    seen: OutcomeSeen,
    problem: Option<Problem>,
}

/// The open table.
#[derive(Debug)]
pub struct Open {
    /// The Data cell.
    pub cell: CellId,
    samples: Samples,
    show: Show,
    jump: String,
    form: Option<Form>,
}

/// The samples as a grid asks for them.
#[derive(Debug)]
struct Samples {
    dataset: Arc<Dataset>,
    version: u64,
    corrected: Vec<(String, String)>,
    roles: Vec<(String, &'static str)>,
}

impl Open {
    /// Opens the table of a cell.
    #[must_use]
    pub fn new(cell: CellId, dataset: Arc<Dataset>, settings: &Data) -> Self {
        Self {
            cell,
            samples: Samples::new(dataset, settings, 1),
            show: Show::default(),
            jump: String::new(),
            form: None,
        }
    }

    /// The cell has another outcome or other settings.
    pub fn refresh(&mut self, dataset: Arc<Dataset>, settings: &Data) {
        self.samples = Samples::new(dataset, settings, self.samples.version + 1);
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message, settings: &Data) -> Action {
        match message {
            Message::Close => return Action::Close,
            Message::Leave => self.form = None,
            Message::Did(Did::At { .. } | Did::Head(_)) => {}
            Message::Did(Did::Opened { row, column }) => {
                let act = Act::Correct {
                    sample: self.samples.row(row).into_owned(),
                    column: self.samples.name(column).to_owned(),
                    from: self.samples.typed(row, column),
                };
                return self.begin(act);
            }
            Message::Did(Did::Row(row)) => {
                let sample = self.samples.row(row).into_owned();
                return self.begin(Act::Exclude { sample });
            }
            Message::Jumping(jump) => self.jump = jump,
            Message::Jump => {
                let names: Vec<String> = self
                    .samples
                    .table()
                    .columns()
                    .iter()
                    .map(|column| column.name.clone())
                    .collect();
                let (found, _) = crate::app::editor::column::found(&names, &self.jump);
                if let Some(first) = found.first() {
                    self.show = Show {
                        column: *first,
                        row: None,
                        serial: self.show.serial + 1,
                    };
                }
            }
            Message::Value(value) => self.change(|form| form.value = value),
            Message::Reason(reason) => self.change(|form| form.reason = reason),
            Message::Seen(seen) => self.change(|form| form.seen = seen),
            Message::Record => return self.record(settings),
        }
        Action::None
    }

    fn begin(&mut self, act: Act) -> Action {
        let value = match &act {
            Act::Correct { from, .. } => from.clone(),
            Act::Exclude { .. } => String::new(),
        };
        self.form = Some(Form {
            act,
            value,
            reason: String::new(),
            seen: OutcomeSeen::NotSaid,
            problem: None,
        });
        Action::Run(iced::widget::operation::focus(FIELD))
    }

    fn change(&mut self, change: impl FnOnce(&mut Form)) {
        if let Some(form) = &mut self.form {
            form.problem = None;
            change(form);
        }
    }

    fn record(&mut self, settings: &Data) -> Action {
        let Some(form) = &mut self.form else {
            return Action::None;
        };
        let reason = form.reason.trim().to_owned();
        if reason.is_empty() {
            form.problem = Some(
                Problem::new("no-reason", "A recorded act needs a reason; it is printed.")
                    .mend("Type in a few words why."),
            );
            return Action::None;
        }
        let mut data = settings.clone();
        let label = match &form.act {
            Act::Correct {
                sample,
                column,
                from,
            } => {
                if form.value.trim() == from {
                    form.problem = Some(
                        Problem::new("no-change", "The value is the same as before.")
                            .mend("Type the value that it should be; blank for a missing value."),
                    );
                    return Action::None;
                }
                let mut corrections = data.corrections.as_ref().clone();
                corrections.push(Correction {
                    sample: sample.clone(),
                    column: column.clone(),
                    from: from.clone(),
                    to: form.value.trim().to_owned(),
                    reason,
                    outcome: form.seen,
                });
                data.corrections = Arc::new(corrections);
                format!("correct {column} of {sample}")
            }
            Act::Exclude { sample } => {
                let mut exclusions = data.exclusions.as_ref().clone();
                exclusions.push(Exclusion {
                    sample: sample.clone(),
                    reason,
                    outcome: form.seen,
                });
                data.exclusions = Arc::new(exclusions);
                format!("exclude {sample}")
            }
        };
        self.form = None;
        Action::Commit {
            label,
            settings: Box::new(Settings::Data(data)),
        }
    }

    /// The table, with what is being recorded below it. The sample or predictor that stands out in
    /// figures stands out in it, too.
    #[must_use]
    pub fn view(&self, highlight: Option<&Meaning>) -> Element<'_, Message> {
        let whole = |count: usize| number::text(count as f64, Precision::Whole);
        let jump = text_input("jump to a column", &self.jump)
            .font(text::SANS)
            .size(text::SMALL)
            .width(space::FIELD)
            .style(input::line)
            .on_input(Message::Jumping)
            .on_submit(Message::Jump);
        let head = row![
            text::heading(format!(
                "{} samples, {} columns",
                whole(self.samples.n_rows()),
                whole(self.samples.n_columns())
            ))
            .width(Length::Fill),
            jump,
            press::words("Jump", Message::Jump),
            press::words("Close the table", Message::Close),
        ]
        .spacing(space::SMALL)
        .align_y(Alignment::Center);
        let grid = Grid::new(&self.samples, space::GRID)
            .on(Message::Did)
            .stands_out(self.samples.place_of(highlight))
            .show(self.show);
        let below: Element<'_, Message> = match &self.form {
            Some(form) => form.view(),
            None => text::quiet(
                "Press a value twice, or Enter, to correct it; press a sample’s name to exclude it.",
            )
            .into(),
        };
        column![head, grid, below].spacing(space::SMALL).into()
    }
}

impl Form {
    fn view(&self) -> Element<'_, Message> {
        let field = |hint, value, message: fn(String) -> Message| {
            text_input(hint, value)
                .font(text::SANS)
                .size(text::BODY)
                .style(input::line)
                .on_input(message)
                .on_submit(Message::Record)
        };
        let reason = field(
            "the reason, as it is printed",
            &self.reason,
            Message::Reason,
        );
        let (words, fields) = match &self.act {
            Act::Correct {
                sample,
                column,
                from,
            } => {
                let from = if from.is_empty() { "missing" } else { from };
                (
                    format!("Correct {column} of {sample}, which is {from}, to"),
                    row![
                        field("missing", &self.value, Message::Value)
                            .id(FIELD)
                            .width(space::FIELD),
                        reason.width(Length::Fill),
                    ],
                )
            }
            Act::Exclude { sample } => (
                format!("Exclude {sample} from all that follows, because"),
                row![reason.id(FIELD).width(Length::Fill)],
            ),
        };
        let seen = [
            (OutcomeSeen::Before, "Before the outcome was seen"),
            (OutcomeSeen::After, "After the outcome had been seen"),
            (OutcomeSeen::NotSaid, "Not said"),
        ]
        .map(|(seen, words)| {
            let look = if self.seen == seen {
                Look::Chosen
            } else {
                Look::Row
            };
            press::words(words, Message::Seen(seen)).look(look).into()
        });
        let mut form = column![
            text::body(words),
            fields.spacing(space::SMALL),
            row![
                Row::with_children(seen)
                    .spacing(space::TIGHT)
                    .width(Length::Fill),
                press::words("Leave", Message::Leave),
                press::main("Record", Message::Record),
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center),
        ]
        .spacing(space::SMALL);
        if let Some(problem) = &self.problem {
            form = form.push(text::wrong(problem.to_string()));
        }
        crate::app::editor::set_off(form.into())
    }
}

impl Samples {
    fn new(dataset: Arc<Dataset>, settings: &Data, version: u64) -> Self {
        let corrected = settings
            .corrections
            .iter()
            .map(|act| (act.sample.clone(), act.column.clone()))
            .collect();
        let mut roles: Vec<(String, &'static str)> = Vec::new();
        let mut push = |column: &Option<String>, role| {
            if let Some(column) = column {
                roles.push((column.clone(), role));
            }
        };
        push(&settings.sample_name, "sample name");
        push(&settings.unit, "unit");
        push(&settings.batch, "batch");
        push(&settings.order, "order");
        push(&settings.weight, "weight");
        push(
            &settings
                .outcome
                .as_ref()
                .map(|outcome| outcome.column.clone()),
            "outcome",
        );
        for covariate in &settings.covariates {
            roles.push((covariate.clone(), "covariate"));
        }
        for ignored in &settings.ignored {
            roles.push((ignored.clone(), "ignored"));
        }
        Self {
            dataset,
            version,
            corrected,
            roles,
        }
    }

    fn table(&self) -> &Table {
        &self.dataset.table
    }

    fn place_of(&self, highlight: Option<&Meaning>) -> StandsOut {
        let columns = self.table().columns();
        match highlight {
            Some(Meaning::Sample(name)) => StandsOut {
                row: self.dataset.names.iter().position(|sample| sample == name),
                column: None,
            },
            Some(Meaning::Predictor(name)) => StandsOut {
                row: None,
                column: columns.iter().position(|column| column.name == *name),
            },
            Some(
                Meaning::Unit(_)
                | Meaning::Batch(_)
                | Meaning::Pair(..)
                | Meaning::Class(_)
                | Meaning::Strength(_)
                | Meaning::Part { .. }
                | Meaning::Thing(_),
            )
            | None => StandsOut::default(),
        }
    }

    fn name(&self, column: usize) -> &str {
        &self.table().columns()[column].name
    }

    fn value(&self, row: usize, column: usize) -> Value<'_> {
        self.table().columns()[column].value(self.dataset.table_rows[row])
    }

    /// A value as it would be typed.
    fn typed(&self, row: usize, column: usize) -> String {
        typed(self.value(row, column))
    }
}

/// A value as it would be typed: blank when it is missing.
#[must_use]
pub fn typed(value: Value<'_>) -> String {
    match value {
        Value::Number(number) => format!("{number}"),
        Value::Text(text) => text.to_owned(),
        Value::Missing => String::new(),
        Value::BelowLimit(limit) => format!("<{limit}"),
        Value::AboveLimit(limit) => format!(">{limit}"),
    }
}

/// A value as a field of a grid.
#[must_use]
pub fn field(value: Value<'_>) -> Field<'static> {
    let condition = match value {
        Value::Number(_) | Value::Text(_) => Condition::Known,
        Value::Missing => Condition::Missing,
        Value::BelowLimit(_) => Condition::BelowLimit,
        Value::AboveLimit(_) => Condition::AboveLimit,
    };
    let text = match value {
        Value::Missing => "missing".to_owned(),
        Value::BelowLimit(limit) => format!("< {limit}"),
        Value::AboveLimit(limit) => format!("> {limit}"),
        // Measured values are shown as they were written, as far as a column is wide.
        Value::Number(number) => number::text(number, Precision::Full),
        Value::Text(text) => text.to_owned(),
    };
    Field {
        text: Cow::Owned(text),
        condition,
    }
}

impl Source for Samples {
    fn n_rows(&self) -> usize {
        self.dataset.names.len()
    }

    fn n_columns(&self) -> usize {
        self.table().columns().len()
    }

    fn corner(&self) -> Cow<'_, str> {
        "sample".into()
    }

    fn row(&self, row: usize) -> Cow<'_, str> {
        Cow::Borrowed(&self.dataset.names[row])
    }

    fn column(&self, column: usize) -> Cow<'_, str> {
        let column = &self.table().columns()[column];
        match &column.unit {
            Some(unit) => format!("{}, {unit}", column.name).into(),
            None => Cow::Borrowed(&column.name),
        }
    }

    fn remark(&self, column: usize) -> Option<Cow<'_, str>> {
        let name = self.name(column);
        self.roles
            .iter()
            .find(|(column, _)| column == name)
            .map(|(_, role)| Cow::Borrowed(*role))
    }

    fn has_remarks(&self) -> bool {
        true
    }

    fn field(&self, row: usize, column: usize) -> Field<'_> {
        let mut field = field(self.value(row, column));
        let name = self.name(column);
        let sample = &self.dataset.names[row];
        let is_corrected = |(corrected, at): &(String, String)| corrected == sample && at == name;
        if self.corrected.iter().any(is_corrected) {
            field.condition = Condition::Corrected;
        }
        field
    }

    fn align(&self, column: usize) -> Align {
        if self.table().columns()[column].is_numeric() {
            Align::End
        } else {
            Align::Start
        }
    }

    fn version(&self) -> u64 {
        self.version
    }
}
