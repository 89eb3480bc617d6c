//! The description as text for people.

use std::io::{self, Write};

use super::description::{
    BandDescription, Description, Field, LenderDescription, VariableDescription,
};

/// Prints everything, what matters first.
pub fn print(description: &Description, out: &mut impl Write) -> io::Result<()> {
    writeln!(out, "{}", description.file)?;
    writeln!(
        out,
        "  {}, {} on disk, {} in memory",
        description.format,
        bytes(description.file_bytes),
        bytes(description.memory_bytes as u64)
    )?;
    for (name, text) in [("title", &description.title), ("source", &description.source)] {
        if let Some(text) = text {
            writeln!(out, "  {name}: {text}")?;
        }
    }
    if let Some(layout) = &description.layout_file {
        writeln!(out, "  layout file: {} (blake3 {})", layout.file, layout.blake3)?;
    }
    print_footprints(description, out)?;
    heading(out, "Bands", description.bands.is_empty())?;
    for band in &description.bands {
        print_band(band, out)?;
    }
    heading(out, "Geolocation", description.geolocation.is_empty())?;
    for field in &description.geolocation {
        print_field(field, out)?;
    }
    for (title, role) in
        [("Quality variables", "quality"), ("Other variables of the footprints", "other")]
    {
        let variables = || description.variables.iter().filter(|variable| variable.role == role);
        heading(out, title, variables().next().is_none())?;
        for variable in variables() {
            print_variable(variable, out)?;
        }
    }
    if !description.lenders.is_empty() {
        heading(out, "Files that lend", false)?;
    }
    for lender in &description.lenders {
        print_lender(lender, description.footprints.count, out)?;
    }
    heading(out, "Problems", description.problems.is_empty())?;
    for problem in &description.problems {
        write!(out, "  {}: {}", problem.kind, problem.what)?;
        if !problem.where_.is_empty() {
            write!(out, " ({})", problem.where_)?;
        }
        writeln!(out)?;
        if !problem.advice.is_empty() {
            writeln!(out, "      {}", problem.advice)?;
        }
    }
    Ok(())
}

fn heading(out: &mut impl Write, title: &str, empty: bool) -> io::Result<()> {
    writeln!(out, "{title}{}", if empty { ": none" } else { "" })
}

fn print_footprints(description: &Description, out: &mut impl Write) -> io::Result<()> {
    let footprints = &description.footprints;
    let dimensions: Vec<String> = footprints
        .dimensions
        .iter()
        .map(|dimension| format!("{} {}", dimension.name, dimension.length))
        .collect();
    writeln!(out, "Footprints\n  {} = {}", footprints.count, dimensions.join(" x "))
}

fn print_band(band: &BandDescription, out: &mut impl Write) -> io::Result<()> {
    let gaps = match band.segments {
        1 => String::new(),
        segments => format!(", in {segments} pieces with gaps between"),
    };
    writeln!(
        out,
        "  {}: {} channels, {} to {} cm-1{}{gaps}",
        band.name,
        band.channels,
        number(band.first),
        number(band.last),
        spacing(band)
    )?;
    writeln!(out, "    {} `{}` ({})", band.quantity, band.variable, band.dimensions.join(", "))?;
    let used = match band.is_converted() {
        true => format!("read as {}, used as {}", band.units_understood, band.units_in_use),
        false => format!("used as {}", band.units_in_use),
    };
    writeln!(out, "    unit in the file {:?}, {used}", band.units_in_file)?;
    match band.axis_steps {
        None => writeln!(out, "    spectral axis `{}` in {}", band.axis_variable, band.axis_units)?,
        Some([first, step]) => {
            writeln!(out, "    spectral axis from {first} in steps of {step} {}", band.axis_units)?;
        }
    }
    writeln!(out, "    apodisation {}", band.apodisation)?;
    if let Some(noise) = &band.noise {
        let along = match noise.along.is_empty() {
            true => String::new(),
            false => format!(", for each {}", noise.along.join(", ")),
        };
        let scene = noise.scene.map(|kelvin| format!(", of a scene of {} K", number(kelvin)));
        let scene = scene.unwrap_or_default();
        writeln!(out, "    noise `{}` in {:?}{scene}{along}", noise.variable, noise.units_in_file)?;
    }
    if let Some(calculated) = &band.calculated {
        let file = calculated.file.as_ref().map(|file| format!(" of {file}")).unwrap_or_default();
        let units = &calculated.units_in_file;
        writeln!(out, "    calculated clear sky `{}`{file} in {units:?}", calculated.variable)?;
    }
    if band.bad_channels > 0 {
        writeln!(out, "    {} channels are in no layer", band.bad_channels)?;
    }
    writeln!(out, "    stored as {}", storage(band))
}

fn print_lender(
    lender: &LenderDescription,
    footprints: usize,
    out: &mut impl Write,
) -> io::Result<()> {
    writeln!(out, "  {}, {}", lender.file, bytes(lender.bytes))?;
    let matched = lender.footprints_matched;
    writeln!(out, "    joined {}: {matched} of {footprints} footprints", lender.joined)?;
    let lends = if lender.lends.is_empty() { "nothing" } else { &lender.lends.join(", ") };
    writeln!(out, "    lends by itself: {lends}")?;
    for variable in &lender.variables {
        write!(out, "  ")?;
        print_variable(variable, out)?;
    }
    writeln!(out, "    blake3 {}", lender.blake3)
}

fn spacing(band: &BandDescription) -> String {
    match (band.smallest_spacing, band.largest_spacing) {
        (Some(low), Some(high)) if high - low < 1e-6 * high => format!(", spacing {}", number(low)),
        (Some(low), Some(high)) => format!(", spacing {} to {}", number(low), number(high)),
        _ => String::new(),
    }
}

fn storage(band: &BandDescription) -> String {
    let storage = &band.storage;
    let mut parts = vec![storage.kind.to_owned()];
    if storage.packed {
        parts.push("packed".into());
    }
    if storage.big_endian {
        parts.push("big-endian".into());
    }
    parts.push(match &storage.chunks {
        Some(chunks) => {
            let lengths: Vec<String> = chunks.iter().map(usize::to_string).collect();
            format!("chunks {}", lengths.join(" x "))
        }
        None => "in one piece".into(),
    });
    parts.extend(storage.filters.iter().cloned());
    parts.join(", ")
}

fn print_field(field: &Field, out: &mut impl Write) -> io::Result<()> {
    match field.computed {
        true => write!(out, "  {}: computed from {}", field.name, field.variable)?,
        false => write!(out, "  {}: `{}`", field.name, field.variable)?,
    }
    if let Some(file) = &field.file {
        write!(out, " of {file}")?;
    }
    if !field.units_in_file.is_empty() {
        write!(out, " in {:?}", field.units_in_file)?;
    }
    if let (Some(low), Some(high)) = (field.lowest, field.highest) {
        match field.name {
            "time" => write!(out, ", {} to {}", moment(low), moment(high))?,
            _ => write!(out, ", {} to {}", number(low), number(high))?,
        }
    }
    if field.missing > 0 {
        write!(out, ", {} missing", field.missing)?;
    }
    writeln!(out)
}

fn print_variable(variable: &VariableDescription, out: &mut impl Write) -> io::Result<()> {
    write!(out, "  {}", variable.name)?;
    if !variable.units.is_empty() {
        write!(out, " in {:?}", variable.units)?;
    }
    if !variable.long_name.is_empty() {
        write!(out, ": {}", variable.long_name)?;
    }
    if !variable.meanings.is_empty() {
        write!(out, " [{}]", variable.meanings.join(", "))?;
    }
    writeln!(out)
}

/// As many digits as say something, none that do not.
fn number(value: f64) -> String {
    let text = format!("{value:.4}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

fn moment(seconds: f64) -> String {
    jiff::Timestamp::from_second(seconds.floor() as i64)
        .map_or_else(|_| number(seconds), |moment| moment.to_string())
}

fn bytes(count: u64) -> String {
    match count {
        0..1_000 => format!("{count} bytes"),
        1_000..1_000_000 => format!("{:.1} kB", count as f64 / 1e3),
        1_000_000..1_000_000_000 => format!("{:.1} MB", count as f64 / 1e6),
        _ => format!("{:.2} GB", count as f64 / 1e9),
    }
}
