//! `radsieve review`: the terminal review.

use std::path::PathBuf;

use super::Exit;
use super::inputs::{Inputs, Reading};
use super::surroundings;

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = "Example:\n  \
    RADSIEVE_PERSON=ada radsieve review 'granules/*.nc' --campaign spring\n\n\
    RADSIEVE_PERSON names who decides, else the login name. Keys and limits of the campaign stand in \
    its campaign.toml, a person's own keys in radsieve/settings.toml below XDG_CONFIG_HOME or \
    ~/.config. NO_COLOR turns colours off. Inside, ? shows the keys and : takes commands.")]
pub struct Arguments {
    #[command(flatten)]
    inputs: Inputs,
    /// The campaign folder: settings, ledgers, exports; made where there is none
    #[arg(long, value_name = "DIR", default_value = surroundings::DEFAULT_CAMPAIGN)]
    campaign: PathBuf,
    /// The layer to begin with, such as bt(900) or bt(900)-bt(831)
    #[arg(long, value_name = "EXPR")]
    layer: Option<String>,
    /// Colours: auto, always, never, 16, 256 or true
    #[arg(long, value_name = "WHEN", default_value = "auto")]
    color: String,
    /// The terminal's ground: auto (by COLORFGBG, else dark), light or dark
    #[arg(long, value_name = "GROUND", default_value = "auto")]
    background: String,
    /// Letters and ASCII signs only
    #[arg(long)]
    ascii: bool,
    /// Send as little as possible: 16 levels of at most 256 colours, spectra when the cursor rests
    #[arg(long)]
    low_bandwidth: bool,
    #[command(flatten)]
    reading: Reading,
}

/// Runs the command.
#[cfg(not(feature = "terminal"))]
pub fn run(_arguments: Arguments) -> anyhow::Result<Exit> {
    let words = "this build has no terminal review; export, tabulate and describe work without it";
    Err(super::exit::UsageError(words.to_owned()).into())
}

/// Runs the command.
#[cfg(feature = "terminal")]
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    on_screen::run(arguments)
}

#[cfg(feature = "terminal")]
mod on_screen {
    use std::env;
    use std::io::IsTerminal;
    use std::sync::Arc;

    use super::Arguments;
    use crate::cli::exit::{Exit, UsageError};
    use crate::cli::{own_settings, surroundings};
    use crate::flags::Campaign;
    use crate::layers::Expression;
    use crate::tray::Tray;
    use crate::ui::colour::{Background, ColourDepth, ColourRequest, ColourSettings, Theme};
    use crate::ui::keys::Action;
    use crate::ui::{self, App, Outside};

    /// What to use where the screen can't be shown.
    const NO_TERMINAL: &str = "review needs a terminal that can move its cursor (TERM is unset or \
                               dumb, or the output goes elsewhere); describe, tabulate, spectrum \
                               and export work without one";

    pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
        let request: ColourRequest = arguments.color.parse().map_err(UsageError)?;
        if let Some(layer) = &arguments.layer {
            Expression::parse(layer).map_err(|error| UsageError(error.to_string()))?;
        }
        let background = background(&arguments.background)?;
        if !ui::is_usable(env::var("TERM").ok().as_deref()) {
            return Err(UsageError(NO_TERMINAL.to_owned()).into());
        }
        let theme = theme(request, background, &arguments);
        let files = arguments.inputs.files()?;
        let is_new = !arguments.campaign.exists();
        let (campaign, unwritable) = Campaign::open_as_possible(&arguments.campaign)?;
        surroundings::now()?;
        let outside = Outside {
            opening: arguments.reading.opening()?,
            campaign,
            author: surroundings::author(),
            program: env!("CARGO_PKG_VERSION").to_owned(),
            // The form of RADSIEVE_NOW was checked above.
            clock: Arc::new(|| surroundings::now().unwrap_or_else(|_| jiff::Timestamp::now())),
            keys: own_settings::keys()?,
            look_only: unwritable.map(|error| error.to_string()),
            first_layer: arguments.layer.clone(),
        };
        let mut app = App::new(outside, theme, Tray::new(files));
        app.low_bandwidth = arguments.low_bandwidth;
        app.welcome = welcome(&arguments, is_new, &app);
        let ended = ui::run(app)?;
        if let Some(unwritten) = &ended.unwritten {
            say!("radsieve: {unwritten}");
        }
        Ok(match (ended.code, ended.unwritten) {
            (0, None) => Exit::Done,
            (0, Some(_)) => Exit::Failed,
            (code, _) => Exit::Signal(code),
        })
    }

    /// What helps at the first look: that signs may be broken, else where the keys are found.
    fn welcome(arguments: &Arguments, is_new: bool, app: &App) -> Option<String> {
        let locale = ["LC_ALL", "LC_CTYPE", "LANG"]
            .into_iter()
            .find_map(|name| env::var(name).ok().filter(|value| !value.is_empty()))
            .unwrap_or_default();
        if !arguments.ascii && !surroundings::is_utf8(&locale) {
            return Some(format!(
                "the locale is no UTF-8 one ({}): where signs look broken, use --ascii",
                if locale.is_empty() { "none is set" } else { &locale }
            ));
        }
        let hint = |action| app.keymap.hint(action);
        is_new.then(|| {
            format!(
                "first time? {} keys, 1-7 panes, {} commands",
                hint(Action::Help),
                hint(Action::Command)
            )
        })
    }

    fn background(typed: &str) -> Result<Background, UsageError> {
        match typed {
            "auto" => Ok(Background::from_colorfgbg(env::var("COLORFGBG").ok().as_deref())),
            "light" => Ok(Background::Light),
            "dark" => Ok(Background::Dark),
            other => Err(UsageError(format!("{other:?} is no ground: use auto, light or dark"))),
        }
    }

    fn theme(request: ColourRequest, background: Background, arguments: &Arguments) -> Theme {
        let is_terminal = std::io::stdout().is_terminal();
        let settings = ColourSettings::gather(request, is_terminal, |name| env::var(name).ok());
        let depth = settings.depth();
        Theme {
            depth: if arguments.low_bandwidth { depth.min(ColourDepth::Indexed) } else { depth },
            ascii: arguments.ascii,
            background,
        }
    }
}
