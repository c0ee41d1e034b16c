//! What the built-in sets bring. Their texts never change, so each is read once in a
//! process, whoever uses it.

use std::collections::HashMap;
use std::sync::{Arc, LazyLock, Mutex};

use super::defect::DefectKind;
use super::import::{Definitions, resolve};
use super::reaction::Origin;
use super::sets::{self, Set};
use crate::text::tree::{Document, Use};

type Kept = Mutex<HashMap<(&'static str, u32), Arc<Definitions>>>;

static KEPT: LazyLock<Kept> = LazyLock::new(Kept::default);

/// What the set of this name brings, in this edition or the newest that has it.
pub fn find(name: &str, edition: Option<u32>) -> Result<Arc<Definitions>, DefectKind> {
    if let Some(set) = sets::find(name, edition) {
        return Ok(definitions(set));
    }
    Err(match (sets::find(name, None), edition) {
        (Some(newest), Some(edition)) => {
            DefectKind::UnknownEdition { name: name.into(), edition, newest: newest.edition }
        }
        _ => DefectKind::UnknownSet { name: name.into(), known: sets::names() },
    })
}

/// What a set brings: its own, and those of the sets that it uses.
pub fn definitions(set: &'static Set) -> Arc<Definitions> {
    let key = (set.name, set.edition);
    if let Some(kept) = KEPT.lock().unwrap_or_else(|e| e.into_inner()).get(&key) {
        return kept.clone();
    }
    let origin = Origin::Set { name: set.name, edition: set.edition };
    let found = resolve(&Document::parse(set.text), &origin, |what| {
        // Sets stand beside one another as files, each edition in a folder of its own.
        let name = match what {
            Use::Set { name, .. } => name.value.as_str(),
            Use::File { path } => path.value.trim_end_matches(".lyate"),
        };
        match sets::find(name, Some(set.edition)) {
            // A set that used itself would not end.
            Some(used) if used.name != set.name => Ok(definitions(used)),
            _ => Err(DefectKind::UnknownSet { name: name.into(), known: sets::names() }),
        }
    });
    // Where two threads read it at once, both keep what the first one found.
    let mut kept = KEPT.lock().unwrap_or_else(|e| e.into_inner());
    kept.entry(key).or_insert_with(|| Arc::new(found)).clone()
}
