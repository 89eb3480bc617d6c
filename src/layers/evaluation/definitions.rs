//! The order in which definitions are worked out.

use super::error::LayerError;
use crate::layers::catalogue::index_expression;
use crate::layers::names::Names;
use crate::layers::syntax::{Expression, Kind, Span};

/// The definitions that `expressions` need, each after those that it needs itself.
///
/// The walk keeps its own stack: definitions may come from a file of unknown origin, and a long
/// chain of them must not exhaust the program's.
pub fn in_order<'n>(
    expressions: &'n [&'n Expression],
    names: &'n dyn Names,
) -> Result<Vec<(String, &'n Expression)>, LayerError> {
    let mut done: Vec<(String, &Expression)> = Vec::new();
    for expression in expressions {
        let mut path = vec![Visit::of("", expression)];
        while let Some(visit) = path.last_mut() {
            let Some((name, span)) = visit.uses.pop() else {
                let visited = path.pop();
                done.extend(visited.filter(|visit| !visit.name.is_empty()).map(Visit::done));
                continue;
            };
            let meant = names.definition(&name).or_else(|| index_expression(&name));
            let Some(definition) = meant else { continue };
            if done.iter().any(|(known, _)| *known == name) {
                continue;
            }
            if path.iter().any(|visit| visit.name == name) {
                let text = path.last().map_or("", |visit| visit.expression.text());
                return Err(LayerError::circular(text, &span, &name));
            }
            path.push(Visit::of(&name, definition));
        }
    }
    Ok(done)
}

/// A definition on the way, with the names in it that have not been looked at yet.
struct Visit<'n> {
    name: String,
    expression: &'n Expression,
    uses: Vec<(String, Span)>,
}

impl<'n> Visit<'n> {
    fn of(name: &str, expression: &'n Expression) -> Self {
        let mut uses = Vec::new();
        expression.tree().visit(&mut |node| {
            if let Kind::Name(name) = &node.kind {
                uses.push((name.clone(), node.span.clone()));
            }
        });
        uses.reverse();
        Self { name: name.to_owned(), expression, uses }
    }

    fn done(self) -> (String, &'n Expression) {
        (self.name, self.expression)
    }
}
