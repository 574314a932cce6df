//! How a command ends.

use std::process::ExitCode;

use crate::record::Record;

/// The exit statuses, from fine to worst.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Status {
    /// 0: fine.
    Fine,
    /// 1: a requirement is not met, or a given region does not keep the level.
    Finding,
    /// 2: bad input or usage.
    BadInput,
    /// 3: the program contradicts itself.
    Internal,
}

/// One line for the end of short help.
pub const HELP: &str =
    "Exit status: 0 fine, 1 a finding, 2 bad input or usage, 3 internal error. Long help: --help";

impl Status {
    /// The number the caller sees.
    pub fn code(self) -> u8 {
        match self {
            Self::Fine => 0,
            Self::Finding => 1,
            Self::BadInput => 2,
            Self::Internal => 3,
        }
    }

    /// What a compiled plan means for the status.
    pub fn of(record: &Record) -> Self {
        if record.size.within_level && record.requirements.iter().all(|each| each.met) {
            Self::Fine
        } else {
            Self::Finding
        }
    }
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> Self {
        Self::from(status.code())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_worst_status_is_the_greatest() {
        let all = [
            Status::BadInput,
            Status::Fine,
            Status::Internal,
            Status::Finding,
        ];
        assert_eq!(all.iter().max(), Some(&Status::Internal));
        assert!(Status::Finding < Status::BadInput);
        assert_eq!(Status::BadInput.code(), 2);
    }
}
