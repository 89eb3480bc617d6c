//! `completions`, `man`, help and wrong usage from outside.

use std::process::Command;

fn radsieve(arguments: &[&str]) -> std::process::Output {
    Command::new(env!("CARGO_BIN_EXE_radsieve")).args(arguments).output().unwrap()
}

#[test]
fn completions_name_every_command_that_help_lists() {
    let help = String::from_utf8(radsieve(&["--help"]).stdout).unwrap();
    let script = String::from_utf8(radsieve(&["completions", "bash"]).stdout).unwrap();
    let commands: Vec<&str> = help
        .lines()
        .skip_while(|line| *line != "Commands:")
        .skip(1)
        .take_while(|line| !line.is_empty())
        .filter_map(|line| line.split_whitespace().next())
        .collect();
    assert!(commands.contains(&"review") && commands.contains(&"export"), "{help}");
    for command in commands {
        assert!(script.contains(command), "{command} cannot be completed");
    }
}

#[test]
fn man_writes_a_page_for_each_command() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("pages");
    assert!(radsieve(&["man", "--out", out.to_str().unwrap()]).status.success());
    for page in ["radsieve.1", "radsieve-review.1", "radsieve-export.1"] {
        let text = std::fs::read_to_string(out.join(page)).unwrap();
        assert!(text.starts_with(".ie"), "{page} is not a manual page: {text:.40}");
    }
}

#[test]
fn wrong_usage_is_exit_code_2_and_help_is_0() {
    assert_eq!(radsieve(&["no-such-command"]).status.code(), Some(2));
    assert_eq!(radsieve(&["describe", "--no-such-flag", "x.nc"]).status.code(), Some(2));
    assert_eq!(radsieve(&["--help"]).status.code(), Some(0));
    assert_eq!(radsieve(&["--version"]).status.code(), Some(0));
}

#[test]
fn the_reader_process_is_no_business_of_the_help() {
    let help = String::from_utf8(radsieve(&["--help"]).stdout).unwrap();
    assert!(!help.contains("reader-process"));
}
