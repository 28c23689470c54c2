//! The order of evaluation, and the recipe of each cell.

use crate::base::hash::ContentHash;
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::settings::Settings;
use std::collections::BTreeMap;

/// The order of evaluation, a function of the study alone.
#[derive(Clone, Debug, Default)]
pub struct Plan {
    /// The cells that can be evaluated, each after all that it draws on; in reading order
    /// wherever dependency allows.
    pub order: Vec<CellId>,
    /// What each of those cells is made from.
    pub recipes: BTreeMap<CellId, ContentHash>,
    /// Cells that stand in a circle or behind one: listed, not followed. Only a file edited by
    /// hand can hold them.
    pub circular: Vec<CellId>,
}

/// Raised when a kind of cell gives something else from the same settings.
const KIND_VERSION: u32 = 1;

/// Plans the evaluation of a study.
#[must_use]
pub fn plan(study: &Study) -> Plan {
    let mut plan = Plan::default();
    loop {
        // Always the first cell in reading order that is ready, so that the plan follows the page
        // as far as it can.
        let next =
            study.cells().iter().find(|cell| {
                !plan.recipes.contains_key(&cell.id)
                    && cell.settings.draws_on().iter().all(|input| {
                        plan.recipes.contains_key(input) || study.cell(*input).is_none()
                    })
            });
        let Some(cell) = next else { break };
        let recipe = recipe(cell, &plan.recipes);
        let _ = plan.recipes.insert(cell.id, recipe);
        plan.order.push(cell.id);
    }
    let left = |cell: &&Cell| !plan.recipes.contains_key(&cell.id);
    plan.circular = study
        .cells()
        .iter()
        .filter(left)
        .map(|cell| cell.id)
        .collect();
    plan
}

/// A link counts by the recipe that it leads to, not by the id; titles and positions do not count.
/// Tables are named by their content in the settings, so that the source is part of it.
fn recipe(cell: &Cell, known: &BTreeMap<CellId, ContentHash>) -> ContentHash {
    let inputs: Vec<Option<ContentHash>> = cell
        .settings
        .draws_on()
        .iter()
        .map(|input| known.get(input).copied())
        .collect();
    ContentHash::of(&(KIND_VERSION, unlinked(&cell.settings), inputs))
}

/// The settings without their links. Prose keeps its links: which cell a fact is taken from is
/// its content.
fn unlinked(settings: &Settings) -> Settings {
    let mut settings = settings.clone();
    match &mut settings {
        Settings::Data(_) | Settings::Prose(_) => {}
        Settings::Prepare(prepare) => prepare.input.0 = None,
        Settings::Fit(fit) => fit.input.0 = None,
        Settings::Question(question) => question.fit.0 = None,
        Settings::Compare(compare) => compare.fits.iter_mut().for_each(|fit| fit.0 = None),
        Settings::Score(score) => score.fit.0 = None,
    }
    settings
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::study::edit::{Edit, Titled};
    use crate::study::link::Link;
    use crate::study::settings::data::Data;
    use crate::study::settings::fit::Fit;
    use crate::study::settings::prepare::choice::ScaleRule;
    use crate::study::settings::prepare::{Prepare, Step};

    fn insert(study: &mut Study, at: usize, title: &str, settings: Settings) -> CellId {
        let id = study.next_id();
        let cell = Cell {
            id,
            title: title.to_owned(),
            settings,
        };
        let _ = study.apply(Edit::Insert { at, cell }).unwrap();
        id
    }

    /// A fit that stands above the cells it draws on.
    fn upside_down() -> (Study, CellId, CellId, CellId) {
        let mut study = Study::new("Test");
        let data = insert(&mut study, 0, "scans", Settings::Data(Data::default()));
        let prepare = Prepare {
            input: Link::to(data),
            steps: vec![Step::Center],
        };
        let prepared = insert(&mut study, 0, "prepared", Settings::Prepare(prepare));
        let fit = Fit {
            input: Link::to(prepared),
            ..Fit::default()
        };
        let fit = insert(&mut study, 0, "fit", Settings::Fit(fit));
        (study, data, prepared, fit)
    }

    #[test]
    fn cells_are_evaluated_after_what_they_draw_on_wherever_they_stand() {
        let (study, data, prepared, fit) = upside_down();
        assert_eq!(plan(&study).order, [data, prepared, fit]);
    }

    #[test]
    fn renaming_and_moving_change_no_recipe() {
        let (mut study, data, ..) = upside_down();
        let before = plan(&study).recipes;
        let title = "other name".to_owned();
        let _ = study
            .apply(Edit::Retitle {
                what: Titled::Cell(data),
                title,
            })
            .unwrap();
        let _ = study.apply(Edit::Move { id: data, to: 0 }).unwrap();
        assert_eq!(plan(&study).recipes, before);
    }

    #[test]
    fn a_setting_changes_the_recipes_of_what_draws_on_it_and_no_other() {
        let (mut study, data, prepared, fit) = upside_down();
        let before = plan(&study).recipes;
        let steps = vec![
            Step::Center,
            Step::Scale {
                rule: ScaleRule::UnitVariance,
            },
        ];
        let settings = Settings::Prepare(Prepare {
            input: Link::to(data),
            steps,
        });
        let _ = study
            .apply(Edit::Configure {
                id: prepared,
                settings,
            })
            .unwrap();
        let after = plan(&study).recipes;
        assert_eq!(before[&data], after[&data]);
        assert_ne!(before[&prepared], after[&prepared]);
        assert_ne!(before[&fit], after[&fit]);
    }

    #[test]
    fn cells_in_a_circle_are_listed_and_not_followed() {
        let id = CellId::new;
        let prepare = |own: u32, input: u32| Cell {
            id: id(own),
            title: format!("cell {own}"),
            settings: Settings::Prepare(Prepare {
                input: Link::to(id(input)),
                steps: Vec::new(),
            }),
        };
        let study = Study::restored("By hand", vec![prepare(1, 2), prepare(2, 1)], 3);
        let plan = plan(&study);
        assert!(plan.order.is_empty());
        assert_eq!(plan.circular, [id(1), id(2)]);
    }
}
