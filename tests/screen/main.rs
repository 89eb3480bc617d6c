//! The terminal from outside: a pseudo-terminal, keys, expected screens.
