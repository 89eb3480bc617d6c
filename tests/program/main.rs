//! The program from outside: commands, exit codes, output; one module per command.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod describe;
mod export;
mod hostile;
mod instrument;
mod judgements;
mod layers;
mod layout;
mod lending;
mod manual;
mod memory;
mod plain_granule;
mod plain_rules;
mod planck;
mod producer;
mod samples;
mod screen;
mod spectrum;
mod streams;
mod tabulate;
