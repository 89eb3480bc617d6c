//! Where a person left a granule: cursor, layer, zoom. What a place holds is the screen's business;
//! here it is a small JSON document per granule and person.

use std::io;
use std::path::PathBuf;

use serde_json::Value;

use super::{Campaign, GranuleIdentity, file_name_part};
use crate::system::{WriteError, write_whole};

/// A cursor and a few words; a larger file is damaged.
const LONGEST: u64 = 1 << 16;

impl Campaign {
    /// Keeps where `person` left a granule.
    ///
    /// # Errors
    /// The file cannot be written. No decision is lost by that.
    pub fn keep_place(
        &self,
        granule: &GranuleIdentity,
        person: &str,
        place: &Value,
    ) -> Result<(), WriteError<io::Error>> {
        let path = self.place_path(granule, person);
        if let Some(folder) = path.parent() {
            std::fs::create_dir_all(folder)
                .map_err(|source| WriteError::Create { folder: folder.to_owned(), source })?;
        }
        write_whole(&path, |temporary| std::fs::write(temporary, place.to_string()))
    }

    /// Where `person` left a granule, if that is known. A damaged place is no place.
    pub fn place(&self, granule: &GranuleIdentity, person: &str) -> Option<Value> {
        let path = self.place_path(granule, person);
        let data = std::fs::metadata(&path).ok()?;
        if !data.is_file() || data.len() > LONGEST {
            return None;
        }
        serde_json::from_slice(&std::fs::read(path).ok()?).ok()
    }

    fn place_path(&self, granule: &GranuleIdentity, person: &str) -> PathBuf {
        let granule = file_name_part(granule.short());
        self.folder().join("places").join(granule).join(format!("{}.json", file_name_part(person)))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_place_is_found_again_by_its_person_only() {
        let dir = tempfile::tempdir().unwrap();
        let campaign = Campaign::open_or_create(dir.path()).unwrap();
        let granule = super::super::ledger_tests::granule();
        let place = serde_json::json!({"cursor": [3, 4], "layer": "bt(900)"});
        assert_eq!(campaign.place(&granule, "anna"), None);
        campaign.keep_place(&granule, "anna", &place).unwrap();
        assert_eq!(campaign.place(&granule, "anna"), Some(place.clone()));
        assert_eq!(campaign.place(&granule, "../anna"), None);
        std::fs::write(campaign.place_path(&granule, "anna"), "{").unwrap();
        assert_eq!(campaign.place(&granule, "anna"), None);
        campaign.keep_place(&granule, "anna", &place).unwrap();
        assert_eq!(campaign.place(&granule, "anna"), Some(place));
    }
}
