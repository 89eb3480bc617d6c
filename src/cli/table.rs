//! Footprints and their layers as CSV or JSON lines.

use std::io::{self, Write};

use rayon::prelude::*;
use serde::Serialize;
use serde::ser::{SerializeMap, Serializer};

use crate::granule::{FootprintGrid, Geolocation, Granule};
use crate::layers::Layer;

/// Rows that one thread makes into text at a time.
const BLOCK: usize = 256;

/// Blocks that are held before they are written.
const BLOCKS_AT_ONCE: usize = 64;

/// How a table is written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Form {
    /// One head line, then one line per footprint; missing is empty.
    Csv,
    /// One JSON object per footprint; missing is null.
    JsonLines,
}

/// The columns before the layers, by their names; none where there is no such column.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Heading {
    file: Option<String>,
    dimensions: Vec<String>,
    latitude: Option<String>,
    longitude: Option<String>,
}

impl Heading {
    /// What a granule has; `file` where several files share the table.
    pub fn of(granule: &Granule, file: bool) -> Self {
        let (place, grid) = (granule.geolocation(), granule.footprints());
        let column = |there: bool, name: &str| there.then(|| grid.column(name));
        Self {
            file: column(file, "file"),
            latitude: column(place.latitude.is_some(), "lat"),
            longitude: column(place.longitude.is_some(), "lon"),
            dimensions: grid.names().to_vec(),
        }
    }

    /// Why a granule's rows can't stand under this heading.
    pub fn refuses(&self, granule: &Granule) -> Option<String> {
        let dimensions = granule.footprints().names();
        (dimensions != self.dimensions).then(|| {
            format!(
                "its footprint dimensions ({}) are not those of the files before it ({}), so its \
                 rows don't fit into the same table; tabulate it on its own",
                dimensions.join(", "),
                self.dimensions.join(", ")
            )
        })
    }

    /// Columns of a granule that have no place under this heading.
    pub fn lacks(&self, granule: &Granule) -> Vec<&'static str> {
        let place = granule.geolocation();
        let mut lacking = Vec::new();
        lacking.extend((place.latitude.is_some() && self.latitude.is_none()).then_some("lat"));
        lacking.extend((place.longitude.is_some() && self.longitude.is_none()).then_some("lon"));
        lacking
    }

    /// Writes the head line.
    pub fn write(&self, layers: &[String], out: &mut dyn Write) -> io::Result<()> {
        let mut names: Vec<&str> = Vec::new();
        names.extend(self.file.as_deref());
        names.extend(self.dimensions.iter().map(String::as_str));
        names.extend(self.latitude.as_deref());
        names.extend(self.longitude.as_deref());
        names.extend(layers.iter().map(String::as_str));
        csv::Writer::from_writer(out).write_record(names).map_err(stream_error)
    }
}

/// Writes the rows of one granule, footprints in row-major order.
pub fn write_rows(
    form: Form,
    heading: &Heading,
    file: &str,
    granule: &Granule,
    layers: &[Layer],
    out: &mut dyn Write,
) -> io::Result<()> {
    let (grid, place) = (granule.footprints(), granule.geolocation());
    let row = |footprint| Row { heading, file, grid, place, layers, footprint };
    let lines = |start: usize| {
        let rows = (start..(start + BLOCK).min(grid.count())).map(row);
        match form {
            Form::Csv => csv_lines(rows),
            Form::JsonLines => json_lines(rows),
        }
    };
    let starts: Vec<usize> = (0..grid.count()).step_by(BLOCK).collect();
    for some in starts.chunks(BLOCKS_AT_ONCE) {
        let blocks: Vec<io::Result<Vec<u8>>> = some.par_iter().map(|start| lines(*start)).collect();
        for block in blocks {
            out.write_all(&block?)?;
        }
    }
    Ok(())
}

fn csv_lines<'t>(rows: impl Iterator<Item = Row<'t>>) -> io::Result<Vec<u8>> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    let mut buffer = Vec::new();
    for row in rows {
        row.write_cells(&mut writer, &mut buffer).map_err(stream_error)?;
    }
    writer.into_inner().map_err(|error| error.into_error())
}

fn json_lines<'t>(rows: impl Iterator<Item = Row<'t>>) -> io::Result<Vec<u8>> {
    let mut lines = Vec::new();
    for row in rows {
        serde_json::to_writer(&mut lines, &row)?;
        lines.push(b'\n');
    }
    Ok(lines)
}

struct Row<'t> {
    heading: &'t Heading,
    file: &'t str,
    grid: &'t FootprintGrid,
    place: &'t Geolocation,
    layers: &'t [Layer],
    footprint: usize,
}

impl Row<'_> {
    fn write_cells(
        &self,
        writer: &mut csv::Writer<Vec<u8>>,
        buffer: &mut Vec<u8>,
    ) -> Result<(), csv::Error> {
        if self.heading.file.is_some() {
            writer.write_field(self.file)?;
        }
        for index in self.grid.position(self.footprint) {
            writer.write_field(index.to_string())?;
        }
        let heading = self.heading;
        let latitude = heading.latitude.iter().map(|_| self.value(&self.place.latitude));
        let longitude = heading.longitude.iter().map(|_| self.value(&self.place.longitude));
        let layers = self.layers.iter().map(|layer| layer.values[self.footprint]);
        for value in latitude.chain(longitude).chain(layers) {
            buffer.clear();
            write_cell(value, buffer);
            writer.write_field(&buffer)?;
        }
        writer.write_record(None::<&[u8]>)
    }

    fn value(&self, field: &Option<Vec<f64>>) -> f64 {
        field.as_ref().map_or(f64::NAN, |values| values[self.footprint])
    }
}

impl Serialize for Row<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut row = serializer.serialize_map(None)?;
        // Each line names what its own granule has.
        let dimensions = self.grid.names();
        if self.heading.file.is_some() {
            row.serialize_entry(&self.grid.column("file"), self.file)?;
        }
        for (name, index) in dimensions.iter().zip(self.grid.position(self.footprint)) {
            row.serialize_entry(name, &index)?;
        }
        for (name, field) in [("lat", &self.place.latitude), ("lon", &self.place.longitude)] {
            if field.is_some() {
                row.serialize_entry(&self.grid.column(name), &present(self.value(field)))?;
            }
        }
        for (at, layer) in self.layers.iter().enumerate() {
            // A key must not come twice: `lat` may be asked for and is there already.
            let there = |name: &str| name == layer.expression;
            let known = dimensions.iter().any(|name| there(name))
                || (there(&self.grid.column("lat")) && self.place.latitude.is_some())
                || (there(&self.grid.column("lon")) && self.place.longitude.is_some())
                || self.layers[..at].iter().any(|before| there(&before.expression));
            if !known {
                row.serialize_entry(&layer.expression, &present(layer.values[self.footprint]))?;
            }
        }
        row.end()
    }
}

/// The error of the stream beneath: a reader that went away must be told from other failures.
pub fn stream_error(error: csv::Error) -> io::Error {
    match error.into_kind() {
        csv::ErrorKind::Io(error) => error,
        other => io::Error::other(format!("{other:?}")),
    }
}

/// A number for a cell: the shortest digits that read back as the same number; empty where missing.
pub fn cell(value: f64) -> String {
    let mut cell = Vec::new();
    write_cell(value, &mut cell);
    String::from_utf8_lossy(&cell).into_owned()
}

/// The same, behind what is in `out`.
fn write_cell(value: f64, out: &mut Vec<u8>) {
    // Writing to memory does not fail.
    let _ = if !value.is_finite() {
        Ok(())
    } else if value == 0.0 {
        // Never "-0".
        out.write_all(b"0")
    } else if (1e-3..1e15).contains(&value.abs()) {
        write_common(value, out)
    } else if (1e-5..1e17).contains(&value.abs()) {
        write!(out, "{value}")
    } else {
        write!(out, "{value:e}")
    };
}

/// Nearly all numbers of a table: as few digits as for the others, found faster. Where two numbers of so
/// many digits are as near, it may be the other one.
fn write_common(value: f64, out: &mut Vec<u8>) -> io::Result<()> {
    serde_json::to_writer(&mut *out, &value)?;
    if out.ends_with(b".0") {
        out.truncate(out.len() - 2);
    }
    Ok(())
}

/// A number for JSON, which has none for missing.
pub fn present(value: f64) -> Option<f64> {
    value.is_finite().then_some(value + 0.0)
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    proptest! {
        #[test]
        fn common_numbers_read_back_as_the_same_and_are_as_short_as_others(value in prop_oneof![
            proptest::num::f64::NORMAL,
            150.0..350.0_f64,
            -180.0..180.0_f64,
            (-1_000_000..1_000_000_i64).prop_map(|whole| whole as f64),
            any::<f32>().prop_map(f64::from),
        ]) {
            prop_assume!((1e-3..1e15).contains(&value.abs()));
            let cell = cell(value);
            prop_assert_eq!(cell.parse::<f64>().ok(), Some(value));
            prop_assert_eq!(cell.len(), value.to_string().len());
        }
    }

    #[test]
    fn a_dimension_keeps_its_name_and_a_column_gives_way() {
        let names = vec!["lat".to_owned(), "lon".to_owned()];
        let grid = FootprintGrid::new(names, vec![2, 3]);
        assert_eq!(grid.column("lat"), "lat_of_footprint");
        assert_eq!(grid.column("file"), "file");
    }

    #[test]
    fn cells_read_back_as_the_same_number() {
        for value in [287.123_456_789_012_3, -0.1, 1e-9, 1.5e300, 1.7e9 + 0.123, 5e-324] {
            assert_eq!(cell(value).parse::<f64>().unwrap(), value);
            assert!(cell(value).len() < 25, "{}", cell(value));
        }
        assert_eq!(cell(-0.0), "0");
        assert_eq!(cell(f64::NAN), "");
        assert_eq!(cell(f64::INFINITY), "", "as in JSON");
        assert_eq!(serde_json::to_string(&present(-0.0)).unwrap(), "0.0");
        assert_eq!(serde_json::to_string(&present(f64::NAN)).unwrap(), "null");
    }
}
