//! What tests of the shell share: the real service on its own data, and documents, good and bad.

pub mod documents;
pub mod test_app;

pub use test_app::{Answer, TestApp, attach_text, client};
