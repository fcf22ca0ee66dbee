//! Who asks, by what means, and what they may do. Every record of the audit trail says it; every handler asks for it.

use std::collections::BTreeSet;
use std::sync::Arc;
use uuid::Uuid;

/// What a person is to an organisation. A person may be several of these; what they may do is the union.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Role {
    /// Names the members and what they may do.
    Administrator,
    /// Enters data and prepares statements.
    Preparer,
    /// Approves what another person submitted.
    Approver,
    /// Looks at everything, changes nothing.
    Viewer,
    /// From outside: looks at chosen pathways and statements until a day.
    Auditor,
}

impl Role {
    /// Every role.
    pub const ALL: &[Role] = &[
        Role::Administrator,
        Role::Preparer,
        Role::Approver,
        Role::Viewer,
        Role::Auditor,
    ];

    /// Its name in documents and in the database.
    pub fn name(self) -> &'static str {
        match self {
            Role::Administrator => "administrator",
            Role::Preparer => "preparer",
            Role::Approver => "approver",
            Role::Viewer => "viewer",
            Role::Auditor => "auditor",
        }
    }

    /// The role of a name.
    pub fn of(name: &str) -> Option<Role> {
        Role::ALL.iter().copied().find(|role| role.name() == name)
    }

    /// What it may do.
    pub fn rights(self) -> &'static [Right] {
        match self {
            Role::Administrator => &[Right::Read, Right::Administer],
            Role::Preparer => &[Right::Read, Right::Write],
            Role::Approver => &[Right::Read, Right::Approve],
            Role::Viewer | Role::Auditor => &[Right::Read],
        }
    }
}

/// What somebody may do.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Right {
    /// Look.
    Read,
    /// Enter and change data, prepare and submit statements.
    Write,
    /// Approve and withdraw statements.
    Approve,
    /// Name members, their roles and what auditors see.
    Administer,
}

impl Right {
    /// Its name in documents and in the database: the scopes of tokens are those below `administer`.
    pub fn name(self) -> &'static str {
        match self {
            Right::Read => "read",
            Right::Write => "write",
            Right::Approve => "approve",
            Right::Administer => "administer",
        }
    }
}

/// By what means somebody came in.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Via {
    /// Signed in with a browser; the short public name of the session.
    Session(String),
    /// A token for scripts; its label.
    Token(String),
    /// The command line of the machine.
    Command,
    /// Nobody signed in.
    Nothing,
}

impl Via {
    /// The kind of it, in the audit trail.
    pub fn kind(&self) -> &'static str {
        match self {
            Via::Session(_) => "session",
            Via::Token(_) => "token",
            Via::Command => "command",
            Via::Nothing => "nothing",
        }
    }

    /// Which one of its kind; empty where there is only one.
    pub fn label(&self) -> &str {
        match self {
            Via::Session(label) | Via::Token(label) => label,
            Via::Command | Via::Nothing => "",
        }
    }
}

/// What of the organisation's records somebody sees.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub enum Sight {
    /// All of them.
    #[default]
    All,
    /// Chosen ones, by public id: what an auditor from outside was invited to.
    Chosen {
        /// Pathways.
        pathways: BTreeSet<Uuid>,
        /// Statements.
        statements: BTreeSet<Uuid>,
    },
}

/// Somebody who asks.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Who {
    /// Public id of the person; none for the command line and for strangers.
    pub person: Option<Uuid>,
    /// Name of the person, as pages show it.
    pub name: String,
    /// Name they sign in with; empty where nobody signed in.
    pub sign_in_name: String,
    /// Name of the organisation.
    pub organisation_name: String,
    /// By what means they came in.
    pub via: Via,
    /// The address the request came from; empty where there is none.
    pub from: String,
    /// What they may do by these means.
    pub rights: BTreeSet<Right>,
    /// What they see.
    pub sight: Sight,
}

impl Who {
    /// The command line: whoever can run the program on its data may do everything.
    pub fn command() -> Who {
        Who {
            person: None,
            name: "command line".into(),
            sign_in_name: String::new(),
            organisation_name: String::new(),
            via: Via::Command,
            from: String::new(),
            rights: [Right::Read, Right::Write, Right::Approve, Right::Administer].into(),
            sight: Sight::All,
        }
    }

    /// Nobody in particular: may look at nothing of anybody's.
    pub fn stranger() -> Who {
        Who {
            name: "stranger".into(),
            via: Via::Nothing,
            rights: BTreeSet::new(),
            ..Who::command()
        }
    }

    /// True if they signed in or come from the command line.
    pub fn is_known(&self) -> bool {
        self.via != Via::Nothing
    }

    /// True if they may do it.
    pub fn may(&self, right: Right) -> bool {
        self.rights.contains(&right)
    }

    /// True if they see the pathway.
    pub fn sees_pathway(&self, id: Uuid) -> bool {
        match &self.sight {
            Sight::All => true,
            Sight::Chosen { pathways, .. } => pathways.contains(&id),
        }
    }

    /// True if they see the statement.
    pub fn sees_statement(&self, id: Uuid) -> bool {
        match &self.sight {
            Sight::All => true,
            Sight::Chosen { statements, .. } => statements.contains(&id),
        }
    }
}

/// Somebody who asks, shared.
pub type SharedWho = Arc<Who>;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_of_roles_lead_back() {
        for role in Role::ALL {
            assert_eq!(Role::of(role.name()), Some(*role));
        }
        assert_eq!(Role::of("owner"), None);
    }

    #[test]
    fn who_administers_does_not_approve() {
        assert!(!Role::Administrator.rights().contains(&Right::Approve));
        assert!(!Role::Preparer.rights().contains(&Right::Approve));
        assert!(!Role::Approver.rights().contains(&Right::Write));
    }

    #[test]
    fn a_chosen_sight_shows_nothing_else() {
        let seen = Uuid::from_u128(1);
        let auditor = Who {
            sight: Sight::Chosen {
                pathways: [seen].into(),
                statements: BTreeSet::new(),
            },
            ..Who::command()
        };
        assert!(auditor.sees_pathway(seen) && !auditor.sees_pathway(Uuid::from_u128(2)));
        assert!(!auditor.sees_statement(seen));
    }
}
