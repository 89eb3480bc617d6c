//! What has to be gathered and worked out for a set of expressions, each thing once.

use std::collections::HashMap;

use super::definitions;
use super::error::LayerError;
use super::leaves::Leaf;
use super::program::{Operation, Program, Source};
use crate::granule::Channel;
use crate::layers::names::{NameError, Names};
use crate::layers::syntax::{
    Around, Expression, Function, Infix, Kind, Node, Prefix, Span, Statistic,
};
use crate::layers::unit::LayerUnit;
use crate::system::clean_text;

/// Steps over columns; a neighbourhood needs the whole column of what stands inside it.
#[derive(Debug)]
pub enum Step {
    /// Footprint by footprint.
    Pointwise(Program),
    /// Over the footprints around each.
    Neighbourhood(Statistic, Around, Source),
    /// A result of a retrieval: which of them, for which channel, from which columns, which result.
    Retrieval {
        retrieval: usize,
        channel: Option<Channel>,
        inputs: Vec<Option<Source>>,
        output: usize,
    },
}

/// Where an expression's numbers come out.
#[derive(Debug, Clone)]
pub struct Output {
    /// The column.
    pub source: Source,
    /// Its unit.
    pub unit: LayerUnit,
    /// The leaves that it uses, in the order of the text.
    pub leaves: Vec<usize>,
    /// Whether it looks at neighbours.
    pub neighbours: bool,
    /// The steps of retrievals that it uses.
    pub retrieved: Vec<usize>,
    /// What a reader should know about the expression itself.
    pub remarks: Vec<String>,
}

/// The whole plan.
pub struct Plan {
    /// What comes from the granule.
    pub leaves: Vec<Leaf>,
    /// What is worked out, in order.
    pub steps: Vec<Step>,
}

impl Plan {
    /// Plans one expression.
    pub fn of_one(
        expression: &Expression,
        names: &dyn Names,
    ) -> (Self, Result<Output, LayerError>) {
        let mut planner = Planner::with(names);
        let output = planner.output(expression);
        (planner.plan(), output)
    }

    /// Plans several expressions. One that can't be evaluated takes nothing from the others.
    pub fn of(
        expressions: &[&Expression],
        names: &dyn Names,
    ) -> (Self, Vec<Result<Output, LayerError>>) {
        let mut planner = Planner::with(names);
        let outputs = expressions.iter().map(|expression| planner.output(expression)).collect();
        (planner.plan(), outputs)
    }
}

/// A plan in the making.
pub struct Planner<'n> {
    pub names: &'n dyn Names,
    pub leaves: Vec<Leaf>,
    pub steps: Vec<Step>,
    pub definitions: HashMap<String, Result<Output, LayerError>>,
}

/// One expression on its way.
pub struct Draft<'t> {
    pub text: &'t str,
    program: Program,
    leaves: Vec<usize>,
    pub neighbours: bool,
    pub retrieved: Vec<usize>,
    pub remarks: Vec<String>,
}

impl<'n> Planner<'n> {
    fn with(names: &'n dyn Names) -> Self {
        Self { names, leaves: Vec::new(), steps: Vec::new(), definitions: HashMap::new() }
    }

    fn plan(self) -> Plan {
        Plan { leaves: self.leaves, steps: self.steps }
    }

    pub fn output(&mut self, expression: &Expression) -> Result<Output, LayerError> {
        for (name, definition) in definitions::in_order(&[expression], self.names)? {
            if !self.definitions.contains_key(&name) {
                let output = self.expression(definition);
                self.definitions.insert(name, output);
            }
        }
        self.expression(expression)
    }

    /// What a failed expression had already asked for is taken back.
    fn expression(&mut self, expression: &Expression) -> Result<Output, LayerError> {
        let before = (self.leaves.len(), self.steps.len(), self.definitions.len());
        let mut draft = Draft::of(expression.text());
        match self.node(expression.tree(), &mut draft) {
            Ok(unit) => {
                let source = self.column(std::mem::take(&mut draft.program));
                let Draft { leaves, neighbours, retrieved, remarks, .. } = draft;
                Ok(Output { source, unit, leaves, neighbours, retrieved, remarks })
            }
            Err(error) => {
                // A definition that a retrieval needed stays, and so must what it is made from.
                if self.definitions.len() == before.2 {
                    self.leaves.truncate(before.0);
                    self.steps.truncate(before.1);
                }
                Err(error)
            }
        }
    }

    fn node(&mut self, node: &Node, draft: &mut Draft<'_>) -> Result<LayerUnit, LayerError> {
        match &node.kind {
            Kind::Number(value) => {
                draft.add(Operation::Constant(*value));
                Ok(LayerUnit::One)
            }
            Kind::Name(name) => self.name(name, &node.span, draft),
            Kind::Variable(name) => {
                let key = node.to_string();
                self.values(key, |names| names.variable(name), &node.span, draft)
            }
            Kind::Judged(judgement, of) => {
                let ask = |names: &dyn Names| names.judged(*judgement, of.as_deref());
                self.values(node.to_string(), ask, &node.span, draft)
            }
            Kind::Spectral(quantity, place) => self.spectral(*quantity, place, &node.span, draft),
            Kind::Calculated(what, place) => self.calculated(*what, place, &node.span, draft),
            Kind::Planck(temperature, place) => {
                self.node(temperature, draft)?;
                draft.add(Operation::Planck(place.wavenumber()));
                Ok(LayerUnit::Radiance)
            }
            Kind::Prefix(prefix, operand) => {
                let unit = self.node(operand, draft)?;
                draft.add(Operation::Prefix(*prefix));
                Ok(if *prefix == Prefix::Not { LayerUnit::Truth } else { unit })
            }
            Kind::Infix(infix, left, right) => {
                let units = (self.node(left, draft)?, self.node(right, draft)?);
                draft.add(Operation::Infix(*infix));
                if infix.wants_one_unit() {
                    draft.remark_on_mixed(&node.span, units);
                }
                Ok(unit_of_infix(*infix, units.0, units.1))
            }
            Kind::Call(function, operands) => self.call(*function, operands, &node.span, draft),
            Kind::Neighbourhood(statistic, around, operand) => {
                self.neighbourhood((*statistic, *around), operand, &node.span, draft)
            }
        }
    }

    fn call(
        &mut self,
        function: Function,
        operands: &[Node],
        span: &Span,
        draft: &mut Draft<'_>,
    ) -> Result<LayerUnit, LayerError> {
        let mut units = Vec::new();
        for operand in operands {
            units.push(self.node(operand, draft)?);
        }
        draft.add(Operation::Call(function, operands.len()));
        if let Some(pair) = units.windows(2).find(|pair| pair[0].mixes_badly_with(pair[1])) {
            draft.remark_on_mixed(span, (pair[0], pair[1]));
        }
        let choice = units.into_iter().reduce(LayerUnit::of_choice).unwrap_or(LayerUnit::Unknown);
        Ok(match function {
            Function::Min | Function::Max | Function::Abs => choice,
            Function::Missing => LayerUnit::Truth,
            _ if choice == LayerUnit::One => LayerUnit::One,
            _ => LayerUnit::Unknown,
        })
    }

    fn neighbourhood(
        &mut self,
        (statistic, around): (Statistic, Around),
        operand: &Node,
        span: &Span,
        draft: &mut Draft<'_>,
    ) -> Result<LayerUnit, LayerError> {
        if around == Around::Cluster && self.names.cluster() < 2 {
            return Err(LayerError::of_name(draft.text, span, &NameError::NoClusters));
        }
        let mut inner = Draft::of(draft.text);
        let unit = self.node(operand, &mut inner)?;
        let source = self.column(inner.program);
        let known = self.steps.iter().position(|step| {
            matches!(step, Step::Neighbourhood(other, at, of)
                if (*other, *at, *of) == (statistic, around, source))
        });
        let step = known.unwrap_or_else(|| {
            self.steps.push(Step::Neighbourhood(statistic, around, source));
            self.steps.len() - 1
        });
        draft.uses(&inner.leaves);
        draft.neighbours |= inner.neighbours || around == Around::Nine;
        draft.retrieved.extend(inner.retrieved);
        draft.remarks.extend(inner.remarks);
        draft.add(Operation::Load(Source::Step(step)));
        Ok(match statistic {
            Statistic::StandardDeviation | Statistic::Range => unit.of_spread(),
            _ => unit,
        })
    }

    /// The column in which a program comes out.
    fn column(&mut self, program: Program) -> Source {
        program.only_loads().unwrap_or_else(|| {
            self.steps.push(Step::Pointwise(program));
            Source::Step(self.steps.len() - 1)
        })
    }
}

impl<'t> Draft<'t> {
    fn of(text: &'t str) -> Self {
        Self {
            text,
            program: Program::default(),
            leaves: Vec::new(),
            neighbours: false,
            retrieved: Vec::new(),
            remarks: Vec::new(),
        }
    }

    fn remark_on_mixed(&mut self, span: &Span, (one, other): (LayerUnit, LayerUnit)) {
        if one.mixes_badly_with(other) {
            let part = self.text.get(span.clone()).unwrap_or(self.text);
            let (one, other) = (one.thing(), other.thing());
            let part = clean_text(part);
            self.remarks.push(format!("{part} puts {one} and {other} together"));
        }
    }

    pub fn add(&mut self, operation: Operation) {
        self.program.0.push(operation);
    }

    pub fn load(&mut self, leaf: usize) {
        self.uses(&[leaf]);
        self.add(Operation::Load(Source::Leaf(leaf)));
    }

    pub fn uses(&mut self, leaves: &[usize]) {
        for leaf in leaves {
            if !self.leaves.contains(leaf) {
                self.leaves.push(*leaf);
            }
        }
    }
}

fn unit_of_infix(infix: Infix, left: LayerUnit, right: LayerUnit) -> LayerUnit {
    match infix {
        Infix::Add => left.of_sum(right, false),
        Infix::Subtract => left.of_sum(right, true),
        Infix::Multiply => left.of_product(right),
        Infix::Divide => left.of_quotient(right),
        Infix::Power if (left, right) == (LayerUnit::One, LayerUnit::One) => LayerUnit::One,
        Infix::Power => LayerUnit::Unknown,
        _ => LayerUnit::Truth,
    }
}
