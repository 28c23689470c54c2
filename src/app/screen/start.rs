//! Starting from tables: choose files, see them as a grid, give columns their roles, read the
//! import report, get a ready study.

use crate::app::disk::{self, Listing, Wanted};
use crate::app::editor::file;
use crate::app::part::table::field;
use crate::app::run;
use crate::app::session::Opened;
use crate::app::theme::button::Look;
use crate::app::theme::{container, input, space, text};
use crate::app::widget::Element;
use crate::app::widget::grid::{Align, Did, Field, Grid, Show, Source};
use crate::app::widget::press::{self, Press};
use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::{CancelSource, Work};
use crate::eval::finding;
use crate::eval::start::{Started, Wishes, start};
use crate::store;
use crate::table::Table;
use crate::table::read::{Options, Reading, read};
use iced::widget::{
    Column, Row, column, container as boxed, row, rule, scrollable, space as gap, text_input,
};
use iced::{Alignment, Length, Padding, Size, Task};
use std::borrow::Cow;
use std::path::PathBuf;
use std::sync::Arc;

/// The name by which the path is given the focus.
pub const FIELD: &str = "table path";

/// How high the grid is when the window is not known to be higher.
const BELOW: f32 = 340.0;

/// What happens on the screen.
#[derive(Clone, Debug)]
pub enum Message {
    /// The path is being typed.
    Typed(String),
    /// A folder was opened.
    Into(String),
    /// The folder above was opened.
    Up,
    /// A file was taken.
    Took(String),
    /// What is typed is taken.
    Done,
    /// A folder has been listed.
    Listed(Result<Listing, Problem>),
    /// A file has been read.
    Read(Box<Result<Arc<Taken>, Problem>>),
    /// Another table is shown.
    Show(usize),
    /// A table is taken away.
    Remove(usize),
    /// The list of files is shown or hidden.
    Files,
    /// Something was done in the grid.
    Did(Did),
    /// A role was given to the column that stands out.
    Give(Role),
    /// A part of a column's name is being typed.
    Jumping(String),
    /// The column whose name is typed is shown.
    Jump,
    /// The study is made.
    Make,
    /// It has been made.
    Made(Box<Result<Arc<Started>, Problem>>),
    /// Reading is called off.
    Stop,
    /// Back to the welcome page.
    Leave,
}

/// What the screen wants of the window.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// Something is done outside.
    Run(Task<Message>),
    /// The study is ready: it, and what was taken where nothing was said.
    Begin(Box<Opened>, Vec<String>),
    /// Back to the welcome page.
    Leave,
}

/// The role of a column.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// What is predicted.
    Outcome,
    /// What it is predicted from, unless it is text.
    Predictor,
    /// It names the samples.
    SampleName,
    /// It names what is kept together.
    Unit,
    /// It names the batches.
    Batch,
    /// It is always in the model.
    Covariate,
    /// It is left out.
    Ignored,
}

impl Role {
    const ALL: [Self; 7] = [
        Self::Outcome,
        Self::Predictor,
        Self::SampleName,
        Self::Unit,
        Self::Batch,
        Self::Covariate,
        Self::Ignored,
    ];

    const fn word(self) -> &'static str {
        match self {
            Self::Outcome => "outcome",
            Self::Predictor => "predictor",
            Self::SampleName => "sample name",
            Self::Unit => "unit",
            Self::Batch => "batch",
            Self::Covariate => "covariate",
            Self::Ignored => "ignored",
        }
    }

    /// Whether only one column can have it.
    const fn is_single(self) -> bool {
        match self {
            Self::Outcome | Self::SampleName | Self::Unit | Self::Batch => true,
            Self::Predictor | Self::Covariate | Self::Ignored => false,
        }
    }
}

/// A file that has been read.
#[derive(Debug)]
pub struct Taken {
    name: String,
    bytes: Arc<[u8]>,
    reading: Reading,
}

/// A table that is shown, with the roles that were given.
struct Shown {
    taken: Arc<Taken>,
    roles: Vec<(String, Role)>,
    version: u64,
}

/// What is under way.
enum Busy {
    /// Nothing.
    No,
    /// A file is being read.
    Reading {
        name: String,
        /// Dropped with the screen, so that reading stops.
        cancel: CancelSource,
    },
    /// The study is being made.
    Making,
}

/// The screen.
pub struct Start {
    path: String,
    listing: Listing,
    has_files: bool,
    tables: Vec<Arc<Taken>>,
    shown: Option<Shown>,
    at: usize,
    roles: Vec<(String, Role)>,
    marked: Option<String>,
    show: Show,
    jump: String,
    busy: Busy,
    problem: Option<Problem>,
    version: u64,
}

impl Start {
    /// Begins in the folder in which the program was started.
    pub fn new() -> (Self, Task<Message>) {
        let folder = disk::start();
        let screen = Self {
            path: file::shown(&folder),
            listing: Listing::default(),
            has_files: true,
            tables: Vec::new(),
            shown: None,
            at: 0,
            roles: Vec::new(),
            marked: None,
            show: Show::default(),
            jump: String::new(),
            busy: Busy::No,
            problem: None,
            version: 0,
        };
        let focus = Task::batch([
            iced::widget::operation::focus(FIELD),
            iced::widget::operation::move_cursor_to_end(FIELD),
        ]);
        (screen, Task::batch([list(folder), focus]))
    }

    /// Takes a file, such as one that was dropped on the window.
    pub fn take(&mut self, path: PathBuf) -> Task<Message> {
        let cancel = CancelSource::new();
        let token = cancel.token();
        self.problem = None;
        self.busy = Busy::Reading {
            name: disk::name(&path),
            cancel,
        };
        run::off_thread(move || {
            let work_report = |_: f32| {};
            let work = Work::new(token, &work_report);
            Message::Read(Box::new(read_file(&path, &work)))
        })
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(path) => {
                self.path = path;
                self.problem = None;
                let folder = PathBuf::from(&self.path);
                if disk::is_folder(&folder) && folder != self.listing.folder {
                    return Action::Run(list(folder));
                }
            }
            Message::Into(name) => return self.go(self.listing.folder.join(name)),
            Message::Up => {
                if let Some(above) = self.listing.folder.parent() {
                    return self.go(above.to_owned());
                }
            }
            Message::Took(name) => {
                let path = self.listing.folder.join(name);
                return Action::Run(self.take(path));
            }
            Message::Done => {
                let path = PathBuf::from(self.path.trim());
                if disk::is_folder(&path) {
                    return self.go(path);
                }
                return Action::Run(self.take(path));
            }
            Message::Listed(Ok(listing)) => self.listing = listing,
            Message::Listed(Err(problem)) => self.problem = Some(problem),
            Message::Read(result) => self.read(*result),
            Message::Show(at) => {
                self.at = at;
                self.refresh();
            }
            Message::Remove(at) => {
                if at < self.tables.len() {
                    let _ = self.tables.remove(at);
                    self.at = 0;
                    self.refresh();
                }
            }
            Message::Files => self.has_files = !self.has_files,
            Message::Did(Did::Head(column) | Did::At { column, .. }) => {
                let name = self
                    .shown
                    .as_ref()
                    .map(|shown| shown.name(column).to_owned());
                self.marked = name;
            }
            Message::Did(Did::Opened { .. } | Did::Row(_)) => {}
            Message::Give(role) => self.give(role),
            Message::Jumping(jump) => self.jump = jump,
            Message::Jump => self.jump(),
            Message::Make => return self.make(),
            Message::Made(result) => {
                self.busy = Busy::No;
                match *result {
                    Ok(started) => {
                        let opened = Opened {
                            study: started.study.clone(),
                            shelf: started.shelf.clone(),
                            ..Opened::default()
                        };
                        return Action::Begin(Box::new(opened), started.notes.clone());
                    }
                    Err(problem) => self.problem = Some(problem),
                }
            }
            Message::Stop => {
                if let Busy::Reading { cancel, .. } = &self.busy {
                    cancel.cancel();
                }
                self.busy = Busy::No;
            }
            Message::Leave => return Action::Leave,
        }
        Action::None
    }

    fn go(&mut self, folder: PathBuf) -> Action {
        self.path = file::shown(&folder);
        Action::Run(list(folder))
    }

    fn read(&mut self, result: Result<Arc<Taken>, Problem>) {
        if !matches!(self.busy, Busy::Reading { .. }) {
            // It was called off meanwhile.
            return;
        }
        self.busy = Busy::No;
        match result {
            Ok(taken) => {
                self.tables.retain(|known| known.name != taken.name);
                self.tables.push(taken);
                self.at = self.tables.len() - 1;
                self.has_files = false;
                self.refresh();
            }
            Err(problem) => self.problem = Some(problem),
        }
    }

    fn refresh(&mut self) {
        self.version += 1;
        self.shown = self.tables.get(self.at).map(|taken| Shown {
            taken: Arc::clone(taken),
            roles: self.roles.clone(),
            version: self.version,
        });
        if self.shown.is_none() {
            self.has_files = true;
        }
    }

    fn give(&mut self, role: Role) {
        let Some(name) = self.marked.clone() else {
            return;
        };
        self.roles
            .retain(|(known, had)| *known != name && !(role.is_single() && *had == role));
        if role != Role::Predictor {
            self.roles.push((name, role));
        }
        self.problem = None;
        self.refresh();
    }

    fn jump(&mut self) {
        let Some(shown) = &self.shown else {
            return;
        };
        let names: Vec<String> = shown
            .table()
            .columns()
            .iter()
            .map(|column| column.name.clone())
            .collect();
        let (found, _) = crate::app::editor::column::found(&names, &self.jump);
        if let Some(first) = found.first() {
            self.marked = names.get(*first).cloned();
            self.show = Show {
                column: *first,
                row: None,
                serial: self.show.serial + 1,
            };
        }
    }

    fn with_role(&self, role: Role) -> Option<String> {
        self.roles
            .iter()
            .find(|(_, had)| *had == role)
            .map(|(name, _)| name.clone())
    }

    fn make(&mut self) -> Action {
        let Some(outcome) = self.with_role(Role::Outcome) else {
            self.problem = Some(
                Problem::new("no-outcome", "It is not said yet what is predicted.")
                    .mend("Press the head of a column and say that it is the outcome."),
            );
            return Action::None;
        };
        let all = |role: Role| {
            self.roles
                .iter()
                .filter(|(_, had)| *had == role)
                .map(|(name, _)| name.clone())
                .collect()
        };
        let first = self
            .tables
            .first()
            .map_or("study", |taken| taken.name.as_str());
        let wishes = Wishes {
            title: title(first),
            outcome,
            samples: self.with_role(Role::SampleName),
            unit: self.with_role(Role::Unit),
            batch: self.with_role(Role::Batch),
            covariates: all(Role::Covariate),
            ignored: all(Role::Ignored),
            ..Wishes::default()
        };
        let tables: Vec<(String, Arc<[u8]>)> = self
            .tables
            .iter()
            .map(|taken| (taken.name.clone(), Arc::clone(&taken.bytes)))
            .collect();
        self.busy = Busy::Making;
        Action::Run(run::off_thread(move || {
            let started = start(&tables, &wishes, Threads::all(), &Work::unattended())
                .expect("nobody calls unattended work off");
            Message::Made(Box::new(started.map(Arc::new)))
        }))
    }

    /// The screen, in a window of a size.
    #[must_use]
    pub fn view(&self, size: Size) -> Element<'_, Message> {
        let head = row![
            text::title("Start from tables"),
            gap().width(Length::Fill),
            press::words("Leave", Message::Leave),
            press::main("Make the study", Message::Make)
                .only_if(self.shown.is_some() && matches!(self.busy, Busy::No)),
        ]
        .spacing(space::SMALL)
        .align_y(Alignment::Center)
        .height(space::HEAD)
        .padding(Padding::from([0.0, space::GAP + space::SMALL]));
        let mut page = column![
            head,
            rule::horizontal(space::HAIR).style(container::hairline),
        ];
        let mut body = Column::new()
            .spacing(space::GAP)
            .padding(space::GAP + space::SMALL)
            .push(self.files());
        match &self.busy {
            Busy::No => {}
            Busy::Reading { name, .. } => {
                body = body.push(
                    row![
                        text::body(format!("{name} is being read.")),
                        press::words("Stop", Message::Stop).look(Look::Attention),
                    ]
                    .spacing(space::SMALL)
                    .align_y(Alignment::Center),
                );
            }
            Busy::Making => body = body.push(text::body("The study is being made.")),
        }
        if let Some(problem) = &self.problem {
            body = body.push(text::wrong(problem.to_string()));
        }
        if let Some(shown) = &self.shown {
            body = body.push(self.preview(shown, size));
        }
        page = page.push(
            scrollable(body)
                .direction(input::narrow())
                .style(input::scroller)
                .height(Length::Fill)
                .width(Length::Fill),
        );
        boxed(page)
            .style(container::page)
            .width(Length::Fill)
            .height(Length::Fill)
            .into()
    }

    fn files(&self) -> Element<'_, Message> {
        let tables = self.tables.iter().enumerate().map(|(at, taken)| {
            let look = if at == self.at {
                Look::Chosen
            } else {
                Look::Row
            };
            row![
                Press::new(
                    text::plain(taken.name.as_str(), text::STRONG),
                    Message::Show(at)
                )
                .look(look),
                press::words("Remove", Message::Remove(at)).look(Look::Attention),
            ]
            .align_y(Alignment::Center)
            .into()
        });
        let mut parts = Column::new().spacing(space::SMALL);
        if !self.tables.is_empty() {
            let more = if self.has_files {
                "Hide the files"
            } else {
                "Add a table"
            };
            let line = Row::with_children(tables)
                .spacing(space::GAP)
                .align_y(Alignment::Center)
                .push(press::words(more, Message::Files).look(Look::Accent));
            parts = parts.push(line.wrap());
        }
        if self.has_files {
            let words = if self.tables.is_empty() {
                "Choose a file with a table: delimited text or a workbook. Files can also be \
                 dropped on the window."
            } else {
                "A further table is joined on the names of the samples or units."
            };
            let field = text_input("path of a file", &self.path)
                .id(FIELD)
                .font(text::SANS)
                .size(text::BODY)
                .style(input::line)
                .on_input(Message::Typed)
                .on_submit(Message::Done);
            parts = parts.push(text::prose(words)).push(
                column![
                    row![field, press::main("Take", Message::Done)]
                        .spacing(space::SMALL)
                        .align_y(Alignment::Center),
                    file::listed(&self.listing, Message::Up, Message::Into, Message::Took),
                ]
                .spacing(space::SMALL)
                .max_width(space::PAGE),
            );
        }
        parts.into()
    }

    fn preview<'a>(&'a self, shown: &'a Shown, size: Size) -> Element<'a, Message> {
        let height = if self.has_files {
            space::GRID
        } else {
            (size.height - BELOW).max(space::GRID)
        };
        let grid = Grid::new(shown, height).on(Message::Did).show(self.show);
        let jump = text_input("jump to a column", &self.jump)
            .font(text::SANS)
            .size(text::SMALL)
            .width(space::FIELD)
            .style(input::line)
            .on_input(Message::Jumping)
            .on_submit(Message::Jump);
        let whole = |count: usize| {
            crate::base::number::text(count as f64, crate::base::number::Precision::Whole)
        };
        let sizes = format!(
            "{} rows, {} columns",
            whole(shown.n_rows()),
            whole(shown.n_columns())
        );
        let left = column![
            self.sentence(),
            row![
                text::quiet(sizes).width(Length::Fill),
                jump,
                press::words("Jump", Message::Jump)
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center),
            self.roles(),
            grid,
        ]
        .spacing(space::SMALL)
        .width(Length::Fill);
        let right = self.import_report(shown);
        if size.width >= space::FOLD {
            row![left, boxed(right).width(space::NOTE)]
                .spacing(space::WIDE)
                .into()
        } else {
            column![left, right].spacing(space::GAP).into()
        }
    }

    /// What has been said so far, as a sentence.
    fn sentence(&self) -> Element<'_, Message> {
        let mut words = match self.with_role(Role::Outcome) {
            Some(outcome) => format!("Predict {outcome}"),
            None => "Press the head of the column that is to be predicted".to_owned(),
        };
        if let Some(unit) = self.with_role(Role::Unit) {
            words.push_str(&format!("; keep what shares one {unit} together"));
        }
        if let Some(batch) = self.with_role(Role::Batch) {
            words.push_str(&format!("; batch is {batch}"));
        }
        words.push('.');
        text::prose(words).into()
    }

    /// The roles that the column that stands out can have.
    fn roles(&self) -> Element<'_, Message> {
        let Some(name) = &self.marked else {
            return text::quiet("Press the head of a column to say what it is.").into();
        };
        let present = self
            .roles
            .iter()
            .find(|(known, _)| known == name)
            .map_or(Role::Predictor, |(_, role)| *role);
        let roles = Role::ALL.map(|role| {
            let look = if role == present {
                Look::Chosen
            } else {
                Look::Accent
            };
            press::words(role.word(), Message::Give(role))
                .look(look)
                .into()
        });
        Row::new()
            .push(text::heading(name.as_str()))
            .push(text::body("is"))
            .extend(roles)
            .spacing(space::SMALL)
            .align_y(Alignment::Center)
            .wrap()
            .into()
    }

    fn import_report<'a>(&self, shown: &'a Shown) -> Element<'a, Message> {
        let findings = &shown.taken.reading.findings;
        let mut parts = Column::new()
            .spacing(space::SMALL + space::TIGHT)
            .push(text::heading("What was noticed"));
        if findings.is_empty() {
            parts = parts.push(text::quiet("Nothing that is out of the ordinary."));
        }
        for found in findings {
            parts = parts.push(column![
                text::body(finding::sentence(found)),
                text::quiet(finding::treatment(found)),
            ]);
        }
        parts.into()
    }
}

impl Shown {
    fn table(&self) -> &Table {
        &self.taken.reading.table
    }

    fn name(&self, column: usize) -> &str {
        &self.table().columns()[column].name
    }
}

impl Source for Shown {
    fn n_rows(&self) -> usize {
        self.table().n_rows()
    }

    fn n_columns(&self) -> usize {
        self.table().columns().len()
    }

    fn corner(&self) -> Cow<'_, str> {
        "row".into()
    }

    fn row(&self, row: usize) -> Cow<'_, str> {
        (row + 1).to_string().into()
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
            .find(|(known, _)| known == name)
            .map(|(_, role)| Cow::Borrowed(role.word()))
    }

    fn has_remarks(&self) -> bool {
        true
    }

    fn field(&self, row: usize, column: usize) -> Field<'_> {
        field(self.table().columns()[column].value(row))
    }

    fn align(&self, column: usize) -> Align {
        if self.table().columns()[column].is_numeric() {
            Align::End
        } else {
            Align::Start
        }
    }

    fn letters(&self, column: usize) -> usize {
        const ROWS: usize = 12;
        (0..self.n_rows().min(ROWS))
            .map(|row| self.field(row, column).text.chars().count())
            .max()
            .unwrap_or(0)
    }

    fn version(&self) -> u64 {
        self.version
    }
}

fn list(folder: PathBuf) -> Task<Message> {
    run::off_thread(move || Message::Listed(disk::list(&folder, Wanted::Table)))
}

fn read_file(path: &std::path::Path, work: &Work<'_>) -> Result<Arc<Taken>, Problem> {
    let bytes: Arc<[u8]> = store::read_file(path)?.into();
    let name = disk::name(path);
    let options = Options::default();
    match read(&bytes, &name, &options, Threads::all(), work) {
        Ok(Ok(reading)) => Ok(Arc::new(Taken {
            name,
            bytes,
            reading,
        })),
        Ok(Err(error)) => Err(finding::read_problem(&error, &name)),
        Err(crate::base::work::Cancelled) => Err(Problem::new("stopped", "Reading was stopped.")),
    }
}

/// A file's name without its ending, as a title.
fn title(file: &str) -> String {
    let stem = file
        .split('.')
        .next()
        .unwrap_or(file)
        .replace(['-', '_'], " ");
    let mut letters = stem.chars();
    letters.next().map_or_else(
        || "Study".to_owned(),
        |first| first.to_uppercase().chain(letters).collect(),
    )
}
