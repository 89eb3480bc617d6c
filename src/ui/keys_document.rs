//! The text of `docs/keys.md`, made from the tables.

use std::fmt::Write;

use super::command;
use super::keys::{BINDINGS, Group, keys_text};

const INTRODUCTION: &str = "\
# Keys

Made from the table in `src/ui/keys.rs`; a test holds the two together. While a prompt or the help
is open, its own line says which keys it takes; Esc leaves it.

In the Tray the up and down keys choose a granule and Enter opens it. In the Evidence Enter goes to the
footprint most like the one under the cursor of those that a person decided, then to the next ones, and
back. In the Ledger Enter shows the whole granule or the footprint, and the key that withdraws takes back
the row in hand. In the Spread
Left and Right move the threshold finely, Up and Down coarsely; where it shows two layers, the arrows
move a place on the picture. In every other pane they move the cursor over the footprints.

Keys are changed by the names in the second column, in the table `[keys]` of the campaign's
`campaign.toml` or of one's own `radsieve/settings.toml` under `XDG_CONFIG_HOME` (else `~/.config`),
which comes after the campaign's:

```toml
[keys]
undo = \"U\"
redo = [\"Ctrl-Y\", \"F5\"]
```

A key given to one action is taken from the one that has it by this table; two settings for one key
clash, and the first holds. What is wrong is named with its line when a granule opens, and by `!`.
The keys of `quit`, `help`, `command` and `cancel` stay theirs. The help and the hints show the keys in
force.

Leaving waits for what was begun: decisions, masks, sign-offs by rule and changes of the rulebook are
written first, and what could not be written holds whoever leaves. The key of `quit` pressed once more
asks whether to wait no longer; Esc stays. What is found late, after another key was pressed, takes
neither keys nor selection; the status line tells of it. On a screen too small to show the panes only
the keys of `quit`, `suspend` and `redraw` do anything.
";

const COMMANDS: &str = "
## Commands

Behind `:`, Tab completes and Up and Down go through what was typed before. Every name in the tables
above is a command, and these take words:

| command | what it does |
| --- | --- |
";

/// The whole document.
pub fn document() -> String {
    let mut text = String::from(INTRODUCTION);
    for group in Group::ALL {
        // Writing into a string cannot fail.
        let _ = writeln!(text, "\n## {}\n", group.title());
        text.push_str("| keys | command | what it does |\n| --- | --- | --- |\n");
        for binding in BINDINGS.iter().filter(|binding| binding.group == group) {
            let keys: Vec<String> =
                keys_text(binding).split(' ').map(|key| format!("`{key}`")).collect();
            let (keys, name, help) = (keys.join(" "), binding.name, binding.help);
            let _ = writeln!(text, "| {keys} | `{name}` | {help} |");
        }
    }
    text.push_str(COMMANDS);
    for (typed, help) in command::worded_help() {
        let _ = writeln!(text, "| `{typed}` | {help} |");
    }
    text
}

#[cfg(test)]
mod tests {
    #[test]
    fn docs_keys_md_is_the_table() {
        let path = concat!(env!("CARGO_MANIFEST_DIR"), "/docs/keys.md");
        let expected = super::document();
        let found = std::fs::read_to_string(path).unwrap_or_default();
        assert!(found == expected, "docs/keys.md should be:\n{expected}");
    }
}
