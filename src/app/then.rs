//! What the window does with what happens to it.

use crate::app::dialog::hand_over::{self, HandOver};
use crate::app::dialog::problem::{Told, Way};
use crate::app::dialog::{FIELD, keys as key_page, path, problem, unsaved};
use crate::app::disk;
use crate::app::files::{self, Found};
use crate::app::screen::start::{self, Start};
use crate::app::screen::study::{self, StudyScreen};
use crate::app::screen::welcome::{self, Welcome};
use crate::app::session::{Following, Opened};
use crate::app::shortcut::Shortcut;
use crate::app::theme::Mode;
use crate::app::{App, Dialog, Message, Screen, Then, beat};
use crate::base::problem::Problem;
use crate::export;
use crate::report::Context;
use crate::store::preferences::{Follow, Theme};
use crate::store::rescue::Rescued;
use crate::study::Study;
use iced::widget::operation;
use iced::{Task, window};
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The sizes of letters, and the step between them.
const SCALES: (f32, f32, f32) = (0.7, 2.0, 0.1);

impl App {
    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Task<Message> {
        match message {
            Message::Welcome(message) => self.welcome(message),
            Message::Start(message) => self.start(message),
            Message::Study(message) => self.in_study(message),
            Message::Problem(message) => self.problem(message),
            Message::Unsaved(message) => self.unsaved(&message),
            Message::Path(message) => self.path(message),
            Message::HandOver(message) => self.hand_over(message),
            Message::Keys(key_page::Message::Done) => self.close_dialog(),
            Message::Shortcut(shortcut) => self.shortcut(shortcut),
            Message::Window(id, event) => self.window(id, event),
            Message::Opened(Ok(found)) => self.opened(&found),
            Message::Opened(Err(problem)) => self.not_opened(problem),
            Message::Saved(result) => self.saved(result),
            Message::HandedOver(Ok(words)) => {
                self.handing = None;
                self.say(words)
            }
            Message::HandedOver(Err(problem)) => self.not_handed_over(problem),
            Message::FigureSaved(Ok(words)) => {
                self.drawing = None;
                self.say(words)
            }
            Message::FigureSaved(Err(problem)) => {
                self.show_path(path::Purpose::Figure, Some(problem))
            }
            // Work that cannot be kept is told once; the study itself is not touched by it.
            Message::Kept(Ok(())) => {
                // The new copy holds what the rescued one held.
                self.settle_rescue();
                Task::none()
            }
            Message::Kept(Err(problem)) => self.say(problem.to_string()),
            Message::Beat => Task::batch([self.keep(), beat()]),
        }
    }

    /// The welcome page, with what is known now.
    pub(super) fn show_welcome(&mut self) -> Task<Message> {
        self.screen = Screen::Welcome(Welcome {
            recent: self.preferences.recent.clone(),
            demo: files::demo(),
            rescued: self.rescued.clone(),
        });
        operation::focus(welcome::FIELD)
    }

    fn tell(&mut self, problem: Problem) -> Task<Message> {
        self.tell_with(problem, Vec::new())
    }

    /// Tells a problem with ways out of it.
    fn tell_with(&mut self, problem: Problem, ways: Vec<Way>) -> Task<Message> {
        self.dialog = Some(Dialog::Problem(Told { problem, ways }));
        operation::focus(FIELD)
    }

    /// A study could not be opened; what was open before is still there.
    fn not_opened(&mut self, problem: Problem) -> Task<Message> {
        let mut ways = vec![Way::LookFor];
        if let Some(path) = self.opening.take() {
            if self.preferences.recent.contains(&path) {
                ways.push(Way::Forget(path));
            } else if problem.code.0 == "not-a-study" {
                ways.push(Way::StartFrom(path));
            }
        }
        self.tell_with(problem, ways)
    }

    /// The exports could not be written: they are asked for again, as they were wished.
    fn not_handed_over(&mut self, problem: Problem) -> Task<Message> {
        match self.handing.take() {
            Some(mut dialog) if self.dialog.is_none() => {
                dialog.refuse(problem);
                self.dialog = Some(Dialog::HandOver(dialog));
                operation::focus(FIELD)
            }
            Some(_) | None => self.tell(problem),
        }
    }

    fn say(&mut self, words: String) -> Task<Message> {
        if let Screen::Study(study) = &mut self.screen {
            study.say(words);
        }
        Task::none()
    }

    fn close_dialog(&mut self) -> Task<Message> {
        self.dialog = None;
        Task::none()
    }

    fn welcome(&mut self, message: welcome::Message) -> Task<Message> {
        match message {
            welcome::Message::Start => self.begin_start(),
            welcome::Message::Open => self.ask_open(),
            welcome::Message::Recent(path) => self.open(path),
            welcome::Message::Empty => {
                let opened = Opened {
                    study: Study::new("New study"),
                    ..Opened::default()
                };
                self.show_study(opened)
            }
            welcome::Message::Demo => match files::demo() {
                Some(path) => self.open(path),
                None => Task::none(),
            },
            welcome::Message::Rescued(file) => {
                match self.rescued.iter().find(|rescued| rescued.file == file) {
                    Some(rescued) => self.open_rescued(rescued.clone()),
                    None => Task::none(),
                }
            }
            welcome::Message::GiveUp(file) => {
                let given_up = self.rescued.iter().find(|rescued| rescued.file == file);
                let result = match (&self.shelter, given_up) {
                    (Some(shelter), Some(rescued)) => shelter.decline(rescued),
                    (Some(_) | None, _) => Ok(()),
                };
                self.rescued.retain(|rescued| rescued.file != file);
                let shown = self.show_welcome();
                match result {
                    Ok(()) => shown,
                    Err(problem) => self.tell(problem),
                }
            }
            welcome::Message::Keys => self.show_keys(),
            welcome::Message::Turn => self.turn(),
        }
    }

    fn show_keys(&mut self) -> Task<Message> {
        self.dialog = Some(Dialog::Keys);
        operation::focus(FIELD)
    }

    fn begin_start(&mut self) -> Task<Message> {
        let (start, task) = Start::new();
        self.screen = Screen::Start(Box::new(start));
        task.map(Message::Start)
    }

    fn start(&mut self, message: start::Message) -> Task<Message> {
        let Screen::Start(start) = &mut self.screen else {
            return Task::none();
        };
        match start.update(message) {
            start::Action::None => Task::none(),
            start::Action::Run(task) => task.map(Message::Start),
            start::Action::Leave => self.show_welcome(),
            start::Action::Begin(opened, notes) => {
                let task = self.show_study(*opened);
                if let Screen::Study(study) = &mut self.screen {
                    // What was said of the tables lies nowhere yet.
                    study.session_mut().unsaved();
                }
                let words = notes.join(" ");
                Task::batch([task, self.say(words)])
            }
        }
    }

    fn open(&mut self, path: PathBuf) -> Task<Message> {
        self.dialog = None;
        self.opening = Some(path.clone());
        files::open(path).map(Message::Opened)
    }

    fn opened(&mut self, found: &Arc<Found>) -> Task<Message> {
        self.opening = None;
        // What was kept of the study that was open before has been saved or given up.
        self.forget();
        let opened = found.opened.clone();
        if let Some(path) = &opened.path {
            self.note_recent(&path.clone());
        }
        let task = self.show_study(opened);
        if let (Some(_), Screen::Study(study)) = (&found.rescued, &mut self.screen) {
            study.session_mut().unsaved();
        }
        self.rescue = found.rescued.clone();
        match found.problems.first() {
            // Every problem is told; the first comes first.
            Some(problem) => {
                let mut first = problem.clone();
                for other in &found.problems[1..] {
                    first.mend.push(other.to_string());
                }
                Task::batch([task, self.tell(first)])
            }
            None => task,
        }
    }

    fn open_rescued(&mut self, rescued: Rescued) -> Task<Message> {
        match &self.shelter {
            Some(shelter) => files::open_rescued(shelter.clone(), rescued).map(Message::Opened),
            None => Task::none(),
        }
    }

    /// Forgets the unsaved work of this session: it has been saved, or given up.
    fn forget(&self) {
        if let Some(shelter) = &self.shelter {
            // A copy that cannot be removed is offered once more, which does no harm.
            let _ = shelter.forget(&session_name());
        }
    }

    /// Rescued work that lies elsewhere now, or was given up, is not offered again.
    fn settle_rescue(&mut self) {
        if let (Some(rescue), Some(shelter)) = (self.rescue.take(), &self.shelter) {
            // A copy that cannot be removed is offered once more, which does no harm.
            let _ = shelter.decline(&rescue);
            self.rescued.retain(|rescued| rescued.file != rescue.file);
        }
    }

    fn note_recent(&mut self, path: &Path) {
        let absolute = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
        self.preferences.note_recent(&absolute);
        self.save_preferences();
    }

    fn save_preferences(&self) {
        if let Some(folder) = &self.folder {
            // Preferences that cannot be written cost only themselves.
            let _ = self.preferences.save(folder);
        }
    }

    /// Shows a study.
    pub(super) fn show_study(&mut self, opened: Opened) -> Task<Message> {
        let (study, task) = StudyScreen::new(opened, self.following, self.size);
        self.screen = Screen::Study(Box::new(study));
        self.dialog = None;
        self.kept = None;
        self.rescue = None;
        task.map(Message::Study)
    }

    fn in_study(&mut self, message: study::Message) -> Task<Message> {
        let Screen::Study(study) = &mut self.screen else {
            return Task::none();
        };
        let action = study.update(message);
        self.act(action)
    }

    fn act(&mut self, action: study::Action) -> Task<Message> {
        match action {
            study::Action::None => Task::none(),
            study::Action::Run(task) => task.map(Message::Study),
            study::Action::Save => self.save(Then::Stay),
            study::Action::SaveAs => {
                self.then = Then::Stay;
                self.show_path(path::Purpose::Save, None)
            }
            study::Action::Open => self.ask_open(),
            study::Action::Start => self.leave(Then::Start),
            study::Action::Scale(steps) => self.set_scale(self.scale + SCALES.2 * steps as f32),
            study::Action::HandOver => self.ask_hand_over(),
            study::Action::Close => self.leave(Then::Welcome),
            study::Action::Keys => self.show_keys(),
            study::Action::Turn => self.turn(),
            study::Action::Followed(following, task) => {
                self.following = following;
                self.preferences.follow = match following {
                    Following::AsIEdit => Follow::AsIEdit,
                    Following::WhenAsked => Follow::WhenAsked,
                };
                self.save_preferences();
                task.map(Message::Study)
            }
            study::Action::SaveFigure { wish, drawing } => {
                self.drawing = Some(drawing);
                self.writing = Some(wish);
                self.show_path(path::Purpose::Figure, None)
            }
            study::Action::Tell(problem) => self.tell(problem),
        }
    }

    fn problem(&mut self, message: problem::Message) -> Task<Message> {
        match (message, &self.dialog) {
            (problem::Message::Copy, Some(Dialog::Problem(told))) => {
                iced::clipboard::write(problem::details(&told.problem))
            }
            (problem::Message::Take(at), Some(Dialog::Problem(told))) => {
                match told.ways.get(at).cloned() {
                    Some(way) => self.take_way(way),
                    None => self.close_dialog(),
                }
            }
            (problem::Message::Copy | problem::Message::Take(_) | problem::Message::Done, _) => {
                self.close_dialog()
            }
        }
    }

    fn take_way(&mut self, way: Way) -> Task<Message> {
        self.dialog = None;
        match way {
            Way::LookFor => self.leave(Then::AskOpen),
            Way::Forget(path) => {
                self.preferences.forget_recent(&path);
                self.save_preferences();
                match self.screen {
                    Screen::Welcome(_) => self.show_welcome(),
                    Screen::Start(_) | Screen::Study(_) => Task::none(),
                }
            }
            Way::SaveAs => self.show_path(path::Purpose::Save, None),
            Way::StartFrom(path) => self.leave(Then::StartFrom(path)),
        }
    }

    /// Whether the open study would lose something if it were closed.
    fn is_unsaved(&self) -> bool {
        self.study()
            .is_some_and(|study| study.session().is_modified() || study.has_draft())
    }

    /// Does something that closes the study, after asking if that would lose anything.
    fn leave(&mut self, then: Then) -> Task<Message> {
        if self.is_unsaved() {
            self.dialog = Some(Dialog::Unsaved(then));
            return operation::focus(FIELD);
        }
        self.go_on(then)
    }

    fn go_on(&mut self, then: Then) -> Task<Message> {
        self.dialog = None;
        if !self.is_unsaved() || matches!(then, Then::Quit | Then::Welcome) {
            self.forget();
        }
        match then {
            Then::Stay => Task::none(),
            Then::Quit => match self.window {
                Some(id) => window::close(id),
                None => iced::exit(),
            },
            Then::Welcome => self.show_welcome(),
            Then::AskOpen => self.show_path(path::Purpose::Open, None),
            Then::Open(path) => self.open(path),
            Then::Start => self.begin_start(),
            Then::StartFrom(path) => self.start_from(path),
        }
    }

    fn unsaved(&mut self, message: &unsaved::Message) -> Task<Message> {
        let Some(Dialog::Unsaved(then)) = self.dialog.take() else {
            return Task::none();
        };
        match message {
            unsaved::Message::Stay => Task::none(),
            unsaved::Message::GiveUp => {
                self.settle_rescue();
                self.go_on(then)
            }
            unsaved::Message::Save => self.save(then),
        }
    }

    fn save(&mut self, then: Then) -> Task<Message> {
        let Screen::Study(study) = &self.screen else {
            return Task::none();
        };
        self.then = then;
        match study.session().path() {
            Some(path) => {
                let path = path.clone();
                self.write_study(path)
            }
            None => self.show_path(path::Purpose::Save, None),
        }
    }

    fn write_study(&mut self, path: PathBuf) -> Task<Message> {
        let Screen::Study(study) = &self.screen else {
            return Task::none();
        };
        self.writing = Some(path.clone());
        files::save(study.session(), path).map(Message::Saved)
    }

    fn saved(&mut self, result: Result<(PathBuf, u64), Problem>) -> Task<Message> {
        match result {
            Ok((path, n_edits)) => {
                self.note_recent(&path);
                if let Screen::Study(study) = &mut self.screen {
                    study.say(format!("Saved as {}.", path.display()));
                    study.session_mut().saved(path, n_edits);
                }
                self.writing = None;
                self.forget();
                self.settle_rescue();
                let then = std::mem::replace(&mut self.then, Then::Stay);
                if then == Then::Stay {
                    Task::none()
                } else {
                    self.go_on(then)
                }
            }
            // What was wanted next waits: another place is asked for, and nothing is lost.
            Err(problem) => self.show_path(path::Purpose::Save, Some(problem)),
        }
    }

    fn ask_open(&mut self) -> Task<Message> {
        self.leave(Then::AskOpen)
    }

    fn show_path(&mut self, purpose: path::Purpose, why: Option<Problem>) -> Task<Message> {
        let own = self
            .study()
            .and_then(|study| study.session().path().cloned());
        let wish = match purpose {
            path::Purpose::Figure => self.writing.as_deref().map_or_else(String::new, disk::name),
            path::Purpose::Open | path::Purpose::Save => {
                self.study().map_or_else(String::new, |study| {
                    format!("{}.widefold", files::wish(study.session().study()))
                })
            }
        };
        // What could not be written is asked for again where it was wished.
        let begin = match (purpose, &why) {
            (path::Purpose::Open, _) | (path::Purpose::Save, None) => own,
            (path::Purpose::Save, Some(_)) | (path::Purpose::Figure, _) => {
                self.writing.clone().or(own)
            }
        };
        let (dialog, task) = path::Path::new(purpose, begin.as_deref(), &wish, why);
        self.dialog = Some(Dialog::Path(Box::new(dialog)));
        task.map(Message::Path)
    }

    fn path(&mut self, message: path::Message) -> Task<Message> {
        let Some(Dialog::Path(dialog)) = &mut self.dialog else {
            return Task::none();
        };
        let purpose = dialog.purpose;
        match dialog.update(message) {
            path::Action::None => Task::none(),
            path::Action::Run(task) => task.map(Message::Path),
            path::Action::Leave => {
                self.then = Then::Stay;
                self.close_dialog()
            }
            path::Action::Take(path) => {
                self.dialog = None;
                match purpose {
                    path::Purpose::Save => self.write_study(path),
                    path::Purpose::Figure => match self.drawing.clone() {
                        Some(drawing) => {
                            self.writing = Some(path.clone());
                            files::save_figure(path, drawing).map(Message::FigureSaved)
                        }
                        None => Task::none(),
                    },
                    path::Purpose::Open => self.open(path),
                }
            }
        }
    }

    fn ask_hand_over(&mut self) -> Task<Message> {
        let Some(study) = self.study() else {
            return Task::none();
        };
        let session = study.session();
        let context = Context {
            study: session.study(),
            standings: session.standings(),
            ledger: session.ledger(),
        };
        let stops = export::stops(&context);
        let dialog = HandOver::new(files::beside(session), stops, session.is_due());
        self.dialog = Some(Dialog::HandOver(dialog));
        operation::focus(FIELD)
    }

    fn hand_over(&mut self, message: hand_over::Message) -> Task<Message> {
        let Some(Dialog::HandOver(dialog)) = &mut self.dialog else {
            return Task::none();
        };
        match (dialog.update(message), &self.screen) {
            (hand_over::Action::None, _) => Task::none(),
            (hand_over::Action::Leave, _) => self.close_dialog(),
            (hand_over::Action::Write(wish), Screen::Study(study)) => {
                let task = files::hand_over(study.session(), wish).map(Message::HandedOver);
                if let Some(Dialog::HandOver(dialog)) = self.dialog.take() {
                    self.handing = Some(dialog);
                }
                task
            }
            (hand_over::Action::Write(_), Screen::Welcome(_) | Screen::Start(_)) => {
                self.close_dialog()
            }
        }
    }

    fn turn(&mut self) -> Task<Message> {
        self.mode = self.mode.other();
        self.preferences.theme = match self.mode {
            Mode::Light => Theme::Light,
            Mode::Dark => Theme::Dark,
        };
        self.save_preferences();
        Task::none()
    }

    fn set_scale(&mut self, scale: f32) -> Task<Message> {
        let (least, most, step) = SCALES;
        self.scale = ((scale / step).round() * step).clamp(least, most);
        self.preferences.text_scale = (self.scale * 100.0).round() as u32;
        self.save_preferences();
        Task::none()
    }

    fn shortcut(&mut self, shortcut: Shortcut) -> Task<Message> {
        match shortcut {
            Shortcut::Next => return operation::focus_next(),
            Shortcut::Previous => return operation::focus_previous(),
            Shortcut::Turn => return self.turn(),
            Shortcut::Larger => return self.set_scale(self.scale + SCALES.2),
            Shortcut::Smaller => return self.set_scale(self.scale - SCALES.2),
            Shortcut::Usual => return self.set_scale(1.0),
            Shortcut::Escape if self.dialog.is_some() => {
                self.then = Then::Stay;
                return self.close_dialog();
            }
            // Under a dialog nothing else can be done.
            _ if self.dialog.is_some() => return Task::none(),
            Shortcut::Keys => return self.show_keys(),
            Shortcut::Open => return self.ask_open(),
            Shortcut::Start => return self.leave(Then::Start),
            Shortcut::Undo
            | Shortcut::Redo
            | Shortcut::Save
            | Shortcut::SaveAs
            | Shortcut::HandOver
            | Shortcut::BringUpToDate
            | Shortcut::Read
            | Shortcut::Escape
            | Shortcut::NextCell
            | Shortcut::PreviousCell
            | Shortcut::Close => {}
        }
        self.study_shortcut(shortcut)
    }

    /// Keys that mean something to an open study.
    fn study_shortcut(&mut self, shortcut: Shortcut) -> Task<Message> {
        let Screen::Study(study) = &mut self.screen else {
            return match (shortcut, &self.screen) {
                (Shortcut::Close, Screen::Start(_)) => self.show_welcome(),
                (Shortcut::Escape, Screen::Start(_)) => self.start(start::Message::Escape),
                _ => Task::none(),
            };
        };
        let action = match shortcut {
            Shortcut::Undo => study.undo(),
            Shortcut::Redo => study.redo(),
            Shortcut::Save => return self.save(Then::Stay),
            Shortcut::SaveAs => {
                self.then = Then::Stay;
                return self.show_path(path::Purpose::Save, None);
            }
            Shortcut::HandOver => return self.ask_hand_over(),
            Shortcut::BringUpToDate => study.bring_up_to_date(),
            Shortcut::Read => {
                study.update(study::Message::Head(crate::app::part::head::Message::Read))
            }
            Shortcut::Escape => study.update(study::Message::Escape),
            Shortcut::NextCell => study.update(study::Message::Step(1)),
            Shortcut::PreviousCell => study.update(study::Message::Step(-1)),
            Shortcut::Close => return self.leave(Then::Welcome),
            Shortcut::Open
            | Shortcut::Start
            | Shortcut::Turn
            | Shortcut::Larger
            | Shortcut::Smaller
            | Shortcut::Usual
            | Shortcut::Next
            | Shortcut::Previous
            | Shortcut::Keys => study::Action::None,
        };
        self.act(action)
    }

    fn window(&mut self, id: window::Id, event: window::Event) -> Task<Message> {
        match event {
            window::Event::Opened { size, .. } | window::Event::Resized(size) => {
                self.window = Some(id);
                self.resize(size);
                Task::none()
            }
            window::Event::CloseRequested => {
                self.window = Some(id);
                self.leave(Then::Quit)
            }
            window::Event::FileDropped(path) => self.dropped(path),
            _ => Task::none(),
        }
    }

    /// The window has another size.
    pub fn resize(&mut self, size: iced::Size) {
        self.size = size;
        if let Screen::Study(study) = &mut self.screen {
            study.resize(size);
        }
    }

    /// A study that is dropped on the window is opened; a table starts a study.
    fn dropped(&mut self, path: PathBuf) -> Task<Message> {
        let is_study = path
            .extension()
            .is_some_and(|ending| ending == "widefold" || ending == "json");
        if is_study {
            return self.leave(Then::Open(path));
        }
        match &mut self.screen {
            Screen::Start(start) => start.take(path).map(Message::Start),
            Screen::Welcome(_) => self.start_from(path),
            Screen::Study(study) => {
                let action = study.dropped(path);
                self.act(action)
            }
        }
    }

    /// Starts from a table.
    fn start_from(&mut self, path: PathBuf) -> Task<Message> {
        let begun = self.begin_start();
        match &mut self.screen {
            Screen::Start(start) => Task::batch([begun, start.take(path).map(Message::Start)]),
            Screen::Welcome(_) | Screen::Study(_) => begun,
        }
    }

    /// Keeps unsaved work, if there is any that has not been kept.
    pub fn keep(&mut self) -> Task<Message> {
        let Screen::Study(study) = &self.screen else {
            return Task::none();
        };
        let session = study.session();
        let n_edits = Some(session.n_edits());
        if !session.is_modified() || n_edits == self.kept {
            return Task::none();
        }
        self.kept = n_edits;
        match &self.shelter {
            Some(shelter) => {
                files::keep(shelter.clone(), session, session_name()).map(Message::Kept)
            }
            None => Task::none(),
        }
    }
}

/// Names the work of this process.
fn session_name() -> String {
    format!("window {}", std::process::id())
}
