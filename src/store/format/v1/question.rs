//! A Question cell in format 1.

use crate::base::real::Real;
use crate::store::format::place::{Fault, Fields};
use crate::store::format::v1::words;
use crate::store::format::v1::{DRAWS_ON, Group, Reading, Writing, read_link};
use crate::study::settings::question::{Ask, Question, Seal};

// What an absent field means, fixed for format 1 for ever.
const PAIRS: u32 = 50;
const THRESHOLD: Real = Real::constant(0.75);
const SEED: u64 = 20_260_302;
const CORRELATION: Real = Real::constant(0.8);

/// Reads the settings of a Question cell.
///
/// # Errors
/// The first [`Fault`].
pub fn read(fields: &mut Fields<'_>, reading: &Reading<'_>) -> Result<Question, Fault> {
    Ok(Question {
        fit: read_link(fields, reading)?,
        ask: read_ask(fields)?,
    })
}

/// Writes the settings of a Question cell.
pub fn write(question: &Question, group: &mut Group, writing: &Writing<'_>) {
    group.put_some(DRAWS_ON, question.fit.0.map(writing.link));
    match &question.ask {
        Ask::LeastSquares => group.put("ask", "least-squares"),
        Ask::ErrorCurve => group.put("ask", "error-curve"),
        Ask::CoefficientTrace => group.put("ask", "coefficient-trace"),
        Ask::Agreement => group.put("ask", "agreement"),
        Ask::Ladder { seal } => {
            group.put("ask", "ladder");
            group.put("seal", words::seal(*seal));
        }
        Ask::ChosenAgain {
            pairs,
            threshold,
            seed,
        } => {
            group.put("ask", "chosen-again");
            group.put("pairs", *pairs);
            group.put("threshold", threshold.get());
            group.put("seed", *seed);
        }
        Ask::StandIns { correlation } => {
            group.put("ask", "stand-ins");
            group.put("correlation", correlation.get());
        }
    }
}

fn read_ask(fields: &mut Fields<'_>) -> Result<Ask, Fault> {
    let at = fields.need("ask")?;
    match at.text()?.as_str() {
        "least-squares" => Ok(Ask::LeastSquares),
        "error-curve" => Ok(Ask::ErrorCurve),
        "coefficient-trace" => Ok(Ask::CoefficientTrace),
        "agreement" => Ok(Ask::Agreement),
        "ladder" => Ok(Ask::Ladder {
            seal: fields
                .read("seal", |at| at.one_of(words::SEALS))?
                .unwrap_or(Seal::Closed),
        }),
        "chosen-again" => Ok(Ask::ChosenAgain {
            pairs: fields.read("pairs", |at| at.count())?.unwrap_or(PAIRS),
            threshold: fields
                .read("threshold", |at| at.real())?
                .unwrap_or(THRESHOLD),
            seed: fields.read("seed", |at| at.whole())?.unwrap_or(SEED),
        }),
        "stand-ins" => Ok(Ask::StandIns {
            correlation: fields
                .read("correlation", |at| at.real())?
                .unwrap_or(CORRELATION),
        }),
        _ => Err(at.not_among(&[
            "least-squares",
            "error-curve",
            "coefficient-trace",
            "agreement",
            "ladder",
            "chosen-again",
            "stand-ins",
        ])),
    }
}
