//! A chunk, and the filters that it went through.
#![no_main]

libfuzzer_sys::fuzz_target!(|bytes: &[u8]| radsieve::netcdf_files::any_bytes::chunk(bytes));
