//! `people`: accounts, made and changed by whoever can run the program on its data. Passwords come from standard input,
//! never from the command line, where other programs can read them.

use super::serve::{open, running};
use super::{COULD_NOT, WRONG, print, say};
use crate::app::App;
use crate::app::who::{Right, Role};
use crate::config::FirstAdministrator;
use crate::people::{self, NewPerson, NewToken, PeopleError};
use anyhow::{Context, bail};
use clap::{Args, Subcommand};
use std::collections::BTreeSet;
use std::io::{BufRead, IsTerminal, Read};
use std::path::PathBuf;

pub(super) const EXAMPLES: &str = "\
Examples:
  wheelwort people add --data data --name \"I. Marsh\" --sign-in-name marsh --role administrator --role preparer
                                            asks for the password twice; or give it on standard input
  wheelwort people list --data data         everybody, one a line
  wheelwort people reset-password --data data --sign-in-name marsh
                                            prints a password for the next sign-in
  wheelwort people disable --data data --sign-in-name marsh
  wheelwort people token --data data --sign-in-name marsh --label nightly --scope read --days 90
                                            prints a token, this once

Works while the service runs; it learns of a change within a second.
Exit codes: 0 done; 1 it could not be done; 2 what was given is wrong.";

/// Make, list and change accounts.
#[derive(Debug, Args)]
pub(super) struct People {
    #[command(subcommand)]
    what: What,
}

#[derive(Debug, Subcommand)]
enum What {
    /// Add a person; the password is read from standard input.
    Add {
        #[command(flatten)]
        data: Data,
        /// Name, as pages and documents show it.
        #[arg(long)]
        name: String,
        /// Name to sign in with.
        #[arg(long)]
        sign_in_name: String,
        /// What they are: administrator, preparer, approver, viewer. May be given more than once.
        #[arg(long = "role", required = true, value_parser = role)]
        roles: Vec<Role>,
    },
    /// Print everybody.
    List {
        #[command(flatten)]
        data: Data,
    },
    /// Print a password for the next sign-in; sessions end.
    ResetPassword {
        #[command(flatten)]
        one: One,
        /// Revoke every token of theirs too.
        #[arg(long)]
        revoke_tokens: bool,
    },
    /// Keep a person out: sessions end, tokens are refused.
    Disable {
        #[command(flatten)]
        one: One,
        /// Let them in again.
        #[arg(long)]
        undo: bool,
    },
    /// Print a token for scripts, this once.
    Token {
        #[command(flatten)]
        one: One,
        /// What it is for.
        #[arg(long)]
        label: String,
        /// What it may do: read, write, approve. May be given more than once.
        #[arg(long = "scope", required = true, value_parser = scope)]
        scopes: Vec<Right>,
        /// For how many days it is good.
        #[arg(long, default_value_t = 90)]
        days: u32,
    },
}

#[derive(Debug, Args)]
struct Data {
    /// Folder of the data; `data` when left out.
    #[arg(
        long = "data",
        value_name = "DIR",
        default_value = "data",
        env = "WHEELWORT_DATA"
    )]
    folder: PathBuf,
}

#[derive(Debug, Args)]
struct One {
    #[command(flatten)]
    data: Data,
    /// The name they sign in with.
    #[arg(long)]
    sign_in_name: String,
}

fn role(name: &str) -> Result<Role, String> {
    match Role::of(name) {
        Some(Role::Auditor) => Err("an auditor from outside is invited on the page /people".into()),
        Some(role) => Ok(role),
        None => Err("give administrator, preparer, approver or viewer".into()),
    }
}

fn scope(name: &str) -> Result<Right, String> {
    [Right::Read, Right::Write, Right::Approve]
        .into_iter()
        .find(|right| right.name() == name)
        .ok_or_else(|| "give read, write or approve".into())
}

/// Does what was asked.
pub(super) fn run(command: &People) -> u8 {
    let folder = match &command.what {
        What::Add { data, .. } | What::List { data } => data,
        What::ResetPassword { one, .. } | What::Disable { one, .. } | What::Token { one, .. } => &one.data,
    };
    // Read before the data is opened: somebody may take a while to type it.
    let password = match &command.what {
        What::Add { .. } => match password() {
            Ok(password) => password,
            Err(error) => {
                say(&format!("wheelwort: {error:#}"));
                return WRONG;
            }
        },
        _ => String::new(),
    };
    let work = async {
        let adds = matches!(command.what, What::Add { .. });
        if adds {
            std::fs::create_dir_all(&folder.folder)
                .with_context(|| format!("the folder {} cannot be made", folder.folder.display()))?;
        }
        let app = open(&folder.folder).await?;
        let done = work(&app, &command.what, password).await;
        app.close().await;
        done
    };
    match running(work) {
        Ok(()) => 0,
        Err(error) => {
            let wrong = matches!(
                error.downcast_ref(),
                Some(PeopleError::Problems(_) | PeopleError::NotFound | PeopleError::LastAdministrator)
            );
            match error.downcast_ref() {
                Some(PeopleError::Problems(problems)) => {
                    for problem in problems.list() {
                        say(&format!("wheelwort: {problem}"));
                    }
                }
                _ => say(&format!("wheelwort: {error:#}")),
            }
            if wrong { WRONG } else { COULD_NOT }
        }
    }
}

async fn work(app: &App, what: &What, password: String) -> anyhow::Result<()> {
    match what {
        What::Add {
            name,
            sign_in_name,
            roles,
            ..
        } => {
            let new = NewPerson {
                name: name.clone(),
                sign_in_name: sign_in_name.clone(),
                roles: roles.iter().copied().collect(),
                audit: None,
                password: Some(password),
            };
            let added = people::add(app, new).await?;
            print(added.person.id.to_string().as_bytes());
        }
        What::List { .. } => {
            for person in people::people(app).await? {
                let state = if person.disabled_at.is_some() {
                    "disabled"
                } else {
                    ""
                };
                let line = format!(
                    "{}\t{}\t{}\t{state}",
                    person.sign_in_name,
                    person.name,
                    person.roles.join(",")
                );
                print(line.trim_end().as_bytes());
            }
        }
        What::ResetPassword { one, revoke_tokens } => {
            let person = people::by_sign_in_name(app, &one.sign_in_name).await?;
            let new = people::reset_password(app, person.id, None, *revoke_tokens).await?;
            print(new.as_bytes());
        }
        What::Disable { one, undo } => {
            let person = people::by_sign_in_name(app, &one.sign_in_name).await?;
            people::disable(app, person.id, !undo).await?;
        }
        What::Token {
            one,
            label,
            scopes,
            days,
        } => {
            let person = people::by_sign_in_name(app, &one.sign_in_name).await?;
            let new = NewToken {
                label: label.clone(),
                scopes: scopes.iter().copied().collect::<BTreeSet<_>>(),
                days: *days,
            };
            let made = people::make_token(app, Some(person.id), new).await?;
            print(made.token.as_bytes());
        }
    }
    Ok(())
}

/// A password from standard input: twice from a terminal, once from anything else.
fn password() -> anyhow::Result<String> {
    let input = std::io::stdin();
    let mut line = String::new();
    if !input.is_terminal() {
        // More than a password can be is none.
        input
            .lock()
            .take(4_096)
            .read_line(&mut line)
            .context("standard input cannot be read")?;
        return Ok(line.trim_end_matches(['\r', '\n']).to_owned());
    }
    say("Password (at least 12 letters; it is shown while you type):");
    input
        .lock()
        .read_line(&mut line)
        .context("the terminal cannot be read")?;
    say("Once more:");
    let mut again = String::new();
    input
        .lock()
        .read_line(&mut again)
        .context("the terminal cannot be read")?;
    if line != again {
        bail!("the two passwords differ");
    }
    Ok(line.trim_end_matches(['\r', '\n']).to_owned())
}

/// Is there anybody who could sign in?
pub(super) async fn anybody(app: &App) -> anyhow::Result<bool> {
    Ok(people::anybody(app).await?)
}

/// Makes the first administrator that the settings name: for containers, where nobody types.
pub(super) async fn first_of_settings(app: &App, first: &FirstAdministrator) -> anyhow::Result<()> {
    match people::first_administrator(app, &first.name, first.password.reveal().to_owned()).await {
        Ok(true) => {
            say(&format!(
                "The first administrator is made: {}, as the settings say.",
                first.name
            ));
            Ok(())
        }
        Ok(false) => Ok(()),
        Err(PeopleError::Problems(problems)) => {
            let words: Vec<_> = problems.list().iter().map(ToString::to_string).collect();
            bail!("the first administrator cannot be made: {}", words.join("; "))
        }
        Err(error) => Err(error.into()),
    }
}
