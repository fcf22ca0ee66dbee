//! What one input is priced from.

use crate::core::documents::input::Input;
use crate::core::documents::pathway::Stage;
use crate::core::documents::reader::Place;
use crate::core::models::Setting;

/// One input as entered, with the stage around it.
pub struct Entry<'a> {
    /// The stage it stands in.
    pub stage: &'a Stage,
    /// The input itself.
    pub document: &'a Input,
    /// What its stage and the pathway tell.
    pub setting: &'a Setting<'a>,
    /// Its place in the document.
    pub at: Place<'a>,
}
