use super::*;

/// A table with every kind of axis, for invented data.
fn table() -> Schema {
    Schema {
        axes: AxisValues {
            by_latitude: Vec::new(),
            latitude_edges_deg: vec![-90.0, 0.0, 90.0],
            depth_edges_m: vec![0.0, 10.0, 30.0],
            months: MonthCells::Fixed {
                edges_year: (0..13).map(|m| f64::from(m) / 12.0).collect(),
                lengths_day: vec![365.0 / 12.0; 12],
            },
            coastal_latitudes_deg: vec![-20.0, 20.0],
        },
        variables: vec![Variable {
            name: "t2m",
            axes: &[Axis::Month, Axis::Latitude],
            units: "K",
            long_name: "invented temperature",
            standard_name: Some("air_temperature"),
            scale: Scale::Temperature,
            statistic: Statistic::Mean,
        }],
        global: REQUIRED_GLOBAL
            .iter()
            .map(|k| ((*k).to_owned(), "invented".to_owned()))
            .collect(),
    }
}

fn complaint(change: impl FnOnce(&mut Schema)) -> String {
    let mut schema = table();
    change(&mut schema);
    schema.check().unwrap_err().to_string()
}

#[test]
fn a_sound_table_passes_and_counts_its_values() {
    let schema = table();
    schema.check().unwrap();
    assert_eq!(schema.record_size(), 24);
    assert_eq!(schema.length(Axis::LatitudeEdge), 3);
}

#[test]
fn units_that_mislead_readers_are_refused() {
    for (units, hint) in [
        ("days since 1950-01-01", "since"),
        ("days", "singular"),
        ("ka", "area"),
        ("W m-2 Ma-1", ""),
        ("", "UDUNITS"),
        ("m", "units of temperature"),
    ] {
        let message = complaint(|s| s.variables[0].units = units);
        assert!(
            message.contains("`t2m`") && message.contains(hint),
            "{message}"
        );
    }
    assert!(complaint(|s| s.variables[0].scale = Scale::Plain).contains("scale"));
}

fn shorten_the_year(schema: &mut Schema) {
    if let MonthCells::Fixed { edges_year, .. } = &mut schema.axes.months {
        edges_year[12] = 0.99;
    }
}

#[test]
fn contradictions_are_named() {
    let message = complaint(|s| s.axes.latitude_edges_deg[1] = -95.0);
    assert!(
        message.contains("-95") && message.contains("-90 to 90"),
        "{message}"
    );
    assert!(complaint(shorten_the_year).contains("0.99"));
    assert!(complaint(|s| s.axes.depth_edges_m.truncate(1)).contains("at least 2"));
    assert!(complaint(|s| s.axes.depth_edges_m[1] = 40.0).contains("40 is followed by 30"));
    assert!(complaint(|s| s.axes.latitude_edges_deg.clear()).contains("`lat`"));
    assert!(complaint(|s| s.variables[0].name = "lat").contains("taken"));
    assert!(complaint(|s| s.variables[0].name = "2m").contains("begins with a letter"));
    assert!(complaint(|s| s.variables.push(s.variables[0].clone())).contains("taken"));
    assert!(complaint(|s| drop(s.global.pop())).contains("`comment`"));
    assert!(complaint(|s| s.global[0].0 = "Conventions".to_owned()).contains("Conventions"));
}

#[test]
fn months_point_at_their_auxiliary_coordinate() {
    let schema = table();
    let list = attributes(&schema, &schema.variables[0]);
    assert!(list.contains(&("coordinates", "month_middle".to_owned())));
    assert!(list.contains(&("units_metadata", "temperature: on_scale".to_owned())));
    let coordinates = schema.coordinates();
    let bounds = coordinates.iter().find(|c| c.name == "depth_bnds").unwrap();
    assert_eq!(
        bounds.content,
        Content::Numbers(vec![0.0, 10.0, 10.0, 30.0])
    );
}
