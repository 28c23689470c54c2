//! Words for samples and units: the study's own where they are words, plain ones otherwise.

use crate::study::settings::data::Data;

/// A noun in singular and plural.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Noun {
    /// One of it: `wheel`.
    pub one: String,
    /// Several: `wheels`.
    pub many: String,
}

impl Noun {
    fn new(one: &str) -> Self {
        Self {
            one: one.to_owned(),
            many: plural(one),
        }
    }

    /// The indefinite article and the noun: `a wheel`, `an oyster`.
    #[must_use]
    pub fn with_article(&self) -> String {
        format!("{} {}", article(&self.one), self.one)
    }
}

/// What one sample is called.
#[must_use]
pub fn sample(data: Option<&Data>) -> Noun {
    let named = data.and_then(|data| data.sample_name.as_deref());
    Noun::new(
        &named
            .and_then(word_of)
            .unwrap_or_else(|| "sample".to_owned()),
    )
}

/// What one unit is called; the word for a sample where samples are the units.
#[must_use]
pub fn unit(data: Option<&Data>) -> Noun {
    match data.and_then(|data| data.unit.as_deref()) {
        None => sample(data),
        Some(column) => Noun::new(&word_of(column).unwrap_or_else(|| "unit".to_owned())),
    }
}

/// What one batch is called.
#[must_use]
pub fn batch(data: Option<&Data>) -> Noun {
    let named = data.and_then(|data| data.batch.as_deref());
    Noun::new(
        &named
            .and_then(word_of)
            .unwrap_or_else(|| "batch".to_owned()),
    )
}

/// The noun in a column's name, if the name is one that a sentence can hold: `wheel` in
/// “wheel_id”, none in “V17” or “Probennummer/Jahr”.
fn word_of(column: &str) -> Option<String> {
    const LABELS: [&str; 9] = [
        "id", "name", "code", "no", "nr", "number", "label", "key", "index",
    ];
    let lower = column.trim().to_lowercase().replace(['_', '-', '.'], " ");
    let mut words: Vec<&str> = lower.split_whitespace().collect();
    while words.len() > 1 && words.last().is_some_and(|word| LABELS.contains(word)) {
        let _ = words.pop();
    }
    let lawful = |word: &&str| word.len() > 1 && word.chars().all(char::is_alphabetic);
    let is_noun = (1..=2).contains(&words.len())
        && words.iter().all(lawful)
        && !words.iter().any(|word| LABELS.contains(word))
        && words.concat().len() <= 24;
    is_noun.then(|| words.join(" "))
}

/// The plural of an English noun, by the rules that cover words for things that are counted.
#[must_use]
pub fn plural(one: &str) -> String {
    let ends = |endings: &[&str]| endings.iter().any(|ending| one.ends_with(ending));
    if let Some(stem) = one.strip_suffix('y')
        && !ends(&["ay", "ey", "oy", "uy"])
    {
        return format!("{stem}ies");
    }
    if let Some(stem) = one.strip_suffix("leaf") {
        return format!("{stem}leaves");
    }
    if ends(&["s", "x", "z", "ch", "sh"]) {
        return format!("{one}es");
    }
    format!("{one}s")
}

/// `a` or `an`, by the letter that follows.
#[must_use]
pub fn article(word: &str) -> &'static str {
    match word.chars().next() {
        Some('a' | 'e' | 'i' | 'o' | 'A' | 'E' | 'I' | 'O') => "an",
        Some('u') if !word.starts_with("uni") && !word.starts_with("use") => "an",
        Some(_) | None => "a",
    }
}

/// `a`, `a and b`, `a, b and c`.
#[must_use]
pub fn list(words: &[String]) -> String {
    match words {
        [] => String::new(),
        [one] => one.clone(),
        [most @ .., last] => format!("{} and {last}", most.join(", ")),
    }
}

/// A list that names a few and counts the rest: `a, b, c and 5 more`.
#[must_use]
pub fn short_list(words: &[String]) -> String {
    const SHOWN: usize = 4;
    if words.len() <= SHOWN {
        return list(words);
    }
    let shown = SHOWN - 1;
    format!(
        "{} and {} more",
        words[..shown].join(", "),
        words.len() - shown
    )
}

/// The same words with a capital at their front.
#[must_use]
pub fn capital(words: &str) -> String {
    let mut letters = words.chars();
    letters.next().map_or_else(String::new, |first| {
        first.to_uppercase().chain(letters).collect()
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn with_unit(column: &str) -> Data {
        Data {
            unit: Some(column.to_owned()),
            ..Data::default()
        }
    }

    #[test]
    fn a_units_own_word_is_taken_where_it_is_one() {
        for (column, one, many) in [
            ("wheel", "wheel", "wheels"),
            ("Wheel_ID", "wheel", "wheels"),
            ("seed lot", "seed lot", "seed lots"),
            ("family", "family", "families"),
            ("bay", "bay", "bays"),
            ("batch", "batch", "batches"),
            ("leaf", "leaf", "leaves"),
        ] {
            let noun = unit(Some(&with_unit(column)));
            assert_eq!((noun.one.as_str(), noun.many.as_str()), (one, many));
        }
    }

    #[test]
    fn a_column_that_is_no_word_gives_the_plain_one() {
        for column in [
            "V17",
            "id",
            "Nr.",
            "sample (lab)",
            "x",
            "the lot of one lot",
        ] {
            assert_eq!(unit(Some(&with_unit(column))).one, "unit", "{column}");
        }
        assert_eq!(unit(None).one, "sample");
        assert_eq!(unit(Some(&Data::default())).many, "samples");
    }

    #[test]
    fn lists_read_as_lists() {
        let words = |text: &str| text.split(' ').map(str::to_owned).collect::<Vec<_>>();
        assert_eq!(list(&words("a")), "a");
        assert_eq!(list(&words("a b c")), "a, b and c");
        assert_eq!(short_list(&words("a b c d e f")), "a, b, c and 3 more");
        assert_eq!(article("oyster"), "an");
        assert_eq!(article("unit"), "a");
    }
}
