//! A file in the hands of the netCDF library. Runs in the reader process and in tests only.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::{Path, PathBuf};

use netcdf::Extents;

use super::attribute::Attribute;
use super::block::place_in_block;
use super::chunks::{self, ChunkTable};
use super::index::{Dimension, FileIndex, Group, INDEX_VERSION, Variable};
use super::library_types::{attribute_of, kind_of};
use super::samples::ValueKind;
use super::storage::{StorageView, storage_of};
use super::writer::FileFormat;
use crate::system::FileStamp;

/// Groups within groups deeper than this are a sign of a loop.
const DEEPEST_GROUP: usize = 32;
/// More groups or variables than this are a sign of damage.
const MOST_ENTRIES: usize = 50_000;
/// Attributes longer than this are no metadata, and are left out of the index.
const LONGEST_ATTRIBUTE: usize = 1 << 20;
/// All attributes together, in bytes of their values; those that come later are left out.
const ALL_ATTRIBUTES: usize = 16 << 20;
/// More than this that cannot be read is counted, not named.
const MOST_UNREADABLE: usize = 100;

/// What the library said when it refused.
pub type Refusal = String;

/// An open file.
pub struct LibraryFile {
    path: PathBuf,
    file: netcdf::File,
}

impl LibraryFile {
    /// Opens the file for reading.
    pub fn open(path: &Path) -> Result<Self, Refusal> {
        let file = netcdf::open(path).map_err(|error| error.to_string())?;
        Ok(Self { path: path.to_owned(), file })
    }

    /// Walks through the file: everything but the values.
    pub fn index(&self) -> Result<FileIndex, Refusal> {
        let mut walk = Walk {
            index: FileIndex {
                version: INDEX_VERSION,
                format: FileFormat::Netcdf4,
                groups: Vec::new(),
                dimensions: Vec::new(),
                variables: Vec::new(),
                unreadable: Vec::new(),
            },
            storage: StorageView::open(&self.path),
            attribute_room: ALL_ATTRIBUTES,
            unnamed: 0,
        };
        match self.file.root() {
            Some(root) => walk.group(&root, String::new(), None, 0)?,
            None => {
                walk.index.format = classic_format(&self.path);
                let group = walk.enter(String::new(), None, self.file.attributes())?;
                walk.dimensions(group, self.file.dimensions());
                walk.variables(group, self.file.variables())?;
            }
        }
        Ok(walk.finish())
    }

    /// Reads a block of values of a fixed size into `bytes`, in the machine's order; tells their type.
    pub fn read_values(
        &self,
        path: &str,
        start: &[usize],
        count: &[usize],
        bytes: &mut Vec<u8>,
    ) -> Result<ValueKind, Refusal> {
        let variable = self.variable(path)?;
        let kind = kind_of(&variable.vartype());
        let size = kind.size().ok_or("its values have no fixed size")?;
        let values = count.iter().try_fold(size, |product, &count| product.checked_mul(count));
        // Zeros where the library leaves unwritten places alone, not what another answer left there.
        bytes.clear();
        bytes.resize(values.ok_or("the block is too large")?, 0);
        if !bytes.is_empty() {
            let block = extents(start, count)?;
            variable.get_raw_values_into(bytes, block).map_err(|error| error.to_string())?;
        }
        Ok(kind)
    }

    /// Reads a block of strings, bad UTF-8 replaced; nothing if together they are longer than `most`
    /// bytes.
    pub fn read_texts(
        &self,
        path: &str,
        start: &[usize],
        count: &[usize],
        most: usize,
    ) -> Result<Option<Vec<String>>, Refusal> {
        let variable = self.variable(path)?;
        let ones = vec![1; count.len()];
        let (mut texts, mut length) = (Vec::new(), 0);
        for number in 0..count.iter().product() {
            let place = extents(&place_in_block(number, start, count), &ones)?;
            let text = variable.get_string(place).map_err(|error| error.to_string())?;
            length += text.len();
            if length > most {
                return Ok(None);
            }
            texts.push(text);
        }
        Ok(Some(texts))
    }

    /// The type of a variable's values.
    pub fn kind(&self, path: &str) -> Result<ValueKind, Refusal> {
        Ok(kind_of(&self.variable(path)?.vartype()))
    }

    /// The filter that keeps a variable from being read, if there is one.
    pub fn missing_filter(&self, path: &str) -> Option<String> {
        StorageView::open(&self.path)?.filters(path).1
    }

    /// Where the chunks of a variable lie.
    pub fn chunks(&self, path: &str) -> Result<ChunkTable, Refusal> {
        let kind = self.kind(path)?;
        let view = StorageView::open(&self.path).ok_or("it is not stored in chunks")?;
        let stamp = FileStamp::of(&self.path).map_err(|error| error.to_string())?;
        chunks::survey(view.file(), path, kind, stamp)
    }

    fn variable(&self, path: &str) -> Result<netcdf::Variable<'_>, Refusal> {
        self.file.variable(path).ok_or_else(|| "there is no such variable".into())
    }
}

fn extents(start: &[usize], count: &[usize]) -> Result<Extents, Refusal> {
    Extents::try_from((start, count)).map_err(|error| error.to_string())
}

/// The library hides which classic format it is; the file's fourth byte tells.
fn classic_format(path: &Path) -> FileFormat {
    let mut magic = [0; 4];
    let read = std::fs::File::open(path)
        .and_then(|mut file| std::io::Read::read_exact(&mut file, &mut magic));
    match (read, magic[3]) {
        (Ok(()), 2) => FileFormat::Offset64,
        (Ok(()), 5) => FileFormat::Data64,
        _ => FileFormat::Classic,
    }
}

/// The index being filled.
struct Walk {
    index: FileIndex,
    storage: Option<StorageView>,
    attribute_room: usize,
    unnamed: usize,
}

impl Walk {
    fn finish(mut self) -> FileIndex {
        if self.unnamed > 0 {
            self.index.unreadable.push(format!("{} more", self.unnamed));
        }
        self.index
    }

    fn leave_out(&mut self, what: String) {
        match self.index.unreadable.len() < MOST_UNREADABLE {
            true => self.index.unreadable.push(what),
            false => self.unnamed += 1,
        }
    }

    fn group(
        &mut self,
        group: &netcdf::Group<'_>,
        path: String,
        parent: Option<usize>,
        depth: usize,
    ) -> Result<(), Refusal> {
        if depth > DEEPEST_GROUP {
            return Err(format!("groups within groups, deeper than {DEEPEST_GROUP}"));
        }
        let place = self.enter(path.clone(), parent, group.attributes())?;
        self.dimensions(place, group.dimensions());
        self.variables(place, group.variables())?;
        for inner in group.groups() {
            self.group(&inner, joined(&path, &inner.name()), Some(place), depth + 1)?;
        }
        Ok(())
    }

    fn enter<'a>(
        &mut self,
        path: String,
        parent: Option<usize>,
        attributes: impl Iterator<Item = netcdf::Attribute<'a>>,
    ) -> Result<usize, Refusal> {
        if self.index.groups.len() >= MOST_ENTRIES {
            return Err(format!("more than {MOST_ENTRIES} groups"));
        }
        let attributes = self.attributes(&path, attributes);
        self.index.groups.push(Group { path, parent, attributes });
        Ok(self.index.groups.len() - 1)
    }

    fn dimensions<'a>(
        &mut self,
        group: usize,
        dimensions: impl Iterator<Item = netcdf::Dimension<'a>>,
    ) {
        self.index.dimensions.extend(dimensions.map(|dimension| Dimension {
            name: dimension.name(),
            group,
            length: dimension.len(),
            unlimited: dimension.is_unlimited(),
        }));
    }

    fn variables<'a>(
        &mut self,
        group: usize,
        variables: impl Iterator<Item = netcdf::Variable<'a>>,
    ) -> Result<(), Refusal> {
        for variable in variables {
            if self.index.variables.len() >= MOST_ENTRIES {
                return Err(format!("more than {MOST_ENTRIES} variables"));
            }
            let name = variable.name();
            let path = joined(&self.index.groups[group].path, &name);
            match calmly(|| self.variable(group, &path, name, &variable)) {
                Some(Some(variable)) => self.index.variables.push(variable),
                _ => self.leave_out(format!("variable `{path}`")),
            }
        }
        Ok(())
    }

    fn variable(
        &mut self,
        group: usize,
        path: &str,
        name: String,
        variable: &netcdf::Variable<'_>,
    ) -> Option<Variable> {
        let dimensions: Option<Vec<usize>> = variable
            .dimensions()
            .iter()
            .map(|dimension| self.dimension(group, dimension))
            .collect();
        Some(Variable {
            path: path.to_owned(),
            name,
            group,
            dimensions: dimensions?,
            kind: calmly(|| kind_of(&variable.vartype())).unwrap_or(ValueKind::Other),
            attributes: self.attributes(path, variable.attributes()),
            storage: storage_of(variable, path, self.storage.as_ref()),
        })
    }

    /// A variable's dimensions are known to it by name: the nearest of that name and length, outwards.
    fn dimension(&self, group: usize, dimension: &netcdf::Dimension<'_>) -> Option<usize> {
        let (name, length) = (dimension.name(), dimension.len());
        let mut around = Some(group);
        while let Some(group) = around {
            let found = self.index.dimensions.iter().position(|candidate| {
                candidate.group == group && candidate.name == name && candidate.length == length
            });
            if found.is_some() {
                return found;
            }
            around = self.index.groups[group].parent;
        }
        None
    }

    /// Attributes that the library stumbles over are left out and named.
    fn attributes<'a>(
        &mut self,
        owner: &str,
        attributes: impl Iterator<Item = netcdf::Attribute<'a>>,
    ) -> Vec<Attribute> {
        let mut read = Vec::new();
        for (number, attribute) in attributes.enumerate() {
            let name = calmly(|| attribute.name().to_owned());
            let value = calmly(|| attribute.value().ok()).flatten().map(attribute_of);
            match (name, value) {
                (Some(name), Some(value))
                    if length(&value) <= LONGEST_ATTRIBUTE.min(self.attribute_room) =>
                {
                    self.attribute_room -= length(&value);
                    read.push(Attribute { name, value });
                }
                (name, _) => {
                    let name = name.unwrap_or_else(|| format!("number {}", number + 1));
                    self.leave_out(format!("attribute {name} of `{owner}`"));
                }
            }
        }
        read
    }
}

fn length(value: &super::attribute::AttributeValue) -> usize {
    use super::attribute::AttributeValue;
    match value {
        AttributeValue::Text(text) => text.len(),
        AttributeValue::Texts(texts) => texts.iter().map(String::len).sum(),
        AttributeValue::Numbers(samples) => samples.len() * 8,
    }
}

fn joined(group: &str, name: &str) -> String {
    if group.is_empty() { name.to_owned() } else { format!("{group}/{name}") }
}

/// The library's iterators and names panic on damaged files; here that is "nothing found".
fn calmly<Value>(look: impl FnOnce() -> Value) -> Option<Value> {
    catch_unwind(AssertUnwindSafe(look)).ok()
}
