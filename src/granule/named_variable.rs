//! Variables and dimensions by the names that a user writes.

use crate::netcdf_files::FileIndex;
use crate::system::near_names;

/// The variable with that path, or with that last part of a path where only one has it.
///
/// # Errors
/// There is none, or there are several; in words, with names that may have been meant.
pub fn named_variable(index: &FileIndex, name: &str) -> Result<usize, String> {
    let path = name.trim_start_matches('/');
    let all = || index.variables.iter().enumerate();
    if let Some((place, _)) = all().find(|(_, variable)| variable.path == path) {
        return Ok(place);
    }
    let same: Vec<usize> =
        all().filter(|(_, variable)| variable.name == path).map(|(place, _)| place).collect();
    match same.as_slice() {
        &[place] => Ok(place),
        [] => {
            let near = near_names(path, index.variables.iter().map(|other| other.path.as_str()));
            let hint = match near.is_empty() {
                true => String::new(),
                false => format!("; did you mean {}?", near.join(" or ")),
            };
            Err(format!("there is no variable `{path}`{hint}"))
        }
        several => {
            let paths = several.iter().map(|&place| index.variables[place].path.as_str());
            let paths: Vec<&str> = paths.collect();
            Err(format!("`{path}` may be {}; give the whole path", paths.join(" or ")))
        }
    }
}

/// Which of some dimensions has that name.
///
/// # Errors
/// None of them; in words, with their names.
pub fn named_dimension(index: &FileIndex, among: &[usize], name: &str) -> Result<usize, String> {
    let name_of = |&place: &usize| index.dimensions[place].name.as_str();
    among.iter().copied().find(|place| name_of(place) == name).ok_or_else(|| {
        let names: Vec<&str> = among.iter().map(name_of).collect();
        format!("there is no dimension `{name}` among {}", names.join(", "))
    })
}
