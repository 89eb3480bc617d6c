//! What a rulebook takes from the catalogue of indices without writing it down.

use std::ops::Range;

use super::rulebook::{Definition, Surface, Test};
use crate::layers::{Expression, index, index_expression};

/// The indices that the expressions name and that no definition stands before, and those that they
/// need in turn, as definitions.
pub fn catalogue_used(
    definitions: &[(Range<usize>, Definition)],
    surfaces: &[(Range<usize>, Surface)],
    tests: &[(Range<usize>, Test)],
) -> Vec<Definition> {
    let own = |name: &str| definitions.iter().any(|(_, definition)| definition.name == name);
    let mut open: Vec<&Expression> =
        definitions.iter().map(|(_, definition)| &definition.expression).collect();
    open.extend(surfaces.iter().flat_map(|(_, surface)| &surface.places));
    open.extend(tests.iter().flat_map(|(_, test)| test.expressions()));
    let mut used: Vec<Definition> = Vec::new();
    while let Some(expression) = open.pop() {
        for name in expression.names() {
            if own(name) || used.iter().any(|definition| definition.name == name) {
                continue;
            }
            if let Some((definition, expression)) = taken(name) {
                used.push(definition);
                open.push(expression);
            }
        }
    }
    used.sort_by(|one, other| one.name.cmp(&other.name));
    used
}

fn taken(name: &str) -> Option<(Definition, &'static Expression)> {
    let (index, expression) = (index(name)?, index_expression(name)?);
    let definition = Definition {
        name: name.to_owned(),
        expression: expression.clone(),
        unit: index.unit.to_owned(),
        usual: index.usual,
        shows: index.shows.to_owned(),
        fails: index.fails.to_owned(),
        source: index.source.to_owned(),
    };
    Some((definition, expression))
}
