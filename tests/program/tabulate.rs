//! `tabulate` from outside.
