//! What went wrong between this computer and a device, as a failure with its exit status.

use super::Failure;
use crate::exit::Exit;
use crate::journal_file::JournalFileError;
use crate::link::{LinkError, PortError};
use strake_core::wire::ErrorCode;

impl From<LinkError> for Failure {
    fn from(error: LinkError) -> Self {
        let (exit, code) = match &error {
            LinkError::Port(port) => (Exit::NoDevice, port_code(port)),
            LinkError::Silent { .. } => (Exit::NoDevice, "silent"),
            LinkError::NotStrake { .. } => (Exit::NoDevice, "not-strake"),
            LinkError::Noisy { .. } => (Exit::NoDevice, "noisy"),
            LinkError::Refused { code: ErrorCode::Busy, .. } => (Exit::NoDevice, "device-busy"),
            LinkError::Version(_)
            | LinkError::Refused { code: ErrorCode::PlanFormat, .. }
            | LinkError::UnknownCode { .. }
            | LinkError::Nonsense { .. } => (Exit::VersionMismatch, "version"),
            LinkError::Refused { .. } => (Exit::Refused, "refused"),
            LinkError::Interrupted => (Exit::Interrupted, "interrupted"),
            LinkError::File(file) => of_file(file),
        };
        said(exit, code, &error.to_string())
    }
}

impl From<JournalFileError> for Failure {
    fn from(error: JournalFileError) -> Self {
        let (exit, code) = of_file(&error);
        said(exit, code, &error.to_string())
    }
}

fn port_code(error: &PortError) -> &'static str {
    match error {
        PortError::NoneFound { .. } => "no-device",
        PortError::Several { .. } => "several-devices",
        PortError::Missing { .. } => "port-missing",
        PortError::Busy { .. } => "port-busy",
        PortError::NoPermission { .. } => "port-permission",
        PortError::Failed { .. } => "port-failed",
    }
}

fn of_file(error: &JournalFileError) -> (Exit, &'static str) {
    match error {
        JournalFileError::Io { .. } => (Exit::Partial, "journal-file"),
        JournalFileError::Empty { .. } | JournalFileError::Foreign { .. } => {
            (Exit::InvalidInput, "no-journal-file")
        }
        JournalFileError::Exists { .. } => (Exit::Refused, "file-exists"),
        JournalFileError::OtherDevice { .. } => (Exit::Refused, "other-device"),
    }
}

/// The link's texts say first what is wrong, then, after a semicolon, what to do.
fn said(exit: Exit, code: &'static str, text: &str) -> Failure {
    let (message, hint) = text.split_once("; ").unwrap_or((text, ""));
    Failure::new(exit, code, message, hint)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::failure::Said;

    fn said_of(error: LinkError) -> Said {
        match Failure::from(error) {
            Failure::Said(said) => said,
            other => panic!("{other:?}"),
        }
    }

    #[test]
    fn a_refusal_keeps_the_reason_of_the_device_and_its_remedy() {
        let code = ErrorCode::PlanNotLater;
        let said = said_of(LinkError::Refused { doing: "loading the plan", code, detail: 0 });
        assert_eq!((said.exit, said.code), (Exit::Refused, "refused"));
        assert_eq!(
            said.message,
            "loading the plan: the plan is not sealed later than the one in force"
        );
        assert_eq!(said.hint, "seal it again with a right clock");
    }

    #[test]
    fn each_way_of_having_no_device_has_its_own_class() {
        let port = || "p".to_owned();
        let found = vec!["p (a)".to_owned(), "q (b)".to_owned()];
        let classes = [
            (LinkError::Port(PortError::NoneFound { tried: vec![] }), "no-device"),
            (LinkError::Port(PortError::Several { found }), "several-devices"),
            (LinkError::Port(PortError::Busy { port: port() }), "port-busy"),
            (LinkError::Silent { port: port(), waited: std::time::Duration::ZERO }, "silent"),
            (LinkError::NotStrake { port: port(), bytes: 3 }, "not-strake"),
        ];
        for (error, class) in classes {
            let said = said_of(error);
            assert_eq!((said.exit, said.code), (Exit::NoDevice, class));
            assert!(!said.hint.is_empty(), "{}", said.message);
        }
    }
}
