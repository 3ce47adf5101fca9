//! The mark of the stated values in the picture itself.

mod figure_world;

use abide::figure::render::{self, Width, page};
use abide::figure::{Figure, Legend, MapInput, map};
use abide::survey::Record;
use abide::system::{Key, Measured, Study, System};
use figure_world::{Pixels, SPAN_DAY, axis, records, study, system};

fn drawn(study: &Study, records: &[Record]) -> Figure {
    drawn_of(study, &system(), records)
}

fn drawn_of(study: &Study, system: &System, records: &[Record]) -> Figure {
    let input =
        MapInput { study, system, records, column: "megno", span_day: SPAN_DAY, reach: 0, caption: &[] };
    map(&input).unwrap()
}

#[test]
fn the_stated_error_bar_shows_beside_its_marker_in_a_narrow_figure() {
    let mut plane = study(60, 40);
    plane.axes[0] = axis(1, Key::Period, (15.0, 21.0, 60));
    let found = records(&plane);
    for width in [Width::COLUMN, Width::PAGE] {
        let figure = drawn(&plane, &found);
        let page = page(&figure, width).unwrap();
        let pixels = Pixels::of(&render::png(&figure, width).unwrap());
        let (frame, panel) = (&page.frames[0], &figure.panels[0]);
        let across = |v: f64| frame.left + panel.x.scale().place(v).unwrap() * (frame.right - frame.left);
        let up = panel.y.as_ref().unwrap().scale().place(0.08).unwrap();
        let y = frame.bottom - up * (frame.bottom - frame.top);
        // c is stated at 17.79 ± 0.12 d: outwards from the middle there is the black ring, its white edge, and then
        // the bar, which is black again before its end.
        let (from, to) = (across(17.79), across(17.79 + 0.12));
        let row: Vec<bool> = (0..400)
            .map(|i| pixels.at(&page, (from + (to - from) * f64::from(i) / 400.0, y)) < [60, 60, 60])
            .collect();
        let runs = row.windows(2).filter(|w| !w[0] && w[1]).count();
        assert!(runs >= 2, "{width:?}: {runs} black runs between the middle and the end of the bar");
    }
}

#[test]
fn a_stated_value_on_one_axis_is_an_upright_line_that_has_no_height() {
    let mut line = study(150, 1);
    line.axes.truncate(1);
    let figure = drawn(&line, &records(&line));
    let page = page(&figure, Width::PAGE).unwrap();
    let pixels = Pixels::of(&render::png(&figure, Width::PAGE).unwrap());
    let frame = &page.frames[0];
    let x = frame.left + figure.panels[0].x.scale().place(17.79).unwrap() * (frame.right - frame.left);
    let black = |y: f64| (-2..=2).any(|i| pixels.at(&page, (x + 0.24 * f64::from(i), y)) == [0, 0, 0]);
    let height = frame.bottom - frame.top;
    for place in [0.1, 0.3, 0.5, 0.7, 0.9] {
        assert!(black(frame.top + place * height), "the line reaches over the whole height: {place}");
    }
    // The bar lies on the top edge and nowhere below it.
    let beside = x + 4.0;
    assert_eq!(pixels.at(&page, (beside, frame.top)), [0, 0, 0]);
    assert_eq!(pixels.at(&page, (beside, frame.top + 9.0)), [255, 255, 255]);
}

/// The sample of the legend has a bar where the picture has one, and none where no uncertainty is stated.
#[test]
fn the_legend_shows_a_bar_only_where_one_is_drawn() {
    let plane = study(20, 20);
    let found = records(&plane);
    let mut exact = system();
    for planet in &mut exact.planets {
        let keys: Vec<(Key, Measured)> = planet.stated.iter().collect();
        keys.iter()
            .for_each(|(key, m)| planet.stated.insert(*key, Measured { plus: None, minus: None, ..*m }));
    }
    for (of, bar) in [(system(), true), (exact, false)] {
        let figure = drawn_of(&plane, &of, &found);
        let page = page(&figure, Width::PAGE).unwrap();
        let pixels = Pixels::of(&render::png(&figure, Width::PAGE).unwrap());
        let (_, x, y) =
            page.samples.iter().find(|(entry, _, _)| matches!(entry, Legend::Nominal(_))).unwrap();
        // A sample is 15 pt by 8 pt: on its middle line the bar reaches almost to its edge, the ring does not.
        let dark = |across: f64| pixels.at(&page, (x + across, y + 4.0)) < [60, 60, 60];
        assert_eq!(dark(1.5), bar);
        assert_eq!(dark(13.5), bar);
        assert!((0..150).any(|step| dark(0.1 * f64::from(step))), "the ring is there in any case");
    }
}
