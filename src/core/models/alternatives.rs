//! Parameters that stand in for one another: a figure given whole, or by the parts it follows from.

use super::given::Given;

impl Given<'_> {
    /// Notes every one of `parts` that stands beside `whole`; true if none does.
    pub fn stands_alone(&mut self, whole: &str, parts: &[&str], remedy: &str) -> bool {
        let mut alone = true;
        for part in parts {
            if self.has(part) {
                alone = false;
                self.problem(part, format!("\"{part}\" stands beside \"{whole}\"."), remedy);
            }
        }
        alone
    }

    /// Notes every one of `parts` that is not given; `instead` says what would do in their place.
    pub fn need(&mut self, parts: &[&str], instead: &str) {
        for part in parts {
            if !self.has(part) {
                let remedy = format!("Add \"{part}\", or {instead}.");
                self.problem(part, format!("\"{part}\" is missing."), remedy);
            }
        }
    }
}
