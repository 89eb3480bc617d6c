//! The text of a layer; one that is taken means the same when its text is read again.
#![no_main]

use radsieve::layers::Expression;

libfuzzer_sys::fuzz_target!(|text: &str| {
    if let Ok(expression) = Expression::parse(text) {
        let again = Expression::parse(expression.text()).expect("its own text is an expression");
        assert_eq!(again.text(), expression.text());
    }
});
