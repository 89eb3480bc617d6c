//! Arithmetic over blocks of footprints: a list of operations on a stack of columns.

use rayon::prelude::*;

use crate::layers::syntax::{Function, Infix, Prefix};
use crate::spectral::planck;

/// Footprints that are worked on together; a few columns of them fit into the nearest cache.
const BLOCK: usize = 512;

/// Fewer footprints than this are done before other threads have woken up.
const PARALLEL_FROM: usize = 1 << 16;

/// Where a column comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Source {
    /// From the granule.
    Leaf(usize),
    /// From an earlier step.
    Step(usize),
}

/// One operation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Operation {
    /// Puts a number on the stack.
    Constant(f64),
    /// Puts a column on the stack.
    Load(Source),
    /// Replaces the top.
    Prefix(Prefix),
    /// Replaces the two on top by one.
    Infix(Infix),
    /// Replaces as many on top as are given by one.
    Call(Function, usize),
    /// Replaces a temperature (K) on top by the radiance of a black body at a wavenumber (cm-1).
    Planck(f64),
}

/// Operations that leave one column on the stack.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Program(pub Vec<Operation>);

impl Program {
    /// The column that the program only hands on, if that is all it does.
    pub fn only_loads(&self) -> Option<Source> {
        match self.0.as_slice() {
            [Operation::Load(source)] => Some(*source),
            _ => None,
        }
    }

    /// Runs over all footprints. `column` gives the numbers of a source, one per footprint.
    pub fn run<'c>(
        &self,
        footprints: usize,
        column: &(dyn Fn(Source) -> &'c [f64] + Sync),
    ) -> Vec<f64> {
        let mut out = vec![f64::NAN; footprints];
        let run_block = |(block, out): (usize, &mut [f64])| {
            let mut stack: Vec<Vec<f64>> = Vec::new();
            for operation in &self.0 {
                apply(*operation, &mut stack, block * BLOCK, out.len(), column);
            }
            if let Some(top) = stack.pop() {
                out.copy_from_slice(&top);
            }
        };
        if footprints < PARALLEL_FROM {
            out.chunks_mut(BLOCK).enumerate().for_each(run_block);
        } else {
            out.par_chunks_mut(BLOCK).enumerate().for_each(run_block);
        }
        out
    }
}

fn apply<'c>(
    operation: Operation,
    stack: &mut Vec<Vec<f64>>,
    start: usize,
    length: usize,
    column: &(dyn Fn(Source) -> &'c [f64] + Sync),
) {
    match operation {
        Operation::Constant(value) => stack.push(vec![value; length]),
        Operation::Load(source) => stack.push(column(source)[start..start + length].to_vec()),
        Operation::Prefix(prefix) => change(stack, |value| match prefix {
            Prefix::Negate => -value,
            Prefix::Not => truth(value == 0.0),
        }),
        Operation::Infix(infix) => {
            let right = stack.pop().unwrap_or_default();
            combine(stack, &right, |left, right| joined(infix, left, right));
        }
        Operation::Call(Function::Min, count) => fold(stack, count, f64::min),
        Operation::Call(Function::Max, count) => fold(stack, count, f64::max),
        Operation::Call(Function::Abs, _) => change(stack, f64::abs),
        Operation::Call(Function::Sqrt, _) => change(stack, f64::sqrt),
        Operation::Call(Function::Ln, _) => change(stack, f64::ln),
        Operation::Call(Function::Exp, _) => change(stack, f64::exp),
        Operation::Call(Function::Missing, _) => {
            // The only operation whose result is there where its operand is not.
            for value in stack.last_mut().into_iter().flatten() {
                *value = truth(value.is_nan());
            }
        }
        Operation::Planck(wavenumber) => change(stack, |temperature| {
            if temperature > 0.0 { planck(wavenumber, temperature) } else { f64::NAN }
        }),
    }
}

/// Missing stays missing, whatever the operation would make of it: `not` of a missing value must
/// not become true, nor the smaller of a number and a missing value that number.
fn present(value: f64, given: f64) -> f64 {
    if given.is_nan() || !value.is_finite() { f64::NAN } else { value }
}

fn change(stack: &mut [Vec<f64>], operation: impl Fn(f64) -> f64) {
    if let Some(top) = stack.last_mut() {
        top.iter_mut().for_each(|value| *value = present(operation(*value), *value));
    }
}

fn combine(stack: &mut [Vec<f64>], right: &[f64], operation: impl Fn(f64, f64) -> f64) {
    if let Some(top) = stack.last_mut() {
        for (left, right) in top.iter_mut().zip(right) {
            // Finite or NaN both, so the sum is NaN where either is missing.
            let given = (*left * 0.0) + (*right * 0.0);
            *left = present(operation(*left, *right), given);
        }
    }
}

fn fold(stack: &mut Vec<Vec<f64>>, count: usize, operation: fn(f64, f64) -> f64) {
    for _ in 1..count {
        let right = stack.pop().unwrap_or_default();
        combine(stack, &right, operation);
    }
}

fn joined(infix: Infix, left: f64, right: f64) -> f64 {
    match infix {
        Infix::Or => truth(left != 0.0 || right != 0.0),
        Infix::And => truth(left != 0.0 && right != 0.0),
        Infix::Less => truth(left < right),
        Infix::LessOrEqual => truth(left <= right),
        Infix::Greater => truth(left > right),
        Infix::GreaterOrEqual => truth(left >= right),
        Infix::Equal => truth(left == right),
        Infix::NotEqual => truth(left != right),
        Infix::Add => left + right,
        Infix::Subtract => left - right,
        Infix::Multiply => left * right,
        Infix::Divide => left / right,
        Infix::Power => left.powf(right),
    }
}

fn truth(statement: bool) -> f64 {
    if statement { 1.0 } else { 0.0 }
}
