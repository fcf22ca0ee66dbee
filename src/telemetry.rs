//! The log: to standard error, so that standard output holds results alone.

use crate::config::LogFormat;
use std::io::IsTerminal;
use thiserror::Error;
use tracing_subscriber::EnvFilter;

/// The words that say what is logged do not hold.
#[derive(Debug, Error)]
#[error("the setting log is \"{0}\": give a level such as info, or parts such as wheelwort=debug,info")]
pub struct LogError(String);

/// Begins to log. A second call changes nothing.
///
/// # Errors
/// When `filter` cannot be read.
pub fn begin(filter: &str, format: LogFormat) -> Result<(), LogError> {
    let filter = EnvFilter::try_new(filter).map_err(|_| LogError(filter.into()))?;
    let log = tracing_subscriber::fmt()
        .with_env_filter(filter)
        .with_writer(std::io::stderr)
        .with_target(false);
    // Already begun: a test that calls twice keeps its first log.
    let _ = match format {
        LogFormat::Text => log.with_ansi(std::io::stderr().is_terminal()).try_init(),
        LogFormat::Json => log.json().try_init(),
    };
    Ok(())
}
