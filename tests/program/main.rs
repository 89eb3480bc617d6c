//! The program from outside: commands, exit codes, output; one module per command.

mod describe;
mod export;
mod hostile;
mod planck;
mod samples;
mod spectrum;
mod tabulate;
