//! Which files a plan claims. All claims of a run are known before anything is filed, so that two plans with one name are
//! both refused, whichever of them is compiled first.

use std::collections::BTreeMap;
use std::path::Path;

use crate::command::file_text;
use crate::language;

/// Plan number and revision.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Identity {
    /// Plan number.
    pub id: String,
    /// Revision.
    pub revision: String,
}

impl Identity {
    /// The name of the plan's files without their endings. Both parts hold only letters, digits, `.`, `_` and `-`: the
    /// language sees to it.
    pub fn stem(&self) -> String {
        format!("{}-{}", self.id, self.revision)
    }
}

/// The identity of the plan in a file; none if it cannot be read or has an error, for then it claims nothing.
pub fn of(path: &Path) -> Option<Identity> {
    let text = file_text::read(path).ok()?;
    let plan = language::read::read(&text).plan?;
    Some(Identity {
        id: plan.id.value,
        revision: plan.revision.value,
    })
}

/// For each plan whose files another one claims too: the first other one. Some file systems do not tell capitals from
/// small letters, so neither do we.
pub fn rivals(identities: &[Option<Identity>]) -> BTreeMap<usize, usize> {
    let mut claims: BTreeMap<String, Vec<usize>> = BTreeMap::new();
    for (at, identity) in identities.iter().enumerate() {
        if let Some(identity) = identity {
            let stem = identity.stem().to_lowercase();
            claims.entry(stem).or_default().push(at);
        }
    }
    let mut rivals = BTreeMap::new();
    for claimants in claims.values() {
        if let [first, second, ..] = claimants.as_slice() {
            for at in claimants {
                rivals.insert(*at, if at == first { *second } else { *first });
            }
        }
    }
    rivals
}

#[cfg(test)]
mod tests {
    use super::*;

    fn identity(id: &str, revision: &str) -> Option<Identity> {
        Some(Identity {
            id: id.to_owned(),
            revision: revision.to_owned(),
        })
    }

    #[test]
    fn plans_that_claim_the_same_files_are_rivals() {
        let plans = [
            identity("TP-1", "A"),
            None,
            identity("TP-1", "B"),
            identity("tp-1", "a"),
            identity("TP", "1-A"),
        ];
        assert_eq!(rivals(&plans), BTreeMap::from([(0, 3), (3, 0), (4, 0)]));
    }
}
