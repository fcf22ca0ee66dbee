//! What stands round every page: its title, the place in the navigation, the same data as an address.

use super::visitor;

/// A word of the navigation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Section {
    /// Pathways.
    Pathways,
    /// Compare.
    Compare,
    /// Calculators.
    Calculators,
    /// Factors, materials and rule sets.
    Factors,
    /// Files that back figures.
    Evidence,
    /// Audit trail.
    AuditTrail,
    /// The API in words.
    Api,
    /// One's own account.
    Me,
    /// The people of the organisation.
    People,
    /// The way in.
    SignIn,
    /// None of them: a page that says what went wrong.
    Elsewhere,
}

/// The frame of a page.
#[derive(Clone, Debug, PartialEq)]
pub struct Frame {
    /// Stands in the title of the window before the name of the program.
    pub title: String,
    /// The place in the navigation.
    pub section: Section,
    /// The requests that give the same as data, such as `GET /api/v1/pathways`; none where there is no data.
    pub data: Vec<String>,
    /// Said at the top where the page shows demonstration data; empty where it shows none.
    pub example: &'static str,
    /// True for pages that print in landscape.
    pub wide: bool,
}

impl Frame {
    /// A frame with one request that gives the same as data.
    pub fn new(title: impl Into<String>, section: Section, data: impl Into<String>) -> Frame {
        Frame {
            title: title.into(),
            section,
            data: vec![data.into()],
            example: "",
            wide: false,
        }
    }

    /// A frame for a page that stands for no data.
    pub fn bare(title: impl Into<String>, section: Section) -> Frame {
        Frame {
            data: Vec::new(),
            ..Frame::new(title, section, "")
        }
    }

    /// The same frame, marked as demonstration data if it is.
    #[must_use]
    pub fn example(self, example: bool) -> Frame {
        let words =
            "Invented for demonstration: no figure on this page belongs to a real field, works or delivery.";
        Frame {
            example: if example { words } else { "" },
            ..self
        }
    }

    /// The same frame, where some of what it shows is demonstration data.
    #[must_use]
    pub fn partly_example(self, example: bool) -> Frame {
        let words = "Some of what stands here was invented for demonstration; it is marked as an example.";
        Frame {
            example: if example { words } else { "" },
            ..self
        }
    }

    /// The same frame for a page that prints in landscape.
    #[must_use]
    pub fn wide(self) -> Frame {
        Frame { wide: true, ..self }
    }

    /// The address of an embedded file.
    pub fn asset(&self, name: &str) -> &'static str {
        super::assets::url(name)
    }

    /// The slot of who looks at the page.
    pub fn visitor(&self) -> String {
        visitor::who_slot(match self.section {
            Section::Me => visitor::Place::Me,
            Section::People => visitor::Place::People,
            Section::SignIn => visitor::Place::SignIn,
            _ => visitor::Place::Elsewhere,
        })
    }

    /// The words of the navigation: address, word, whether this page is there.
    pub fn words(&self) -> [(&'static str, &'static str, bool); 7] {
        [
            ("/", "Pathways", self.section == Section::Pathways),
            ("/compare", "Compare", self.section == Section::Compare),
            (
                "/calculators",
                "Calculators",
                self.section == Section::Calculators,
            ),
            ("/factors", "Factors", self.section == Section::Factors),
            ("/evidence", "Evidence", self.section == Section::Evidence),
            ("/audit-trail", "Audit trail", self.section == Section::AuditTrail),
            ("/api", "API", self.section == Section::Api),
        ]
    }
}
