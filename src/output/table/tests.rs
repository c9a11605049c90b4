use super::super::claim::Overwrite;
use super::super::reader::RunFile;
use super::*;

fn table() -> Table {
    let field = TableVariable {
        name: "insolation",
        column: "insolation_w_m2",
        long_name: "insolation".to_owned(),
        standard_name: Some("toa_incoming_shortwave_flux"),
        units: "W m-2",
        decimals: 1,
        axes: vec![TableAxis::Age, TableAxis::Date, TableAxis::Latitude],
        values: (0..12).map(f64::from).collect(),
    };
    let length = TableVariable {
        name: "length",
        column: "length_day",
        units: "day",
        standard_name: None,
        axes: vec![TableAxis::Date],
        values: vec![0.5, f64::NAN],
        ..field.clone()
    };
    Table {
        axes: vec![
            (TableAxis::Age, vec![2.0, 1.5, -1.0]),
            (TableAxis::Date, vec![0.5, 171.5]),
            (TableAxis::Latitude, vec![-65.0, 65.0]),
        ],
        variables: vec![field, length],
        about: vec![("title".to_owned(), "a table\nin two lines".to_owned())],
    }
}

#[test]
fn text_has_a_row_for_every_combination() {
    let mut text = Vec::new();
    table().write_text(&mut text).unwrap();
    let text = String::from_utf8(text).unwrap();
    let expected = "# title: a table\n#   in two lines\n\
        age_kyr,date,latitude_deg,insolation_w_m2,length_day\n\
        2,01-01,-65,0.0,0.5\n2,01-01,65,1.0,0.5\n2,06-21,-65,2.0,\n2,06-21,65,3.0,\n1.5,01-01,-65,4.0,0.5\n";
    assert!(text.starts_with(expected), "{text}");
    assert!(text.ends_with("\n-1,06-21,65,11.0,\n"), "{text}");
}

#[test]
fn netcdf_holds_the_same_numbers() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.nc");
    let file = PlainFile::reserve(&path, Overwrite::Refuse).unwrap();
    table().write(file, TableForm::NetCdf).unwrap();
    let file = hdf5::File::open(&path).unwrap();
    let field = file.dataset("insolation").unwrap();
    assert_eq!(field.shape(), [3, 2, 2]);
    assert!((field.read_raw::<f64>().unwrap()[11] - 11.0).abs() < f64::MIN_POSITIVE);
    assert!(file.dataset("age").unwrap().attr("bounds").is_err());
    assert!(RunFile::open(&path).is_ok());
}

#[test]
fn a_variable_that_does_not_fit_its_axes_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.csv");
    let file = PlainFile::reserve(&path, Overwrite::Refuse).unwrap();
    let mut table = table();
    table.variables[0].values.pop();
    let message = table.write(file, TableForm::Csv).unwrap_err().to_string();
    assert!(message.contains("11 values do not fill"), "{message}");
    assert!(!path.exists());
}

#[test]
fn the_ending_says_the_form() {
    assert_eq!(TableForm::of(Path::new("a.b.csv")), Some(TableForm::Csv));
    assert_eq!(TableForm::of(Path::new("a/b.nc")), Some(TableForm::NetCdf));
    assert_eq!(TableForm::of(Path::new("nc")), None);
    assert_eq!(TableForm::of(Path::new("b.txt")), None);
}
