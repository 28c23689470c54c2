//! Eyes: words are found on the screen by how they look, wherever they stand.
//!
//! The words are set by the program's own letters without a window, and looked for by the
//! correlation of brightness, which depends neither on ink nor on ground (Lewis 1995, Fast
//! normalized cross-correlation). Letters lie between pixels, so that each place between two
//! pixels is tried by quarters.

use crate::screen::Image;
use iced::widget::{container, space};
use iced::{Length, Padding};
use widefold::app::harness::Harness;
use widefold::app::theme::{Mode, text};
use widefold::app::widget::Element;

/// In which letters words are set.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Letters {
    /// Controls and states.
    Plain,
    /// Headings, and what is most likely wanted next.
    Strong,
    /// Sentences and prose.
    Reading,
    /// Names of cells.
    Name,
    /// The title of the study.
    Title,
}

/// How alike a place must look.
const ALIKE: f32 = 0.86;
/// How alike a few of its pixels must look before all are asked.
const ROUGHLY: f32 = 0.55;
/// How many pixels are these few.
const FEW: usize = 40;
/// The room on either side of words that must be free, so that “Save” is not found in “Saved”.
const ROOM: usize = 4;

/// A place on the screen, in pixels.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Place {
    /// Its left edge.
    pub x: f32,
    /// Its upper edge.
    pub y: f32,
    /// Its width.
    pub width: f32,
    /// Its height.
    pub height: f32,
    /// How alike it looks, at most 1.
    pub alike: f32,
}

impl Place {
    /// Its middle.
    pub fn middle(self) -> (f32, f32) {
        (self.x + self.width / 2.0, self.y + self.height / 2.0)
    }
}

/// Words as they look at one place between two pixels.
struct Look {
    width: usize,
    height: usize,
    /// Brightness without its mean, and scaled to length 1.
    all: Vec<f32>,
    /// The pixels that tell most: position and brightness, without their mean and scaled.
    few: Vec<(usize, usize, f32)>,
}

fn set<'a>(words: &'a str, letters: Letters) -> Element<'a, ()> {
    let words = words.to_owned();
    match letters {
        Letters::Plain => text::body(words),
        Letters::Strong => text::heading(words),
        Letters::Reading => text::prose(words),
        Letters::Name => text::name(words),
        Letters::Title => text::title(words),
    }
    .into()
}

fn looks(words: &str, letters: Letters) -> Vec<Look> {
    let (width, height) = (12 * words.chars().count() + 40, 48);
    let shot = |shift: f32| {
        let mut window = Harness::new(width as f32, height as f32, Mode::Light);
        let words = container(set(words, letters))
            .padding(Padding {
                top: 8.0,
                left: 12.0 + shift,
                ..Padding::ZERO
            })
            .width(Length::Fill);
        let page = iced::widget::column![words, space().height(Length::Fill)];
        window.shot::<()>(page.into(), 1.0)
    };
    (0..4)
        .map(|quarter| {
            let shot = shot(quarter as f32 / 4.0);
            let gray: Vec<f32> = shot
                .pixels
                .chunks_exact(4)
                .map(|pixel| brightness(pixel[0], pixel[1], pixel[2]))
                .collect();
            let ground = gray[0];
            let is_ink = |x: usize, y: usize| (gray[y * width + x] - ground).abs() > 24.0;
            let columns: Vec<usize> = (0..width)
                .filter(|x| (0..height).any(|y| is_ink(*x, y)))
                .collect();
            let rows: Vec<usize> = (0..height)
                .filter(|y| (0..width).any(|x| is_ink(x, *y)))
                .collect();
            let (Some(left), Some(right), Some(top), Some(bottom)) =
                (columns.first(), columns.last(), rows.first(), rows.last())
            else {
                panic!("“{words}” leaves no trace");
            };
            let (left, right) = (left - ROOM, (right + ROOM + 1).min(width));
            let cut: Vec<f32> = (*top..=*bottom)
                .flat_map(|y| (left..right).map(move |x| (x, y)))
                .map(|(x, y)| gray[y * width + x])
                .collect();
            Look::new(right - left, &cut)
        })
        .collect()
}

fn brightness(red: u8, green: u8, blue: u8) -> f32 {
    // Rec. ITU-R BT.601.
    0.299 * f32::from(red) + 0.587 * f32::from(green) + 0.114 * f32::from(blue)
}

/// Values without their mean, scaled to length 1.
fn centered(values: &[f32]) -> Vec<f32> {
    let mean = values.iter().sum::<f32>() / values.len() as f32;
    let length = values
        .iter()
        .map(|value| (value - mean).powi(2))
        .sum::<f32>()
        .sqrt()
        .max(f32::MIN_POSITIVE);
    values.iter().map(|value| (value - mean) / length).collect()
}

impl Look {
    fn new(width: usize, gray: &[f32]) -> Self {
        let all = centered(gray);
        // The darkest and the brightest beside them, spread over the words.
        let step = (all.len() / (4 * FEW)).max(1);
        let mut order: Vec<usize> = (0..all.len()).step_by(step).collect();
        order.sort_by(|a, b| all[*a].total_cmp(&all[*b]).then(a.cmp(b)));
        let half = FEW.min(order.len()) / 2;
        let ends = order[..half].iter().chain(&order[order.len() - half..]);
        let chosen: Vec<usize> = ends.copied().collect();
        let values: Vec<f32> = chosen.iter().map(|at| gray[*at]).collect();
        let few = chosen
            .iter()
            .zip(centered(&values))
            .map(|(at, value)| (at % width, at / width, value))
            .collect();
        Self {
            width,
            height: gray.len() / width,
            all,
            few,
        }
    }

    fn alike(&self, page: &Page, x: usize, y: usize) -> f32 {
        let (mut sum, mut squares, mut dot) = (0.0, 0.0, 0.0);
        for row in 0..self.height {
            let from = (y + row) * page.width + x;
            let seen = &page.gray[from..from + self.width];
            let look = &self.all[row * self.width..(row + 1) * self.width];
            for (seen, look) in seen.iter().zip(look) {
                sum += seen;
                squares += seen * seen;
                dot += seen * look;
            }
        }
        let spread = squares - sum * sum / self.all.len() as f32;
        (dot / spread.max(1.0).sqrt()).abs()
    }

    fn is_roughly_alike(&self, page: &Page, x: usize, y: usize) -> bool {
        let (mut sum, mut squares, mut dot) = (0.0, 0.0, 0.0);
        for (right, down, look) in &self.few {
            let seen = page.gray[(y + down) * page.width + x + right];
            sum += seen;
            squares += seen * seen;
            dot += seen * look;
        }
        let spread = squares - sum * sum / self.few.len() as f32;
        spread > 400.0 && (dot / spread.sqrt()).abs() > ROUGHLY
    }
}

/// The screen as eyes see it.
struct Page {
    width: usize,
    height: usize,
    gray: Vec<f32>,
}

/// Where words stand on the screen, from top to bottom.
pub fn find(image: &Image, words: &str, letters: Letters) -> Vec<Place> {
    let page = Page {
        width: image.width,
        height: image.height,
        gray: image
            .pixels
            .iter()
            .map(|pixel| brightness((pixel >> 16) as u8, (pixel >> 8) as u8, *pixel as u8))
            .collect(),
    };
    let mut places: Vec<Place> = Vec::new();
    for look in looks(words, letters) {
        for y in 0..page.height.saturating_sub(look.height) {
            for x in 0..page.width.saturating_sub(look.width) {
                if !look.is_roughly_alike(&page, x, y) {
                    continue;
                }
                let alike = look.alike(&page, x, y);
                if alike < ALIKE {
                    continue;
                }
                let place = Place {
                    x: (x + ROOM) as f32,
                    y: y as f32,
                    width: (look.width - 2 * ROOM) as f32,
                    height: look.height as f32,
                    alike,
                };
                let near = places.iter_mut().find(|other| {
                    (other.x - place.x).abs() < place.width / 2.0
                        && (other.y - place.y).abs() < place.height
                });
                match near {
                    Some(other) if other.alike < alike => *other = place,
                    Some(_) => {}
                    None => places.push(place),
                }
            }
        }
    }
    places.sort_by(|a, b| a.y.total_cmp(&b.y).then(a.x.total_cmp(&b.x)));
    places
}
