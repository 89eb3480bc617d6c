//! Where the chunks of a variable lie: checked, then used.
#![no_main]

libfuzzer_sys::fuzz_target!(|bytes: &[u8]| radsieve::netcdf_files::any_bytes::chunk_table(bytes));
