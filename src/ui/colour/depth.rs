//! How many colours to use, decided once from what was asked for and what the terminal says.

use std::str::FromStr;

/// How many colours the screen is drawn with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum ColourDepth {
    /// No colours at all: bold, dim and reverse only.
    None,
    /// The sixteen colours of the terminal's own scheme.
    Sixteen,
    /// The 256 indexed colours; the cheapest on a slow link that still shows a map well.
    Indexed,
    /// 24-bit colours.
    True,
}

/// What `--color` asked for.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum ColourRequest {
    /// Whatever suits the terminal.
    #[default]
    Auto,
    /// Colours even where the terminal would not get them by itself.
    Always,
    /// Exactly this depth.
    Exactly(ColourDepth),
}

impl FromStr for ColourRequest {
    type Err = String;

    fn from_str(text: &str) -> Result<Self, Self::Err> {
        match text {
            "auto" => Ok(Self::Auto),
            "always" => Ok(Self::Always),
            "never" | "none" => Ok(Self::Exactly(ColourDepth::None)),
            "16" => Ok(Self::Exactly(ColourDepth::Sixteen)),
            "256" | "indexed" => Ok(Self::Exactly(ColourDepth::Indexed)),
            "true" | "truecolor" | "24bit" => Ok(Self::Exactly(ColourDepth::True)),
            other => Err(format!(
                "{other:?} is no colour setting: use auto, always, never, 16, 256 or true"
            )),
        }
    }
}

/// What the choice of colours depends on, read elsewhere and passed in.
#[derive(Clone, Debug, Default)]
pub struct ColourSettings {
    /// What `--color` asked for.
    pub request: ColourRequest,
    /// Whether standard output is a terminal.
    pub is_terminal: bool,
    /// `NO_COLOR`; any value but an empty one switches colours off (no-color.org).
    pub no_color: Option<String>,
    /// `CLICOLOR_FORCE`; any value but empty and `0` switches colours on.
    pub clicolor_force: Option<String>,
    /// `TERM`.
    pub term: Option<String>,
    /// `COLORTERM`.
    pub colorterm: Option<String>,
    /// Whether `SSH_CONNECTION` or `SSH_TTY` is set.
    pub over_ssh: bool,
}

impl ColourSettings {
    /// Settings out of a lookup of environment variables.
    pub fn gather(
        request: ColourRequest,
        is_terminal: bool,
        variable: impl Fn(&str) -> Option<String>,
    ) -> Self {
        Self {
            request,
            is_terminal,
            no_color: variable("NO_COLOR"),
            clicolor_force: variable("CLICOLOR_FORCE"),
            term: variable("TERM"),
            colorterm: variable("COLORTERM"),
            over_ssh: ["SSH_CONNECTION", "SSH_TTY"]
                .iter()
                .any(|name| variable(name).is_some_and(|value| !value.is_empty())),
        }
    }

    /// The depth to draw with. The first of these that has something to say decides: the flag,
    /// `NO_COLOR`, `CLICOLOR_FORCE`, no terminal or a dumb one, `COLORTERM`, the terminal's name, sixteen.
    pub fn depth(&self) -> ColourDepth {
        match self.request {
            ColourRequest::Exactly(depth) => return depth,
            ColourRequest::Always => return self.terminal_depth().max(ColourDepth::Sixteen),
            ColourRequest::Auto => {}
        }
        if is_set(&self.no_color) {
            return ColourDepth::None;
        }
        if is_set(&self.clicolor_force) && self.clicolor_force.as_deref() != Some("0") {
            return self.terminal_depth().max(ColourDepth::Sixteen);
        }
        if !self.is_terminal {
            return ColourDepth::None;
        }
        self.terminal_depth()
    }

    fn terminal_depth(&self) -> ColourDepth {
        let term = self.term.as_deref().unwrap_or("");
        if term.is_empty() || term == "dumb" {
            return ColourDepth::None;
        }
        let most = if self.over_ssh || term.starts_with("screen") {
            // A map in 24-bit colours is eight times the bytes of an indexed one, which a slow link
            // feels; and GNU screen garbles them.
            ColourDepth::Indexed
        } else {
            ColourDepth::True
        };
        self.named_depth(term).min(most)
    }

    fn named_depth(&self, term: &str) -> ColourDepth {
        match self.colorterm.as_deref() {
            Some("truecolor" | "24bit") => return ColourDepth::True,
            Some("256color") => return ColourDepth::Indexed,
            _ => {}
        }
        if term.ends_with("-direct") {
            ColourDepth::True
        } else if term.contains("256color") {
            ColourDepth::Indexed
        } else if matches!(term, "linux" | "vt100" | "vt220" | "ansi") {
            ColourDepth::Sixteen
        } else if ["alacritty", "foot", "kitty", "wezterm", "tmux", "ghostty"]
            .iter()
            .any(|name| term.contains(name))
        {
            // These have at least 256 colours whatever their name says of it.
            ColourDepth::Indexed
        } else {
            ColourDepth::Sixteen
        }
    }
}

fn is_set(value: &Option<String>) -> bool {
    value.as_deref().is_some_and(|text| !text.is_empty())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn settings(variables: &[(&str, &str)]) -> ColourSettings {
        ColourSettings::gather(ColourRequest::Auto, true, |name| {
            variables.iter().find(|(known, _)| *known == name).map(|(_, value)| value.to_string())
        })
    }

    #[test]
    fn the_first_setting_that_speaks_decides() {
        let xterm = ("TERM", "xterm-256color");
        let truecolor = ("COLORTERM", "truecolor");
        for (variables, expected) in [
            (vec![xterm], ColourDepth::Indexed),
            (vec![xterm, truecolor], ColourDepth::True),
            (vec![xterm, truecolor, ("NO_COLOR", "1")], ColourDepth::None),
            (vec![xterm, ("NO_COLOR", "")], ColourDepth::Indexed),
            (vec![xterm, ("NO_COLOR", "1"), ("CLICOLOR_FORCE", "1")], ColourDepth::None),
            (vec![("TERM", "dumb"), truecolor], ColourDepth::None),
            (vec![("TERM", "dumb"), ("CLICOLOR_FORCE", "1")], ColourDepth::Sixteen),
            (vec![("TERM", "xterm")], ColourDepth::Sixteen),
            (vec![("TERM", "linux")], ColourDepth::Sixteen),
            (vec![], ColourDepth::None),
        ] {
            assert_eq!(settings(&variables).depth(), expected, "{variables:?}");
        }
    }

    #[test]
    fn a_remote_terminal_gets_indexed_colours_unless_more_is_asked_for() {
        let remote =
            [("TERM", "xterm-256color"), ("COLORTERM", "truecolor"), ("SSH_TTY", "/dev/pts/3")];
        let mut settings = settings(&remote);
        assert_eq!(settings.depth(), ColourDepth::Indexed);
        settings.request = ColourRequest::Exactly(ColourDepth::True);
        assert_eq!(settings.depth(), ColourDepth::True);
    }

    #[test]
    fn no_terminal_has_no_colours_unless_forced() {
        let mut settings = settings(&[("TERM", "xterm-256color")]);
        settings.is_terminal = false;
        assert_eq!(settings.depth(), ColourDepth::None);
        settings.clicolor_force = Some("1".into());
        assert_eq!(settings.depth(), ColourDepth::Indexed);
        settings.clicolor_force = Some("0".into());
        assert_eq!(settings.depth(), ColourDepth::None);
    }

    #[test]
    fn the_flag_is_read_in_its_usual_spellings() {
        assert_eq!("auto".parse(), Ok(ColourRequest::Auto));
        assert_eq!("256".parse(), Ok(ColourRequest::Exactly(ColourDepth::Indexed)));
        assert!("mauve".parse::<ColourRequest>().is_err());
    }
}
