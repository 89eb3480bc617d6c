//! What a file holds, without its values: the reader's answer to the first question.

use serde::{Deserialize, Serialize};

use super::attribute::{Attribute, AttributeValue};
use super::samples::ValueKind;
use super::writer::FileFormat;

/// The version of the index's own form; both ends are the same program, so it must agree.
pub const INDEX_VERSION: u32 = 1;

/// More dimensions than the library allows in a variable are a sign of damage.
const MOST_DIMENSIONS: usize = 1024;

/// Everything of a file but its values.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct FileIndex {
    /// The version of this form.
    pub version: u32,
    /// How the file is stored.
    pub format: FileFormat,
    /// The groups; the first one is the file itself.
    pub groups: Vec<Group>,
    /// The dimensions of all groups.
    pub dimensions: Vec<Dimension>,
    /// The variables of all groups, in the file's order.
    pub variables: Vec<Variable>,
    /// What could not be read of the index, in words.
    pub unreadable: Vec<String>,
}

/// A group of variables.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Group {
    /// Names from the root, joined by slashes; empty for the file itself.
    pub path: String,
    /// The group around it; none for the file itself.
    pub parent: Option<usize>,
    /// The group's attributes.
    pub attributes: Vec<Attribute>,
}

/// A dimension.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Dimension {
    /// Its name.
    pub name: String,
    /// The group that defines it.
    pub group: usize,
    /// How many values it counts now.
    pub length: usize,
    /// Whether it may grow.
    pub unlimited: bool,
}

/// A variable.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Variable {
    /// Group names and its own, joined by slashes, without a slash in front.
    pub path: String,
    /// Its own name.
    pub name: String,
    /// Its group.
    pub group: usize,
    /// Its dimensions, as places in the index's list, slowest first.
    pub dimensions: Vec<usize>,
    /// The type of its values.
    pub kind: ValueKind,
    /// Its attributes.
    pub attributes: Vec<Attribute>,
    /// How its values are stored.
    pub storage: Storage,
}

/// How the values of a variable are stored.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
pub struct Storage {
    /// Lengths of a chunk; none where the values are stored in one piece.
    pub chunks: Option<Vec<usize>>,
    /// The filters that the values pass when they are written, in words.
    pub filters: Vec<String>,
    /// A filter among them that this program does not have.
    pub missing_filter: Option<String>,
    /// Whether the most significant byte comes first.
    pub big_endian: bool,
}

impl FileIndex {
    /// The variable at `path`, with or without a slash in front.
    pub fn variable(&self, path: &str) -> Option<&Variable> {
        let path = path.trim_start_matches('/');
        self.variables.iter().find(|variable| variable.path == path)
    }

    /// The lengths of a variable's dimensions, slowest first.
    pub fn lengths(&self, variable: &Variable) -> Vec<usize> {
        variable.dimensions.iter().map(|&dimension| self.dimensions[dimension].length).collect()
    }

    /// The names of a variable's dimensions, slowest first.
    pub fn dimension_names(&self, variable: &Variable) -> Vec<&str> {
        let name = |&dimension: &usize| self.dimensions[dimension].name.as_str();
        variable.dimensions.iter().map(name).collect()
    }

    /// An attribute of the whole file.
    pub fn global_attribute(&self, name: &str) -> Option<&AttributeValue> {
        find(&self.groups.first()?.attributes, name)
    }

    /// Says what is wrong with an index that came over a pipe; nothing where all its references hold.
    pub fn fault(&self) -> Option<String> {
        if self.version != INDEX_VERSION {
            return Some(format!("index version {} instead of {INDEX_VERSION}", self.version));
        }
        let Some(root) = self.groups.first() else { return Some("no root group".into()) };
        if root.parent.is_some() {
            return Some("the root group has a parent".into());
        }
        let groups = self.groups.len();
        // A parent comes before its children, so that walking upwards always ends.
        let lost_group = |(place, group): (usize, &Group)| {
            place > 0 && group.parent.is_none_or(|parent| parent >= place)
        };
        if self.groups.iter().enumerate().any(lost_group) {
            return Some("a group without a parent".into());
        }
        if self.dimensions.iter().any(|dimension| dimension.group >= groups) {
            return Some("a dimension without a group".into());
        }
        self.variables.iter().find_map(|variable| self.variable_fault(variable))
    }

    fn variable_fault(&self, variable: &Variable) -> Option<String> {
        let named = |fault: &str| Some(format!("variable `{}`: {fault}", variable.path));
        if variable.group >= self.groups.len() {
            return named("no such group");
        }
        if variable.dimensions.len() > MOST_DIMENSIONS {
            return named("too many dimensions");
        }
        if variable.dimensions.iter().any(|&dimension| dimension >= self.dimensions.len()) {
            return named("no such dimension");
        }
        match &variable.storage.chunks {
            Some(chunks) if chunks.len() != variable.dimensions.len() || chunks.contains(&0) => {
                named("chunks do not fit its dimensions")
            }
            _ => None,
        }
    }
}

impl Group {
    /// The group's attribute of that name.
    pub fn attribute(&self, name: &str) -> Option<&AttributeValue> {
        find(&self.attributes, name)
    }
}

impl Variable {
    /// The variable's attribute of that name.
    pub fn attribute(&self, name: &str) -> Option<&AttributeValue> {
        find(&self.attributes, name)
    }

    /// The variable's attribute of that name as trimmed text; none where it is missing or a number.
    pub fn text(&self, name: &str) -> Option<String> {
        self.attribute(name)?.text().map(|text| text.trim().to_owned())
    }
}

fn find<'a>(attributes: &'a [Attribute], name: &str) -> Option<&'a AttributeValue> {
    attributes.iter().find(|attribute| attribute.name == name).map(|attribute| &attribute.value)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn index() -> FileIndex {
        let root = Group { path: String::new(), parent: None, attributes: Vec::new() };
        let line = Dimension { name: "line".into(), group: 0, length: 3, unlimited: false };
        let variable = Variable {
            path: "v".into(),
            name: "v".into(),
            group: 0,
            dimensions: vec![0],
            kind: ValueKind::F32,
            attributes: Vec::new(),
            storage: Storage::default(),
        };
        FileIndex {
            version: INDEX_VERSION,
            format: FileFormat::Netcdf4,
            groups: vec![root],
            dimensions: vec![line],
            variables: vec![variable],
            unreadable: Vec::new(),
        }
    }

    #[test]
    fn a_sound_index_has_no_fault() {
        assert_eq!(index().fault(), None);
        assert_eq!(index().lengths(index().variable("/v").unwrap()), [3]);
    }

    #[test]
    fn every_dangling_reference_is_a_fault() {
        let spoilers: [fn(&mut FileIndex); 7] = [
            |index| index.version = 0,
            |index| index.groups.clear(),
            |index| index.groups[0].parent = Some(0),
            |index| index.dimensions[0].group = 1,
            |index| index.variables[0].dimensions[0] = 1,
            |index| index.variables[0].group = 1,
            |index| index.variables[0].storage.chunks = Some(vec![0]),
        ];
        for (number, spoil) in spoilers.iter().enumerate() {
            let mut index = index();
            spoil(&mut index);
            assert!(index.fault().is_some(), "spoiler {number}");
        }
    }

    #[test]
    fn a_group_that_is_its_own_ancestor_is_a_fault() {
        let mut index = index();
        index.groups.push(Group { path: "g".into(), parent: Some(1), attributes: Vec::new() });
        assert!(index.fault().is_some());
    }
}
