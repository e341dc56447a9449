//! Where things lie: all on the paper, no text on a text or a line, panels off the grid.

use super::geometry::{Box, field, shapes, text_box, texts};
use crate::support::sheets::{case_by_hand, case_of};
use crate::support::{project, shared};
use leadsheet::case::{Case, Settings};
use leadsheet::recording::{Absence, Age, AgeOrigin, Channel, Lead};
use leadsheet::sheet::{Layout, Page, Paper, Role, Shape, SheetOptions, compose, layouts};
use leadsheet::units::{Gain, PaperSpeed};

/// Printers leave this edge white, in mm.
const EDGE: f64 = 4.0;

fn check(page: &Page, what: &str) {
    let (width, height) = page.paper.size();
    let inside = Box { left: EDGE, top: EDGE, right: width.get() - EDGE, bottom: height.get() - EDGE };
    let within = |x: f64, y: f64| {
        (inside.left..=inside.right).contains(&x) && (inside.top..=inside.bottom).contains(&y)
    };
    let texts = texts(page);
    let boxes: Vec<Box> = texts.iter().map(|text| text_box(text)).collect();
    for (text, own) in texts.iter().zip(&boxes) {
        assert!(
            within(own.left, own.top) && within(own.right, own.bottom),
            "{what}: {:?} leaves the page",
            text.text
        );
        assert!(text.size.get() >= 2.2 - 1e-9, "{what}: {:?} is set at {} mm", text.text, text.size.get());
    }
    for (index, own) in boxes.iter().enumerate() {
        for (other, its) in boxes.iter().enumerate().skip(index + 1) {
            assert!(!own.overlaps(its), "{what}: {:?} lies on {:?}", texts[index].text, texts[other].text);
        }
    }
    let field = field(page);
    for shape in shapes(page) {
        let Shape::Polyline { points, .. } = shape else { continue };
        for point in points {
            assert!(within(point.x.get(), point.y.get()), "{what}: a line leaves the page at {point:?}");
        }
        let starts_inside = field.is_some_and(|field| {
            (field.left..=field.right).contains(&points[0].x.get())
                && (field.top..=field.bottom).contains(&points[0].y.get())
        });
        if let (true, Some(field)) = (starts_inside, field) {
            let stays = points.iter().all(|point| (field.top..=field.bottom).contains(&point.y.get()));
            assert!(
                stays,
                "{what}: a line of the grid field leaves it: {:?}",
                &points[..points.len().min(6)]
            );
        }
        for (text, own) in texts.iter().zip(&boxes) {
            for pair in points.windows(2) {
                let crossed = own.is_crossed(pair[0], pair[1]);
                assert!(
                    !crossed,
                    "{what}: a line crosses {:?} between {:?} and {:?}",
                    text.text, pair[0], pair[1]
                );
            }
        }
    }
    if let Some(field) = field {
        for element in page.elements.iter().filter(|element| element.role == Role::TableRow) {
            for shape in &element.shapes {
                if let Shape::Text(text) = shape {
                    assert!(!text_box(text).overlaps(&field), "{what}: {:?} lies on the grid", text.text);
                }
            }
        }
    }
}

fn check_all(case: &Case, what: &str, speeds: &[f64]) {
    for layout in layouts() {
        let loaded = Layout::load(layout.name).unwrap_or_else(|error| panic!("{error}"));
        for paper in [Paper::A4, Paper::Letter] {
            for &speed in speeds {
                let options = SheetOptions {
                    paper,
                    speed: PaperSpeed::new(speed).expect("finite"),
                    ..SheetOptions::default()
                };
                let pages =
                    compose(case, &loaded, &options).unwrap_or_else(|error| panic!("{what}: {error}"));
                for page in &pages {
                    assert_eq!((page.of, page.paper), (pages.len(), paper));
                    check(
                        page,
                        &format!("{what}, {}, {paper:?}, {speed} mm/s, page {}", layout.name, page.number),
                    );
                }
            }
        }
    }
}

#[test]
fn nothing_overlaps_and_nothing_leaves_the_page_on_the_case_made_by_hand() {
    check_all(&case_by_hand(), "by hand", &[12.5, 25.0, 50.0]);
}

#[test]
fn nothing_overlaps_when_everything_is_there_to_be_said() {
    let mut case = case_by_hand();
    let long = "a text that no field of a sheet has room for, because it goes on and on and on and on and on"
        .to_owned();
    let occasion = &mut case.recording.occasion;
    occasion.placement = Some("torso electrodes, limb leads on the shoulders".to_owned());
    occasion.drug = Some("adenosine 6 mg at 14:02:10, flushed".to_owned());
    occasion.place = Some(long.clone());
    occasion.device = Some(long.clone());
    occasion.operator = Some(long.clone());
    occasion.remarks = vec![long; 20];
    case.recording.subject.age = Some(Age { years: 0.7, origin: AgeOrigin::Stated });
    case.recording.leads[Lead::V3] = Channel::Absent(Absence::NotRecorded);
    check_all(&case, "all said", &[25.0, 50.0]);
}

#[test]
fn nothing_overlaps_on_true_recordings() {
    for folder in ["data/ludb", "data/rhythms", "data/tachycardia", "data/onset"] {
        let Some(folder) = shared(folder) else { continue };
        let headers = crate::support::headers(&folder);
        for path in headers.iter().step_by(headers.len() / 5 + 1) {
            check_all(&case_of(path, Settings::default()), &path.display().to_string(), &[25.0]);
        }
    }
}

#[test]
fn nothing_overlaps_on_the_demo_recordings() {
    for name in ["tachycardia", "sinus", "onset"] {
        let path = project().join("demo-data").join(format!("{name}.hea"));
        check_all(&case_of(&path, Settings::default()), name, &[25.0, 50.0]);
    }
}

#[test]
fn speeds_gains_and_rows_that_are_not_drawn_are_refused() {
    let case = case_by_hand();
    let layout = Layout::load("standard").unwrap_or_else(|error| panic!("{error}"));
    let refused = |options: SheetOptions| compose(&case, &layout, &options).expect_err("refused").to_string();
    let usual = SheetOptions::default;
    assert!(refused(SheetOptions { speed: PaperSpeed::literal(30.0), ..usual() }).contains("12.5, 25 or 50"));
    assert!(refused(SheetOptions { gain: Gain::literal(0.0), ..usual() }).contains("5, 10 or 20"));
    assert!(refused(SheetOptions { rhythm: vec![Lead::II; 20], ..usual() }).contains("fewer rhythm leads"));
}
