//! Classes: which are called which.

use crate::eval::caveat::Caveat;
use crate::eval::fact::{Fact, Facts};
use crate::eval::kind::fit::{
    Fitted, Performance, by_class, class_counts, confusion, held_out_predictions,
};
use crate::eval::question::agreement::publish;

/// The facts and remarks.
pub fn answer(fitted: &Fitted, held_out: &Performance) -> (Facts, Vec<Caveat>) {
    let mut facts = Facts::new();
    publish(&mut facts, fitted, held_out);
    if let Some(basis) = held_out.basis {
        facts.push(Fact::text(
            "pairs compared",
            basis.words(),
            "Which pairs of samples count in the areas under the curve.",
        ));
    }
    let table = by_class(fitted, held_out);
    if let crate::eval::fact::FactValue::Table(values) = &table.value {
        let shares = values.numbers("sensitivity");
        let known = || (0..shares.len()).filter(|at| shares[*at].is_finite());
        let names = values.texts("class");
        let worst = known().min_by(|a, b| shares[*a].total_cmp(&shares[*b]));
        let best = known().max_by(|a, b| shares[*a].total_cmp(&shares[*b]));
        for (which, at) in [("hardest", worst), ("easiest", best)] {
            let Some(at) = at else { continue };
            facts.push(Fact::text(
                &format!("{which} class"),
                names[at].clone(),
                "The class of which the smallest, or the largest, share is called right.",
            ));
            facts.push(Fact::number(
                &format!("{which} class sensitivity"),
                shares[at],
                "",
                crate::base::number::Precision::Percent(0),
                "The share of its held-out samples that are called right.",
            ));
        }
    }
    facts.push(class_counts(fitted));
    facts.push(confusion(fitted, held_out));
    facts.push(table);
    facts.push(held_out_predictions(fitted, held_out));
    (facts, Vec::new())
}
