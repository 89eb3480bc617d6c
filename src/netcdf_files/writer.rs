//! Writing netCDF files: masks, synthetic granules, files for tests.

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

use netcdf::{Endianness, FileMut, Options, VariableMut};
use serde::{Deserialize, Serialize};

use super::attribute::{Attribute, AttributeValue};
use super::block::place_in_block;
use super::library_types::{library_attribute, library_kind};
use super::samples::{Samples, ValueKind};

/// The storage formats of netCDF.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum FileFormat {
    /// netCDF-4, stored in HDF5.
    Netcdf4,
    /// Classic (CDF-1).
    Classic,
    /// 64-bit offset (CDF-2).
    Offset64,
    /// 64-bit data (CDF-5).
    Data64,
}

impl FileFormat {
    /// The name that the netCDF documents give the format.
    pub fn label(self) -> &'static str {
        match self {
            Self::Netcdf4 => "netCDF-4",
            Self::Classic => "netCDF classic",
            Self::Offset64 => "netCDF 64-bit offset",
            Self::Data64 => "netCDF 64-bit data",
        }
    }

    fn options(self) -> Options {
        match self {
            Self::Netcdf4 => Options::NETCDF4,
            Self::Classic => Options::default(),
            Self::Offset64 => Options::_64BIT_OFFSET,
            Self::Data64 => Options::_64BIT_DATA,
        }
    }
}

/// Why a netCDF file could not be written.
#[derive(Debug, thiserror::Error)]
#[error("{what}: {reason}")]
pub struct WriterError {
    what: String,
    reason: String,
}

impl WriterError {
    fn new(what: impl Into<String>, reason: impl ToString) -> Self {
        Self { what: what.into(), reason: reason.to_string() }
    }
}

/// A variable to be made.
#[derive(Debug, Clone)]
pub struct VariableDraft {
    /// Where it stands, groups before the name: `latitude`, `/truth/cloud_amount`.
    pub path: String,
    /// The type of its values.
    pub kind: ValueKind,
    /// Names of its dimensions, looked up in its group and then in the groups around it.
    pub dimensions: Vec<String>,
    /// Its attributes, in order; `_FillValue` is given by `fill`.
    pub attributes: Vec<Attribute>,
    /// The value of what is not written, one value of the variable's own type.
    pub fill: Option<Samples>,
    /// Lengths of a chunk along each dimension; the library chooses where none are given.
    pub chunks: Option<Vec<usize>>,
    /// Deflate level 1 to 9.
    pub deflate: Option<u8>,
    /// Whether the bytes of values are shuffled before they are deflated.
    pub shuffle: bool,
    /// Whether the values are stored with the most significant byte first.
    pub big_endian: bool,
}

impl VariableDraft {
    /// A variable without attributes, stored plainly.
    pub fn new(path: impl Into<String>, kind: ValueKind, dimensions: &[&str]) -> Self {
        Self {
            path: path.into(),
            kind,
            dimensions: dimensions.iter().map(|&name| name.to_owned()).collect(),
            attributes: Vec::new(),
            fill: None,
            chunks: None,
            deflate: None,
            shuffle: false,
            big_endian: false,
        }
    }

    /// Adds an attribute.
    pub fn attribute(mut self, name: &str, value: impl Into<AttributeValue>) -> Self {
        self.attributes.push(Attribute { name: name.to_owned(), value: value.into() });
        self
    }

    /// Sets the fill value, one value of the variable's own type.
    pub fn fill(mut self, value: impl Into<Samples>) -> Self {
        self.fill = Some(value.into());
        self
    }

    /// Sets the chunk lengths.
    pub fn chunks(mut self, lengths: &[usize]) -> Self {
        self.chunks = Some(lengths.to_vec());
        self
    }

    /// Shuffles and deflates the values at `level` 1 to 9.
    pub fn deflate(mut self, level: u8) -> Self {
        self.deflate = Some(level);
        self.shuffle = true;
        self
    }
}

/// A netCDF file being written.
///
/// Meant for the temporary path inside `system::write_whole`. The file is good only when
/// [`NetcdfWriter::close`] has returned without an error.
#[derive(Debug)]
pub struct NetcdfWriter {
    file: FileMut,
    path: PathBuf,
    format: FileFormat,
    defining: bool,
    groups: BTreeSet<String>,
}

impl NetcdfWriter {
    /// Makes a netCDF-4 file at `path`, replacing what is there.
    pub fn create(path: &Path) -> Result<Self, WriterError> {
        Self::create_as(path, FileFormat::Netcdf4)
    }

    /// Makes a file of the given format at `path`, replacing what is there.
    pub fn create_as(path: &Path, format: FileFormat) -> Result<Self, WriterError> {
        let file = netcdf::create_with(path, format.options()).map_err(|error| {
            WriterError::new(format!("cannot create {}", path.display()), error)
        })?;
        let groups = BTreeSet::new();
        Ok(Self { file, path: path.to_owned(), format, defining: true, groups })
    }

    /// Writes an attribute of the whole file.
    pub fn global_attribute(
        &mut self,
        name: &str,
        value: impl Into<AttributeValue>,
    ) -> Result<(), WriterError> {
        self.file
            .add_attribute(name, library_attribute(&value.into()))
            .map_err(|error| WriterError::new(format!("attribute `{name}`"), error))?;
        Ok(())
    }

    /// Writes an attribute of the group at `path`, which is made if it is not there.
    pub fn group_attribute(
        &mut self,
        path: &str,
        name: &str,
        value: impl Into<AttributeValue>,
    ) -> Result<(), WriterError> {
        let path = path.trim_matches('/');
        if path.is_empty() {
            return self.global_attribute(name, value);
        }
        self.make_group(path)?;
        let what = || format!("attribute `{name}` of group `{path}`");
        let group = self.file.group_mut(path).map_err(|error| WriterError::new(what(), error))?;
        let mut group = group.ok_or_else(|| WriterError::new(what(), "there is no such group"))?;
        group
            .add_attribute(name, library_attribute(&value.into()))
            .map_err(|error| WriterError::new(what(), error))?;
        Ok(())
    }

    /// Makes a dimension of `length` values, one or more; `path` may lead through groups.
    pub fn dimension(&mut self, path: &str, length: usize) -> Result<(), WriterError> {
        if length == 0 {
            // The library would make an unlimited dimension of it.
            return Err(WriterError::new(format!("dimension `{path}`"), "its length is zero"));
        }
        self.make_dimension(path, length)
    }

    /// Makes a dimension that grows with what is put.
    pub fn unlimited_dimension(&mut self, path: &str) -> Result<(), WriterError> {
        self.make_dimension(path, 0)
    }

    fn make_dimension(&mut self, path: &str, length: usize) -> Result<(), WriterError> {
        let path = path.trim_start_matches('/');
        self.make_parents(path)?;
        self.file
            .add_dimension(path, length)
            .map_err(|error| WriterError::new(format!("dimension `{path}`"), error))?;
        Ok(())
    }

    /// Makes a variable with its attributes; its values are put later.
    pub fn variable(&mut self, draft: &VariableDraft) -> Result<(), WriterError> {
        let path = draft.path.trim_start_matches('/').to_owned();
        let failed = |reason: String| WriterError::new(format!("variable `{path}`"), reason);
        let kind = library_kind(draft.kind).ok_or_else(|| {
            failed(format!("values of type {} are not written", draft.kind.label()))
        })?;
        self.make_parents(&path)?;
        let dimensions: Vec<&str> = draft.dimensions.iter().map(String::as_str).collect();
        let mut variable = self
            .file
            .add_variable_with_type(&path, &dimensions, &kind)
            .map_err(|error| failed(error.to_string()))?;
        define_storage(&mut variable, draft).map_err(|error| failed(error.to_string()))?;
        for Attribute { name, value } in &draft.attributes {
            variable
                .put_attribute(name, library_attribute(value))
                .map_err(|error| failed(format!("attribute `{name}`: {error}")))?;
        }
        Ok(())
    }

    /// Puts a block of values: `count` values along each dimension from `start`, row-major.
    pub fn put(
        &mut self,
        path: &str,
        start: &[usize],
        count: &[usize],
        values: &Samples,
    ) -> Result<(), WriterError> {
        let path = path.trim_start_matches('/');
        let failed = |reason: String| WriterError::new(format!("values of `{path}`"), reason);
        self.leave_define_mode()?;
        let mut variable =
            self.file.variable_mut(path).ok_or_else(|| failed("no such variable".to_owned()))?;
        if values.len() != count.iter().product::<usize>() {
            return Err(failed(format!("{} values for a block of {count:?}", values.len())));
        }
        put_samples(&mut variable, start, count, values).map_err(|error| failed(error.to_string()))
    }

    /// Puts all values of a variable with fixed dimensions, row-major.
    pub fn put_all(&mut self, path: &str, values: &Samples) -> Result<(), WriterError> {
        let lengths: Vec<usize> = match self.file.variable(path.trim_start_matches('/')) {
            Some(variable) => variable.dimensions().iter().map(netcdf::Dimension::len).collect(),
            None => {
                return Err(WriterError::new(format!("values of `{path}`"), "no such variable"));
            }
        };
        self.put(path, &vec![0; lengths.len()], &lengths, values)
    }

    /// Writes what is still in memory and closes the file.
    pub fn close(self) -> Result<(), WriterError> {
        let what = format!("cannot finish {}", self.path.display());
        self.file.close().map_err(|error| WriterError::new(what, error))
    }

    /// Classic files are either being defined or being filled.
    fn leave_define_mode(&mut self) -> Result<(), WriterError> {
        if self.defining && self.format != FileFormat::Netcdf4 {
            self.file.enddef().map_err(|error| WriterError::new("definitions", error))?;
        }
        self.defining = false;
        Ok(())
    }

    fn make_parents(&mut self, path: &str) -> Result<(), WriterError> {
        match path.rsplit_once('/') {
            Some((parents, _)) => self.make_group(parents),
            None => Ok(()),
        }
    }

    fn make_group(&mut self, path: &str) -> Result<(), WriterError> {
        let ends = path.match_indices('/').map(|(index, _)| index).chain([path.len()]);
        for end in ends {
            let group = &path[..end];
            if self.groups.insert(group.to_owned()) {
                self.file
                    .add_group(group)
                    .map_err(|error| WriterError::new(format!("group `{group}`"), error))?;
            }
        }
        Ok(())
    }
}

/// Chunks, filters, byte order and fill have to be settled before the first value is put.
fn define_storage(variable: &mut VariableMut<'_>, draft: &VariableDraft) -> netcdf::Result<()> {
    if let Some(chunks) = &draft.chunks {
        variable.set_chunking(chunks)?;
    }
    if let Some(level) = draft.deflate {
        variable.set_compression(level.into(), draft.shuffle)?;
    }
    if draft.big_endian {
        variable.set_endianness(Endianness::Big)?;
    }
    match &draft.fill {
        Some(fill) => define_fill(variable, fill),
        None => Ok(()),
    }
}

fn define_fill(variable: &mut VariableMut<'_>, fill: &Samples) -> netcdf::Result<()> {
    macro_rules! fill_by_kind {
        ($($kind:ident),*) => {
            match fill {
                $(Samples::$kind(values) => match values.first() {
                    Some(&value) => variable.set_fill_value(value),
                    None => Err("the fill value is empty".into()),
                },)*
                Samples::Text(_) => Err("strings have no fill value".into()),
            }
        };
    }
    fill_by_kind!(I8, U8, I16, U16, I32, U32, I64, U64, F32, F64)
}

fn put_samples(
    variable: &mut VariableMut<'_>,
    start: &[usize],
    count: &[usize],
    samples: &Samples,
) -> netcdf::Result<()> {
    macro_rules! put_by_kind {
        ($($kind:ident),*) => {
            match samples {
                $(Samples::$kind(values) => variable.put_values(values, (start, count)),)*
                Samples::Text(texts) => put_texts(variable, start, count, texts),
            }
        };
    }
    put_by_kind!(I8, U8, I16, U16, I32, U32, I64, U64, F32, F64)
}

fn put_texts(
    variable: &mut VariableMut<'_>,
    start: &[usize],
    count: &[usize],
    texts: &[String],
) -> netcdf::Result<()> {
    let ones = vec![1; count.len()];
    for (number, text) in texts.iter().enumerate() {
        let place = place_in_block(number, start, count);
        variable.put_string(text, (place.as_slice(), ones.as_slice()))?;
    }
    Ok(())
}

#[cfg(test)]
mod tests;
