//! A rulebook with one test, for the plain granule: what is colder than the threshold is cloudy.

/// Its text, with a threshold (K) and a softness (K).
pub fn plain_rules(threshold: f64, softness: f64) -> String {
    format!(
        r#"
format = "radsieve rulebook 1"
name = "plain"
title = "for this test"
[[families]]
name = "cold"
[[tests]]
name = "cold window"
family = "cold"
flag = "cloudy"
expression = "bt(900)"
sense = "below"
threshold = {threshold}
softness = {softness}
source = "this test"
"#
    )
}
