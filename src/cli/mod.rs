//! The command line: what it takes, what it prints, and how it ends. Results go to standard output, everything else to
//! standard error.

mod backup;
mod check;
mod demo;
mod evaluate;
mod health;
mod people;
mod serve;
mod verify;

use crate::config::{ConfigError, Given};
use crate::web::router;
use clap::{Args, Parser, Subcommand};
use std::io::Write;
use std::path::PathBuf;
use std::process::ExitCode;

/// Something could not be done: an address in use, a folder that cannot be written.
const COULD_NOT: u8 = 1;
/// What was given is wrong: a document, a setting, the command line itself.
const WRONG: u8 = 2;

const EXAMPLES: &str = "\
Examples:
  wheelwort demo                            look around in invented data; nothing is kept
  wheelwort serve --data /var/lib/wheelwort keep pathways in that folder
  wheelwort people --help                   make accounts, reset passwords, print tokens
  wheelwort evaluate wheat.json             print the assessment of a pathway file
  wheelwort evaluate - < wheat.json         the same from standard input
  wheelwort verify WW-2026-0031.json        check a statement file
  wheelwort backup --data data today.zip    everything in that folder, as one file
  wheelwort check --data data               is what is stored still what was stored?

Exit codes: 0 done; 1 it could not be done (an address in use, a folder that cannot be written);
2 what was given is wrong (a document, a setting, the command line).

Settings may also stand in a TOML file (--config) and in the environment (WHEELWORT_LISTEN and so on);
the command line wins over the environment, and the environment over the file.";

const SERVE_EXAMPLES: &str = "\
Examples:
  wheelwort serve --data data               on http://127.0.0.1:8080, for this machine alone
  wheelwort serve --data data --listen 127.0.0.1:0
                                            on a free port; its address is printed
  WHEELWORT_LOG=debug wheelwort serve       log more, to standard error

Prints its address on standard output once it answers. Stops on SIGINT or SIGTERM: it takes no new
requests, finishes those that run, and closes its data.
Exit codes: 0 stopped when asked; 1 it could not start; 2 a setting is wrong.";

const SETTINGS_EXAMPLES: &str = "\
Examples:
  wheelwort settings                        every setting: value, who gave it, what it may be, what it means
  wheelwort settings --config wheelwort.toml --set connections=200
                                            the same with a file and one more word

Takes what serve takes and checks it as serve does; secrets are hidden.
Exit codes: 0 the settings hold; 2 one is wrong.";

const HEALTH_EXAMPLES: &str = "\
Examples:
  wheelwort health                          the service that the settings of this machine describe
  wheelwort health --url http://127.0.0.1:8080/health/ready

For containers and whatever else watches a service; needs no other program.
Exit codes: 0 it can; 1 it cannot, or does not answer in 5 seconds; 2 the address or a setting is wrong.";

const DEMO_EXAMPLES: &str = "\
Examples:
  wheelwort demo                            on http://127.0.0.1:8080
  wheelwort demo --listen 127.0.0.1:0       on a free port

Everything in it is invented. It lies in a temporary folder that goes when the program stops.
Exit codes: 0 stopped when asked; 1 it could not start; 2 a setting is wrong.";

const EVALUATE_EXAMPLES: &str = "\
Examples:
  wheelwort evaluate wheat.json             the assessment, as JSON
  wheelwort evaluate a.json b.json          one assessment a line, in the order of the files
  wheelwort evaluate --rule-set eu-2018-2001 - < wheat.json
                                            under another rule set than the file names

All files are evaluated before anything is printed: if one is wrong, nothing is printed on standard
output, and standard error holds one line for each error: where (a JSON pointer), what, and the remedy;
with several files the name of the file comes first.
Exit codes: 0 printed; 2 a file is wrong or cannot be read.";

const VERIFY_EXAMPLES: &str = "\
Examples:
  wheelwort verify WW-2026-0031.json        work every figure out again, check hash and signature
  wheelwort verify --key issuer.keys *.json against the keys that the issuer publishes, and as a series

Needs nothing but the files. Prints a verdict a line; what else there is to know goes to standard error.
Without --key a file vouches for its own key: compare its id with the one the issuer publishes.
Exit codes: 0 verified; 1 something does not hold (the first thing is named); 2 a file cannot be read.";
const CHECK_EXAMPLES: &str = "\
Examples:
  wheelwort check --data data               also while the service runs

Looks at the file, every revision against its hash, the audit trail link by link, and every file of evidence
against its hash, and changes nothing. Evidence that is kept elsewhere is read there: give the settings of the service.
One line on standard output for each finding, then a closing line; it names where the audit trail ends: noted
elsewhere, that shows later whether the trail was cut.
Exit codes: 0 sound; 1 not sound, or not to be read.";

const BACKUP_EXAMPLES: &str = "\
Examples:
  wheelwort backup --data data today.zip    also while the service runs

Writes one ZIP file with the database as it stands at one moment, the files of evidence, and a manifest with the
SHA-256 of each. A file that is there already is left alone.
Exit codes: 0 written; 1 it could not be done, and nothing was written.";

const RESTORE_EXAMPLES: &str = "\
Examples:
  wheelwort restore today.zip --data data   into a folder that is empty or not there yet

Holds every file against the manifest first; the folder gets its name when all of it is on the disk.
Exit codes: 0 restored; 1 it could not be done, and the folder is as it was.";

/// Well-to-wheel greenhouse-gas accounting of fuel ethanol.
#[derive(Debug, Parser)]
#[command(name = "wheelwort", version, about, after_help = EXAMPLES, arg_required_else_help = true)]
struct Cli {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Serve pages and the API, and keep the data in a folder.
    #[command(after_help = SERVE_EXAMPLES)]
    Serve(Serve),
    /// Serve invented data, to look around in.
    #[command(after_help = DEMO_EXAMPLES)]
    Demo(Demo),
    /// Print the assessment of pathway files.
    #[command(after_help = EVALUATE_EXAMPLES)]
    Evaluate(evaluate::Evaluate),
    /// Make, list and change accounts, on the machine that holds the data.
    #[command(after_help = people::EXAMPLES)]
    People(people::People),
    /// Print the settings that `serve` would run with, and who gave each.
    #[command(after_help = SETTINGS_EXAMPLES)]
    Settings(Serve),
    /// Ask a running service whether it can do its work.
    #[command(after_help = HEALTH_EXAMPLES)]
    Health(health::Health),
    /// Check statement files: figures, published data, hash, signature, series.
    #[command(after_help = VERIFY_EXAMPLES)]
    Verify(verify::Verify),
    /// Look whether stored data are still what was stored.
    #[command(after_help = CHECK_EXAMPLES)]
    Check(Check),
    /// Back up the data of a folder into one file.
    #[command(after_help = BACKUP_EXAMPLES)]
    Backup(Backup),
    /// Bring a backup back into an empty folder.
    #[command(after_help = RESTORE_EXAMPLES)]
    Restore(Backup),
    /// Print the description of the API (OpenAPI 3.1).
    Openapi,
}

#[derive(Debug, Args)]
struct Serve {
    /// Folder of the data; made where there is none. `data` when left out.
    #[arg(long, value_name = "DIR")]
    data: Option<PathBuf>,
    #[command(flatten)]
    common: Common,
}

#[derive(Debug, Args)]
struct Data {
    /// Folder of the data.
    #[arg(long, value_name = "DIR", env = "WHEELWORT_DATA", default_value = "data")]
    data: PathBuf,
}

#[derive(Debug, Args)]
struct Check {
    #[command(flatten)]
    data: Data,
    /// File of settings, in TOML: says where evidence is kept, if elsewhere.
    #[arg(long, value_name = "FILE")]
    config: Option<PathBuf>,
}

#[derive(Debug, Args)]
struct Backup {
    #[command(flatten)]
    data: Data,
    /// The backup.
    #[arg(value_name = "FILE")]
    file: PathBuf,
}

#[derive(Debug, Args)]
struct Demo {
    #[command(flatten)]
    common: Common,
}

#[derive(Debug, Args)]
struct Common {
    /// Address to listen on; 127.0.0.1:8080 when left out. Port 0 takes a free one.
    #[arg(long, value_name = "ADDR")]
    listen: Option<String>,
    /// File of settings, in TOML.
    #[arg(long, value_name = "FILE")]
    config: Option<PathBuf>,
    /// Any other setting by its name; may be given several times. `wheelwort settings` lists them.
    #[arg(long, value_name = "NAME=VALUE", value_parser = name_and_value)]
    set: Vec<(String, String)>,
}

/// What all sources say of the settings of a command.
fn given(data: Option<PathBuf>, common: Common) -> Result<Given, ConfigError> {
    let file = common
        .config
        .as_deref()
        .map(Given::from_file)
        .transpose()?
        .unwrap_or_default();
    let variables = std::env::vars_os()
        .filter_map(|(name, value)| Some((name.into_string().ok()?, value.into_string().ok()?)));
    let environment = Given::from_environment(variables)?;
    let data = data.map(|data| ("data".to_owned(), data.display().to_string()));
    let listen = common.listen.map(|listen| ("listen".to_owned(), listen));
    let line = Given::from_line(common.set.into_iter().chain(data).chain(listen))?;
    Ok(file.overlaid(environment).overlaid(line))
}

/// The settings of a command, checked.
fn settings(data: Option<PathBuf>, common: Common) -> Result<crate::config::Config, ConfigError> {
    given(data, common)?.checked()
}

/// Prints what is in force and who said so, if it holds.
fn print_settings(Serve { data, common }: Serve) -> u8 {
    match given(data, common).and_then(|given| given.checked().map(|_| given.table())) {
        Ok(table) => print(table.as_bytes()),
        Err(error) => {
            say(&format!("wheelwort: {:#}", anyhow::Error::from(error)));
            WRONG
        }
    }
}

/// Reads `NAME=VALUE`.
fn name_and_value(text: &str) -> Result<(String, String), String> {
    let (name, value) = text.split_once('=').ok_or("give NAME=VALUE")?;
    Ok((name.into(), value.into()))
}

/// Runs the command of the command line.
pub fn main() -> ExitCode {
    // Prints help and version itself, and ends with 2 on a wrong command line.
    let code = match Cli::parse().command {
        Command::Serve(Serve { data, common }) => with_settings(settings(data, common), serve::run),
        Command::Demo(Demo { common }) => with_settings(settings(None, common), demo::run),
        Command::Evaluate(command) => evaluate::run(&command),
        Command::People(command) => people::run(&command),
        Command::Settings(command) => print_settings(command),
        Command::Health(command) => health::run(command),
        Command::Verify(command) => verify::run(&command),
        Command::Check(Check { data, config }) => {
            let common = Common {
                listen: None,
                config,
                set: Vec::new(),
            };
            match settings(Some(data.data), common) {
                Ok(settings) => check::run(&settings),
                Err(error) => {
                    say(&format!("wheelwort: {:#}", anyhow::Error::from(error)));
                    COULD_NOT
                }
            }
        }
        Command::Backup(Backup { data, file }) => backup::run(&data.data, &file),
        Command::Restore(Backup { data, file }) => backup::restore(&file, &data.data),
        Command::Openapi => print(router::description().bytes()),
    };
    ExitCode::from(code)
}

fn with_settings(
    settings: Result<crate::config::Config, ConfigError>,
    run: fn(&crate::config::Config) -> anyhow::Result<()>,
) -> u8 {
    match settings {
        Err(error) => {
            say(&format!("wheelwort: {:#}", anyhow::Error::from(error)));
            WRONG
        }
        Ok(settings) => match run(&settings) {
            Ok(()) => 0,
            Err(error) => {
                say(&format!("wheelwort: {error:#}"));
                COULD_NOT
            }
        },
    }
}

/// Prints bytes and a line end on standard output. A reader that has gone is no error.
fn print(bytes: &[u8]) -> u8 {
    let mut out = std::io::stdout().lock();
    let written = out
        .write_all(bytes)
        .and_then(|()| out.write_all(b"\n"))
        .and_then(|()| out.flush());
    match written {
        Err(error) if error.kind() != std::io::ErrorKind::BrokenPipe => COULD_NOT,
        _ => 0,
    }
}

/// One line on standard error, whatever the text holds.
fn say(text: &str) {
    let plain: String = text
        .chars()
        .map(|c| if c.is_control() { ' ' } else { c })
        .collect();
    let _ = writeln!(std::io::stderr().lock(), "{plain}");
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::CommandFactory;

    #[test]
    fn the_command_line_holds_together() {
        Cli::command().debug_assert();
    }
}
