//! What a Prose cell has to say: its text as blocks, with the facts in it resolved.

use crate::eval::fact::Facts;
use crate::report::Context;
use crate::report::block::{Align, Block, Item, ItemMark, NamedFigure, Paragraph, Span};
use crate::study::cell::CellId;
use crate::study::prose::{FactReference, Piece, Prose};
use pulldown_cmark::{Alignment, Event, HeadingLevel, Options, Parser, Tag, TagEnd};

/// The letter that stands for a resolved piece while the markdown is read. It is of a range that
/// no text uses, and is taken out of what was typed.
const MARK: char = '\u{F8FF}';

/// The word before the name of a figure: `{cheese lasso: figure error-curve}`.
const FIGURE: &str = "figure ";

/// The text as blocks. Facts that do not exist are marked in place.
#[must_use]
pub fn blocks(context: &Context<'_>, prose: &Prose) -> Vec<Block> {
    let mut typed = String::new();
    let mut pieces = Vec::new();
    for piece in &prose.pieces {
        match piece {
            Piece::Text(words) => typed.extend(words.chars().filter(|letter| *letter != MARK)),
            Piece::Fact(reference) => {
                typed.push(MARK);
                pieces.push(resolved(context, reference));
            }
            Piece::Unknown(inside) => {
                typed.push(MARK);
                pieces.push(Resolved::Span(Span::Missing(inside.clone())));
            }
        }
    }
    let options = Options::ENABLE_TABLES | Options::ENABLE_STRIKETHROUGH;
    let mut reader = Reader {
        pieces: pieces.into_iter(),
        ..Reader::default()
    };
    for event in Parser::new_ext(&typed, options) {
        reader.take(event);
    }
    reader.end_paragraph();
    reader.blocks
}

/// The facts that the text asks for and that do not exist, as they would be typed.
#[must_use]
pub fn missing(context: &Context<'_>, prose: &Prose) -> Vec<String> {
    prose
        .pieces
        .iter()
        .filter_map(|piece| match piece {
            Piece::Text(_) => None,
            Piece::Unknown(inside) => Some(inside.clone()),
            Piece::Fact(reference) => match resolved(context, reference) {
                Resolved::Span(Span::Missing(name)) => Some(name),
                Resolved::Span(_) | Resolved::Figure(_) => None,
            },
        })
        .collect()
}

enum Resolved {
    Span(Span),
    Figure(Box<NamedFigure>),
}

fn resolved(context: &Context<'_>, reference: &FactReference) -> Resolved {
    let title = context.title(reference.cell);
    let missing = || Resolved::Span(Span::Missing(format!("{title}: {}", reference.fact)));
    if let Some(name) = reference.fact.strip_prefix(FIGURE) {
        return figure(context, reference.cell, name)
            .map_or_else(missing, |figure| Resolved::Figure(Box::new(figure)));
    }
    let Some(outcome) = context.outcome(reference.cell) else {
        return missing();
    };
    fact(reference, &outcome.facts).map_or_else(missing, Resolved::Span)
}

fn fact(reference: &FactReference, facts: &Facts) -> Option<Span> {
    let fact = facts.get(&reference.fact)?;
    let text = match reference.decimals {
        None => fact.shown_with_unit(),
        Some(decimals) => {
            crate::eval::fact::with_unit(&fact.shown_with_decimals(decimals), &fact.unit)
        }
    };
    Some(Span::Fact {
        cell: reference.cell,
        name: fact.name.clone(),
        text,
    })
}

/// A figure of another cell. A text has no figures of its own, so that this ends.
fn figure(context: &Context<'_>, cell: CellId, name: &str) -> Option<NamedFigure> {
    crate::report::figures(context, cell)
        .into_iter()
        .find(|figure| figure.name == name)
}

/// What stands around the words that are being read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Style {
    Strong,
    Emphasis,
}

/// Reads markdown, event by event.
#[derive(Default)]
struct Reader {
    pieces: std::vec::IntoIter<Resolved>,
    blocks: Vec<Block>,
    /// The blocks outside the quotations that are open.
    outer: Vec<Vec<Block>>,
    paragraph: Paragraph,
    figures: Vec<NamedFigure>,
    styles: Vec<Style>,
    link: Option<(String, String)>,
    heading: Option<u8>,
    code: Option<String>,
    /// For each open list, the next number, or none for bullets.
    lists: Vec<Option<u64>>,
    items: Vec<Item>,
    mark: Option<ItemMark>,
    table: Option<Tabular>,
}

#[derive(Default)]
struct Tabular {
    align: Vec<Align>,
    rows: Vec<Vec<Paragraph>>,
    row: Vec<Paragraph>,
}

impl Reader {
    fn take(&mut self, event: Event<'_>) {
        match event {
            Event::Start(tag) => self.start(tag),
            Event::End(tag) => self.end(tag),
            Event::Text(text) | Event::InlineHtml(text) | Event::Html(text) => self.words(&text),
            Event::Code(letters) => self.code_letters(&letters),
            Event::SoftBreak => self.words(" "),
            Event::HardBreak => self.words("\n"),
            Event::Rule => {
                self.end_paragraph();
                self.blocks.push(Block::Rule);
            }
            Event::InlineMath(letters) | Event::DisplayMath(letters) => {
                self.push(Span::Formula(letters.to_string()));
            }
            Event::FootnoteReference(name) => self.words(&name),
            Event::TaskListMarker(done) => self.words(if done { "☑ " } else { "☐ " }),
        }
    }

    fn start(&mut self, tag: Tag<'_>) {
        match tag {
            Tag::Heading { level, .. } => {
                self.end_paragraph();
                self.heading = Some(depth(level));
            }
            Tag::BlockQuote(_) => {
                self.end_paragraph();
                self.outer.push(std::mem::take(&mut self.blocks));
            }
            Tag::CodeBlock(_) => {
                self.end_paragraph();
                self.code = Some(String::new());
            }
            Tag::List(first) => {
                self.end_paragraph();
                self.lists.push(first);
            }
            Tag::Item => {
                self.mark = Some(match self.lists.last_mut() {
                    Some(Some(number)) => {
                        *number += 1;
                        ItemMark::Number(*number - 1)
                    }
                    Some(None) | None => ItemMark::Bullet,
                });
            }
            Tag::Table(alignments) => {
                self.end_paragraph();
                let align = |alignment: &Alignment| match alignment {
                    Alignment::None | Alignment::Left => Align::Start,
                    Alignment::Center => Align::Middle,
                    Alignment::Right => Align::End,
                };
                self.table = Some(Tabular {
                    align: alignments.iter().map(align).collect(),
                    ..Tabular::default()
                });
            }
            Tag::Strong => self.styles.push(Style::Strong),
            Tag::Emphasis => self.styles.push(Style::Emphasis),
            Tag::Link { dest_url, .. } | Tag::Image { dest_url, .. } => {
                self.link = Some((String::new(), dest_url.to_string()));
            }
            Tag::Paragraph
            | Tag::HtmlBlock
            | Tag::FootnoteDefinition(_)
            | Tag::DefinitionList
            | Tag::DefinitionListTitle
            | Tag::DefinitionListDefinition
            | Tag::TableHead
            | Tag::TableRow
            | Tag::TableCell
            | Tag::Strikethrough
            | Tag::Superscript
            | Tag::Subscript
            | Tag::MetadataBlock(_) => {}
        }
    }

    fn end(&mut self, tag: TagEnd) {
        match tag {
            TagEnd::Heading(_) => {
                let text = std::mem::take(&mut self.paragraph);
                let level = self.heading.take().unwrap_or(1);
                self.blocks.push(Block::Section { level, text });
            }
            TagEnd::BlockQuote(_) => {
                self.end_paragraph();
                let inside =
                    std::mem::replace(&mut self.blocks, self.outer.pop().unwrap_or_default());
                self.blocks.push(Block::Quote(inside));
            }
            TagEnd::CodeBlock => {
                let letters = self.code.take().unwrap_or_default();
                self.blocks.push(Block::Code(letters));
            }
            TagEnd::List(_) => {
                self.end_paragraph();
                let _ = self.lists.pop();
                if self.lists.is_empty() {
                    let items = std::mem::take(&mut self.items);
                    self.blocks.push(Block::Items(items));
                }
            }
            TagEnd::TableCell => {
                let text = std::mem::take(&mut self.paragraph);
                if let Some(table) = &mut self.table {
                    table.row.push(text);
                }
            }
            TagEnd::TableHead | TagEnd::TableRow => {
                if let Some(table) = &mut self.table {
                    table.rows.push(std::mem::take(&mut table.row));
                }
            }
            TagEnd::Table => self.end_table(),
            TagEnd::Strong | TagEnd::Emphasis => {
                let _ = self.styles.pop();
            }
            TagEnd::Link | TagEnd::Image => {
                if let Some((text, address)) = self.link.take() {
                    self.push(Span::Link { text, address });
                }
            }
            TagEnd::Paragraph
            | TagEnd::Item
            | TagEnd::HtmlBlock
            | TagEnd::FootnoteDefinition
            | TagEnd::DefinitionList
            | TagEnd::DefinitionListTitle
            | TagEnd::DefinitionListDefinition => self.end_paragraph(),
            TagEnd::Strikethrough
            | TagEnd::Superscript
            | TagEnd::Subscript
            | TagEnd::MetadataBlock(_) => {}
        }
    }

    fn end_table(&mut self) {
        if let Some(table) = self.table.take() {
            let mut rows = table.rows.into_iter();
            let head = rows.next().unwrap_or_default();
            self.blocks.push(Block::Tabular {
                align: table.align,
                head,
                rows: rows.collect(),
            });
        }
    }

    /// Words, with the resolved pieces in their places.
    fn words(&mut self, text: &str) {
        if let Some(code) = &mut self.code {
            for letter in text.chars() {
                match (letter == MARK).then(|| self.pieces.next()).flatten() {
                    Some(Resolved::Span(span)) => code.push_str(&span.plain()),
                    Some(Resolved::Figure(figure)) => self.figures.push(*figure),
                    None => code.push(letter),
                }
            }
            return;
        }
        for (at, words) in text.split(MARK).enumerate() {
            if at > 0 {
                self.piece();
            }
            if !words.is_empty() {
                self.styled(words);
            }
        }
    }

    fn piece(&mut self) {
        match self.pieces.next() {
            Some(Resolved::Span(span)) => match &mut self.link {
                Some((text, _)) => text.push_str(&span.plain()),
                None => self.push(span),
            },
            Some(Resolved::Figure(figure)) => self.figures.push(*figure),
            None => {}
        }
    }

    fn styled(&mut self, words: &str) {
        if let Some((text, _)) = &mut self.link {
            text.push_str(words);
            return;
        }
        self.push(match self.styles.last() {
            Some(Style::Strong) => Span::Strong(words.to_owned()),
            Some(Style::Emphasis) => Span::Emphasis(words.to_owned()),
            None => Span::Text(words.to_owned()),
        });
    }

    fn code_letters(&mut self, letters: &str) {
        for (at, words) in letters.split(MARK).enumerate() {
            if at > 0 {
                self.piece();
            }
            if !words.is_empty() {
                self.push(Span::Code(words.to_owned()));
            }
        }
    }

    fn push(&mut self, span: Span) {
        self.paragraph = std::mem::take(&mut self.paragraph).span(span);
    }

    fn end_paragraph(&mut self) {
        let text = std::mem::take(&mut self.paragraph);
        if !text.spans.is_empty() {
            if self.lists.is_empty() {
                self.blocks.push(Block::Paragraph(text));
            } else {
                self.items.push(Item {
                    depth: u8::try_from(self.lists.len() - 1).unwrap_or(u8::MAX),
                    mark: self.mark.take().unwrap_or(ItemMark::Continued),
                    text,
                });
            }
        }
        let figures = std::mem::take(&mut self.figures);
        self.blocks.extend(figures.into_iter().map(Block::Figure));
    }
}

const fn depth(level: HeadingLevel) -> u8 {
    match level {
        HeadingLevel::H1 => 1,
        HeadingLevel::H2 => 2,
        HeadingLevel::H3 => 3,
        HeadingLevel::H4 => 4,
        HeadingLevel::H5 => 5,
        HeadingLevel::H6 => 6,
    }
}
