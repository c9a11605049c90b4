use super::*;
use crate::report::axis::Direction;

fn figure(direction: Direction) -> String {
    let line = |name: &str, values: &[f64]| Line {
        name: name.to_owned(),
        values: values.to_vec(),
    };
    let panel = |name: &str, lines: Vec<Line>| Panel {
        name: name.to_owned(),
        y: Axis::numbers("Height (m)", [-1.0, 3.0]),
        lines,
    };
    let mut x = Axis::numbers("Age (kyr)", [0.0, 3.0]);
    x.direction = direction;
    LineFigure {
        about: About {
            title: "a < b".to_owned(),
            description: String::new(),
        },
        width_mm: 85.0,
        x,
        places: vec![0.0, 1.0, 2.0, 3.0],
        panels: vec![
            panel(
                "north",
                vec![
                    line("one", &[0.0, 1.0, 2.0, 3.0]),
                    line("two", &[1.0, f64::NAN, 2.0, 0.0]),
                ],
            ),
            panel("south", vec![line("one", &[2.0, 1.0, 0.0, -1.0])]),
        ],
    }
    .svg()
}

/// Places of the texts of a figure.
fn text_at(svg: &str, text: &str) -> f64 {
    let line = svg
        .lines()
        .find(|l| l.ends_with(&format!(">{text}</text>")));
    let line = line.expect("the text");
    line.split('"')
        .nth(1)
        .and_then(|x| x.parse().ok())
        .expect("a place")
}

#[test]
fn regress_the_text_of_a_small_figure() {
    // Looked at as a picture when it was stored; a change of layout changes it.
    let expected = include_str!("lines_snapshot.svg");
    let got = figure(Direction::Falling);
    assert!(got == expected, "{got}");
}

#[test]
fn the_age_axis_runs_either_way() {
    let (falling, rising) = (figure(Direction::Falling), figure(Direction::Rising));
    assert!(text_at(&falling, "2.5") < text_at(&falling, "0.5"));
    assert!(text_at(&rising, "2.5") > text_at(&rising, "0.5"));
}

#[test]
fn a_missing_value_interrupts_the_line() {
    let svg = figure(Direction::Rising);
    assert_eq!(svg.matches("<circle").count(), 1);
    // Two samples of the legend, three pieces of lines.
    assert_eq!(svg.matches("<path").count(), 5);
}

#[test]
fn analytic_thinning_keeps_extremes() {
    let points: Vec<_> = (0..1000)
        .map(|n| [f64::from(n) * 1e-3, f64::from(n % 7)])
        .collect();
    let kept = thinned(&points);
    assert!(kept.len() <= 44, "{}", kept.len());
    assert!(kept.iter().any(|p| p[1] > 5.5) && kept.iter().any(|p| p[1] < 0.5));
}

#[test]
fn legends_break_into_rows() {
    assert_eq!(legend_rows(&["a", "b"], 200.0).len(), 1);
    assert_eq!(
        legend_rows(&["a long name", "another long name"], 60.0).len(),
        2
    );
}
