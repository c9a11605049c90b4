use hdf5::types::FixedAscii;

use super::*;

fn small(path: &Path) {
    let mut file = NetCdfFile::create(path).unwrap();
    file.dimension("age", Length::Unlimited).unwrap();
    file.dimension("lat", Length::Fixed(2)).unwrap();
    file.dimension("bnds", Length::Fixed(2)).unwrap();
    file.dimension("name_length", Length::Fixed(3)).unwrap();
    let fixed = |name, kind, dimensions| Definition {
        name,
        kind,
        dimensions,
        records_per_chunk: None,
        missing: Missing::Never,
    };
    let age = Definition {
        records_per_chunk: Some(4),
        ..fixed("age", Kind::F64, &["age"])
    };
    let age = file.define(&age).unwrap();
    let lat = file.define(&fixed("lat", Kind::F64, &["lat"])).unwrap();
    file.without_coordinate("bnds").unwrap();
    file.without_coordinate("name_length").unwrap();
    let place = file
        .define(&fixed("place", Kind::Char, &["lat", "name_length"]))
        .unwrap();
    let count = file.define(&fixed("count", Kind::I32, &[])).unwrap();
    let field = Definition {
        name: "field",
        kind: Kind::F32,
        dimensions: &["age", "lat"],
        records_per_chunk: Some(4),
        missing: Missing::Nan,
    };
    let field = file.define(&field).unwrap();
    file.text(None, "title", "invented data, Milanković")
        .unwrap();
    file.text(Some(field), "empty", "").unwrap();
    file.text(Some(field), "long", &"x".repeat(100_000))
        .unwrap();
    file.write(lat, Values::F64(&[-45.0, 45.0])).unwrap();
    file.write(place, Values::Char(b"S  N  ")).unwrap();
    file.write(count, Values::I32(&[7])).unwrap();
    file.write_records(age, 0, Values::F64(&[3.0, 2.0, 1.0]))
        .unwrap();
    file.write_records(field, 0, Values::F32(&[1.0, 2.0]))
        .unwrap();
    file.write_records(field, 1, Values::F32(&[3.0, f32::NAN, 5.0, 6.0]))
        .unwrap();
    file.close().unwrap();
}

#[test]
fn equal_content_gives_equal_bytes() {
    let folder = tempfile::tempdir().unwrap();
    let (a, b) = (folder.path().join("a.nc"), folder.path().join("b.nc"));
    small(&a);
    small(&b);
    assert!(std::fs::read(&a).unwrap() == std::fs::read(&b).unwrap());
}

#[test]
fn values_types_and_scales_are_in_the_file() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.nc");
    small(&path);
    let file = File::open(&path).unwrap();
    let field = file.dataset("field").unwrap();
    assert_eq!(field.shape(), [3, 2]);
    assert_eq!(field.chunk(), Some(vec![4, 2]));
    let values = field.read_raw::<f32>().unwrap();
    assert_eq!((values[2], values[5]), (3.0, 6.0));
    assert!(values[3].is_nan());
    let fill = field
        .create_plist()
        .unwrap()
        .get_fill_value_as::<f32>()
        .unwrap();
    assert!(fill.unwrap().is_nan());
    assert_eq!(field.attr("_FillValue").unwrap().shape(), [1]);
    assert_eq!(
        file.dataset("count").unwrap().read_scalar::<i32>().unwrap(),
        7
    );
    for (scale, name) in [
        ("age", "age"),
        ("bnds", "This is a netCDF dimension but not a netCDF"),
    ] {
        let scale = file.dataset(scale).unwrap();
        let class = scale.attr("CLASS").unwrap();
        assert_eq!(class.dtype().unwrap().size(), 16);
        let text = scale.attr("NAME").unwrap();
        let text = text.read_raw::<FixedAscii<80>>().unwrap();
        assert!(text[0].as_str().starts_with(name));
        assert!(scale.attr("REFERENCE_LIST").is_ok() == (name == "age"));
    }
}

#[test]
fn misuse_is_an_error_that_names_file_and_item() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.nc");
    let mut file = NetCdfFile::create(&path).unwrap();
    file.dimension("lat", Length::Fixed(2)).unwrap();
    let mut lat = Definition {
        name: "lat",
        kind: Kind::F64,
        dimensions: &["latitude"],
        records_per_chunk: None,
        missing: Missing::Never,
    };
    let message = file.define(&lat).unwrap_err().to_string();
    assert!(
        message.contains("a.nc") && message.contains("`latitude`"),
        "{message}"
    );
    lat.dimensions = &["lat"];
    let lat = file.define(&lat).unwrap();
    let message = file
        .write(lat, Values::F64(&[1.0]))
        .unwrap_err()
        .to_string();
    assert!(
        message.contains("1 values") && message.contains("2 of type"),
        "{message}"
    );
    assert!(file.write(lat, Values::I32(&[1, 2])).is_err());
    assert!(file.dimension("none", Length::Fixed(0)).is_err());
    let message = file
        .text(None, "a", &"x".repeat(MAX_TEXT + 1))
        .unwrap_err()
        .to_string();
    assert!(message.contains("1048577 bytes"), "{message}");
}
