//! What holds for every picture, of every kind, from every sort of number.

use widefold::base::hash::ContentHash;
use widefold::export::picture;
use widefold::figure::Figure;
use widefold::figure::ink::Palette;
use widefold::figure::layout::{layout, natural_size};
use widefold::figure::picture::{Mark, Picture, Point, Rect, Region, Size};
use widefold::figure::svg::svg;

use crate::{nasty, sample};

const WIDTHS: [f64; 5] = [90.0, 240.0, 360.0, 660.0, 1200.0];

/// Every sample figure and many nasty ones, each at several sizes, its natural one among them.
fn each(mut check: impl FnMut(&str, &Figure, &Picture)) {
    let mut figures: Vec<(String, Figure)> = sample::all()
        .into_iter()
        .map(|(name, figure)| (name.to_owned(), figure))
        .collect();
    for seed in 0..25 {
        figures.extend(nasty::all(seed));
    }
    for (name, figure) in &figures {
        for width in WIDTHS {
            let natural = natural_size(figure, width);
            check(name, figure, &layout(figure, natural));
            let squat = Size::new(width, (natural.height * 0.4).max(60.0));
            check(name, figure, &layout(figure, squat));
        }
    }
}

#[test]
fn no_two_words_of_a_picture_overlap_and_all_lie_in_it() {
    each(|name, _, picture| {
        let rects: Vec<Rect> = picture.words.iter().map(|word| word.rect()).collect();
        let page = Rect::new(0.0, 0.0, picture.size.width, picture.size.height).grown(0.2);
        for (at, rect) in rects.iter().enumerate() {
            let word = &picture.words[at].text;
            let corners = [
                Point::new(rect.x, rect.y),
                Point::new(rect.right(), rect.bottom()),
            ];
            assert!(
                corners.iter().all(|corner| page.holds(*corner)),
                "{name} {:?}: “{word}” leaves the picture",
                picture.size
            );
            for (other, before) in rects.iter().enumerate().take(at) {
                assert!(
                    !rect.overlaps(before),
                    "{name} {:?}: “{word}” on “{}”",
                    picture.size,
                    picture.words[other].text
                );
            }
        }
    });
}

#[test]
fn all_marks_and_spots_lie_in_the_picture() {
    each(|name, _, picture| {
        let page = Rect::new(0.0, 0.0, picture.size.width, picture.size.height).grown(1.0);
        let whole = |rect: &Rect| {
            let (from, to) = (
                Point::new(rect.x, rect.y),
                Point::new(rect.right(), rect.bottom()),
            );
            page.holds(from) && page.holds(to)
        };
        for mark in &picture.marks {
            let inside = match mark {
                Mark::Line { points, .. } | Mark::Area { points, .. } => {
                    points.iter().all(|point| page.holds(*point))
                }
                Mark::Disc { center, radius, .. } => {
                    whole(&Rect::new(center.x, center.y, 0.0, 0.0).grown(*radius))
                }
                Mark::Rect { rect, .. } | Mark::Clip { rect, .. } => whole(rect),
            };
            assert!(inside, "{name} {:?}: {mark:?}", picture.size);
        }
        for spot in &picture.spots {
            let inside = match &spot.region {
                Region::Rect(rect) => whole(rect),
                Region::Disc { center, .. } => page.holds(*center),
                // What is hidden by a clip cannot be pointed at either, but its line goes on.
                Region::Line(points) => points.iter().any(|point| page.holds(*point)),
            };
            assert!(inside, "{name} {:?}: {spot:?}", picture.size);
        }
    });
}

#[test]
fn every_coordinate_is_a_number() {
    each(|name, _, picture| {
        let text = svg(picture, &Palette::light());
        assert!(!text.contains("NaN") && !text.contains("inf"), "{name}");
    });
}

#[test]
fn the_same_figure_always_gives_the_same_picture() {
    each(|name, figure, picture| {
        let again = layout(figure, picture.size);
        assert!(again == *picture, "{name}");
        assert_eq!(ContentHash::of(&again), ContentHash::of(picture), "{name}");
    });
}

#[test]
fn a_text_that_was_cut_short_keeps_its_whole_in_the_file() {
    let mut seen = 0;
    each(|name, _, picture| {
        for word in &picture.words {
            if word.text.ends_with('…') {
                let full = word
                    .full
                    .as_ref()
                    .unwrap_or_else(|| panic!("{name}: {word:?}"));
                assert!(full.starts_with(word.text.trim_end_matches('…')), "{name}");
                seen += 1;
            }
        }
    });
    assert!(seen > 100, "the nasty names are long enough: {seen}");
}

#[test]
fn every_picture_is_svg_that_another_program_can_read() {
    for seed in 0..4 {
        for (name, figure) in nasty::all(seed) {
            let picture = layout(&figure, natural_size(&figure, 500.0)).with_margin(16.0);
            let read = picture::png(&svg(&picture, &Palette::dark()), 0.5);
            assert!(read.is_ok(), "{name}: {read:?}");
        }
    }
}

/// The glyphs themselves, as an independent program sets them, not the table of widths.
#[test]
fn the_letters_as_they_are_painted_do_not_overlap_either() {
    for (name, figure) in sample::all() {
        for width in [360.0, 660.0] {
            let picture = layout(&figure, natural_size(&figure, width));
            let boxes = crate::fonts::text_boxes(&svg(&picture, &Palette::paper()));
            assert_eq!(
                boxes.len(),
                picture.words.len(),
                "{name}: every word is painted"
            );
            for (at, rect) in boxes.iter().enumerate() {
                for (other, before) in boxes.iter().enumerate().take(at) {
                    assert!(
                        !rect.overlaps(before),
                        "{name} {width}: “{}” on “{}”",
                        picture.words[at].text,
                        picture.words[other].text
                    );
                }
            }
        }
    }
}

#[test]
fn large_figures_stay_small_files() {
    for (name, figure) in nasty::large() {
        let picture = layout(&figure, natural_size(&figure, 700.0));
        let text = svg(&picture, &Palette::paper());
        assert!(text.len() < 900_000, "{name}: {} bytes", text.len());
        assert!(picture::png(&text, 1.0).is_ok());
    }
}

#[test]
fn the_pointer_finds_what_is_under_it() {
    let all = sample::all();
    let find = |name: &str| {
        let (_, figure) = all.iter().find(|(other, _)| *other == name).unwrap();
        layout(figure, natural_size(figure, 660.0))
    };
    let agreement = find("agreement");
    let spot = &agreement.spots[17];
    let Region::Disc { center, .. } = spot.region else {
        panic!("samples are discs");
    };
    assert!(agreement.spot_at(center).is_some());
    assert_eq!(agreement.spots_of(&spot.meaning).count(), 1);
    assert_eq!(agreement.highlight(&spot.meaning).len(), 1);
    assert!(agreement.spot_at(Point::new(-5.0, -5.0)).is_none());

    // A place on the error curve is turned back into a strength.
    let curve = find("error-curve");
    let ruler = curve.ruler_at(Point::new(300.0, 100.0)).unwrap();
    assert!((ruler.value_at(ruler.rect.x) / 0.001 - 1.0).abs() < 1e-9);
    assert!((ruler.value_at(ruler.rect.right()) - 1.0).abs() < 1e-9);
    let middle = ruler.value_at(ruler.rect.x + ruler.rect.width / 2.0);
    assert!((middle / 0.001f64.sqrt() - 1.0).abs() < 1e-9, "{middle}");
}
