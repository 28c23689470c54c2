//! What the user likes: recent studies, theme, size of text. Damage to the file costs only that.

use crate::base::problem::Problem;
use crate::store::disk;
use crate::store::format::print::print;
use crate::store::format::v1::Group;
use serde_json::{Map, Value};
use std::path::{Path, PathBuf};

/// Light or dark.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Theme {
    /// As the system has it.
    #[default]
    System,
    /// Dark words on a light page.
    Light,
    /// Light words on a dark page.
    Dark,
}

impl Theme {
    const ALL: [Self; 3] = [Self::System, Self::Light, Self::Dark];

    const fn word(self) -> &'static str {
        match self {
            Self::System => "system",
            Self::Light => "light",
            Self::Dark => "dark",
        }
    }
}

/// When results follow an edit.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Follow {
    /// By themselves.
    #[default]
    AsIEdit,
    /// When they are asked for.
    WhenAsked,
}

impl Follow {
    const ALL: [Self; 2] = [Self::AsIEdit, Self::WhenAsked];

    const fn word(self) -> &'static str {
        match self {
            Self::AsIEdit => "as-i-edit",
            Self::WhenAsked => "when-asked",
        }
    }
}

/// What the user likes.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Preferences {
    /// Studies that were open, the last one first.
    pub recent: Vec<PathBuf>,
    /// Light or dark.
    pub theme: Theme,
    /// The size of text in percent of the usual one, from 50 to 300.
    pub text_scale: u32,
    /// When results follow an edit.
    pub follow: Follow,
    /// Fields of a newer version, kept.
    others: Map<String, Value>,
}

impl Default for Preferences {
    fn default() -> Self {
        Self {
            recent: Vec::new(),
            theme: Theme::System,
            text_scale: USUAL_SCALE,
            follow: Follow::default(),
            others: Map::new(),
        }
    }
}

const USUAL_SCALE: u32 = 100;
const MOST_RECENT: usize = 12;

impl Preferences {
    /// The folder of the present user's preferences; `None` where no home folder is known.
    #[must_use]
    pub fn folder_of_user() -> Option<PathBuf> {
        disk::folder_of_user("XDG_CONFIG_HOME", ".config")
    }

    /// The preferences in a folder. What is missing or damaged is as usual.
    #[must_use]
    pub fn load(folder: &Path) -> Self {
        let bytes = disk::read(&file_in(folder)).unwrap_or_default();
        let Ok(Value::Object(mut map)) = serde_json::from_slice(&bytes) else {
            return Self::default();
        };
        let recent = map.shift_remove("recent");
        let recent = recent.as_ref().and_then(Value::as_array);
        let recent = recent.into_iter().flatten().filter_map(Value::as_str);
        let theme = map.shift_remove("theme");
        let theme = theme.as_ref().and_then(Value::as_str);
        let theme = Theme::ALL
            .into_iter()
            .find(|known| Some(known.word()) == theme);
        let scale = map
            .shift_remove("text-scale")
            .and_then(|scale| scale.as_u64());
        let scale = scale.and_then(|scale| u32::try_from(scale).ok());
        let follow = map.shift_remove("results-follow");
        let follow = follow.as_ref().and_then(Value::as_str);
        let follow = Follow::ALL
            .into_iter()
            .find(|known| Some(known.word()) == follow);
        Self {
            recent: recent.take(MOST_RECENT).map(PathBuf::from).collect(),
            theme: theme.unwrap_or_default(),
            text_scale: scale.unwrap_or(USUAL_SCALE).clamp(50, 300),
            follow: follow.unwrap_or_default(),
            others: map,
        }
    }

    /// Saves the preferences in a folder, which is made if need be.
    ///
    /// # Errors
    /// A [`Problem`] when they could not be written; those that were there are untouched.
    pub fn save(&self, folder: &Path) -> Result<(), Problem> {
        let mut group = Group::default();
        let recent = self.recent.iter().map(|path| path.display().to_string());
        group.put("recent", recent.collect::<Vec<_>>());
        group.put("theme", self.theme.word());
        group.put("text-scale", self.text_scale);
        group.put("results-follow", self.follow.word());
        for (name, value) in &self.others {
            group.put(name, value.clone());
        }
        disk::make_folder(folder)?;
        disk::replace(&file_in(folder), print(&group.value()).as_bytes())
    }

    /// Forgets a study that was open, such as one that is no longer there.
    pub fn forget_recent(&mut self, study: &Path) {
        self.recent.retain(|known| known != study);
    }

    /// Notes that a study was open: it is now the first of the recent ones.
    pub fn note_recent(&mut self, study: &Path) {
        self.recent.retain(|known| known != study);
        self.recent.insert(0, study.to_owned());
        self.recent.truncate(MOST_RECENT);
    }
}

fn file_in(folder: &Path) -> PathBuf {
    folder.join("preferences.json")
}
