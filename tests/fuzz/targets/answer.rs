//! The answer of a reader process, an index above all.
#![no_main]

libfuzzer_sys::fuzz_target!(|bytes: &[u8]| radsieve::netcdf_files::any_bytes::answer(bytes));
