use super::*;

fn figure(names: Names, colours: ColourMap, values: Vec<f64>) -> MapFigure {
    let cells = matches!(names, Names::Cells(_));
    let mut x = Axis::numbers("Month", [0.0, if cells { 2.0 } else { 1.0 }]);
    x.names = names;
    let mut y = Axis::numbers("Latitude", [-90.0, 90.0]);
    y.names = Names::Latitudes;
    MapFigure {
        about: About::default(),
        width_mm: 85.0,
        x,
        y,
        x_places: if cells {
            vec![0.5, 1.5]
        } else {
            vec![0.0, 1.0]
        },
        y_places: vec![-90.0, 90.0],
        values,
        label: "W m\u{207b}²".to_owned(),
        colours,
    }
}

/// Colour numbers of a picture of a figure, row by row from the top.
fn pixels_of(figure: &MapFigure) -> Vec<u8> {
    let file = figure.picture([8.0, 4.0], figure.colour_range()).unwrap();
    let mut reader = png::Decoder::new(std::io::Cursor::new(file))
        .read_info()
        .unwrap();
    let mut bytes = vec![0; reader.output_buffer_size().unwrap()];
    reader.next_frame(&mut bytes).unwrap();
    bytes
}

#[test]
fn analytic_north_is_up_and_the_first_column_left() {
    let figure = figure(Names::Numbers, ColourMap::Rising, vec![0.0, 5.0, 5.0, 10.0]);
    let pixels = pixels_of(&figure);
    assert_eq!(pixels.len(), 32 * 16);
    let (upper_right, lower_left) = (pixels[31], pixels[15 * 32]);
    assert!(
        upper_right > 230 && lower_left < 25,
        "{upper_right} {lower_left}"
    );
}

#[test]
fn analytic_named_cells_are_even() {
    let names = Names::Cells(vec!["J".to_owned(), "F".to_owned()]);
    let pixels = pixels_of(&figure(
        names,
        ColourMap::Rising,
        vec![0.0, 0.0, 10.0, 10.0],
    ));
    assert!(pixels[..16].iter().all(|p| *p == 0) && pixels[16..32].iter().all(|p| *p == 254));
}

#[test]
fn analytic_differences_have_zero_in_the_middle_and_gaps_are_grey() {
    let values = vec![-3.0, 1.0, f64::NAN, 2.0];
    let figure = figure(Names::Numbers, ColourMap::Diverging, values);
    let [low, high] = figure.colour_range();
    assert!(
        (low + high).abs() < 1e-12 && (3.0..=3.5).contains(&high),
        "{high}"
    );
    assert_eq!(pixels_of(&figure)[15 * 32 + 31], 255);
}

#[test]
fn the_text_has_both_pictures_and_all_names() {
    let svg = figure(Names::Numbers, ColourMap::Rising, vec![0.0, 1.0, 2.0, 3.0])
        .svg()
        .unwrap();
    assert_eq!(svg.matches("<image").count(), 2);
    for name in ["90°S", "90°N", "Month", "Latitude", "W m\u{207b}²"] {
        assert!(svg.contains(&format!(">{name}<")), "{name} is not in {svg}");
    }
    assert!(svg.len() < 40_000, "{}", svg.len());
}
