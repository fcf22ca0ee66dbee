//! What every use case gets: the store, the clock, the published data, and on whose behalf records are kept.

pub(crate) mod doors;
pub mod who;

use crate::clock::Clock;
use crate::core::checks::settings::Settings as CheckSettings;
use crate::core::documents::{Assessment, Pathway, Problems};
use crate::core::domain::Book;
use crate::core::evaluate::{Options, evaluate};
use crate::store::memory::Memory;
use crate::store::{Settings, Store, StoreError};
use doors::Doors;
use std::ops::Deref;
use std::path::Path;
use std::sync::Arc;
use who::Who;

pub use crate::config::{EvidenceStore, S3};
pub use crate::core::engine::assess::PROGRAM;
pub use crate::store::OrganisationId;

/// The accounting as a value, so that tests of the shell can bring their own.
pub type Evaluate = fn(&Pathway, &Book, Options<'_>) -> Result<Assessment, Problems>;

/// Published data, alone or with what an organisation adds. Cheap to clone.
#[derive(Clone, Debug)]
pub enum SharedBook {
    /// As published.
    Published(&'static Book),
    /// With rule sets of one's own.
    Own(Arc<Book>),
}

impl Deref for SharedBook {
    type Target = Book;

    fn deref(&self) -> &Book {
        match self {
            SharedBook::Published(book) => book,
            SharedBook::Own(book) => book,
        }
    }
}

/// What evaluations for an organisation rest on beside the document.
#[derive(Clone, Debug)]
pub struct Basis {
    /// Published data with the organisation's own rule sets: the newest version of each by its id, every version as
    /// `id@version`.
    pub book: SharedBook,
    /// Settings of the checks.
    pub settings: Arc<CheckSettings>,
    /// Hash of everything in it that is not standard; empty where all is.
    pub(crate) hash: Arc<str>,
    /// Hash of the settings of the checks; empty for the standard ones.
    pub(crate) settings_hash: Arc<str>,
    /// The last version of a rule set that is in it, by inner id.
    pub(crate) last_rule_set: i64,
    /// The last settings that are in it, by inner id.
    pub(crate) last_settings: i64,
}

impl Basis {
    /// What an evaluation is told: a rule set other than the document's, and the settings in force.
    pub fn options<'o>(&'o self, rule_set: Option<&'o str>) -> Options<'o> {
        Options {
            rule_set,
            settings: &self.settings,
            ..Options::default()
        }
    }
}

/// The running program. Cheap to clone; clones share everything.
#[derive(Clone)]
pub struct App {
    /// The database.
    pub store: Store,
    /// Time and ids.
    pub clock: Clock,
    /// Published data.
    pub library: &'static Book,
    /// Whose records are meant.
    pub organisation: OrganisationId,
    /// Who asks.
    pub who: Arc<Who>,
    /// The accounting.
    pub evaluate: Evaluate,
    /// Folder of the data.
    pub folder: Arc<Path>,
    /// Where the files of evidence are kept.
    pub evidence_store: Arc<EvidenceStore>,
    /// Immutable bytes at hand.
    pub(crate) memory: Arc<Memory>,
    /// Those who come in.
    pub(crate) doors: Arc<Doors>,
}

impl App {
    /// Opens the data file, making it where there is none.
    ///
    /// # Errors
    /// When the file cannot be opened, written or brought up to date.
    pub async fn open(file: &Path, clock: Clock, library: &'static Book) -> Result<App, StoreError> {
        App::open_with(file, clock, library, evaluate, Settings::default()).await
    }

    /// The same with another accounting and other settings of the store.
    ///
    /// # Errors
    /// When the file cannot be opened, written or brought up to date.
    pub async fn open_with(
        file: &Path,
        clock: Clock,
        library: &'static Book,
        evaluate: Evaluate,
        settings: Settings,
    ) -> Result<App, StoreError> {
        let store = Store::open_with(file, settings).await?;
        let organisation = match store
            .first_organisation(clock.id(), "Own organisation", clock.millis())
            .await
        {
            Ok(organisation) => organisation,
            Err(error) => {
                store.close().await;
                return Err(error);
            }
        };
        Ok(App {
            doors: Arc::new(Doors::new(&clock)),
            store,
            clock,
            library,
            organisation,
            who: Arc::new(Who::command()),
            evaluate,
            folder: folder_of(file),
            evidence_store: Arc::default(),
            memory: Arc::new(Memory::default()),
        })
    }

    /// The same program with its files of evidence kept elsewhere.
    pub fn keeping_evidence_in(self, store: EvidenceStore) -> App {
        App {
            evidence_store: Arc::new(store),
            ..self
        }
    }

    /// Does the accounting of a document.
    ///
    /// # Errors
    /// Every problem of the document.
    pub fn evaluates(
        &self,
        pathway: &Pathway,
        book: &Book,
        options: Options<'_>,
    ) -> Result<Assessment, Problems> {
        metrics::counter!("wheelwort_evaluations_total").increment(1);
        (self.evaluate)(pathway, book, options)
    }

    /// Opens a data file that is there, to look at it and change nothing; on behalf of nobody until
    /// [`App::on_behalf_of`] says whom.
    ///
    /// # Errors
    /// When the file is not there, cannot be read, or belongs to another version of the program.
    pub async fn open_to_read(file: &Path, clock: Clock, library: &'static Book) -> Result<App, StoreError> {
        Ok(App {
            doors: Arc::new(Doors::new(&clock)),
            store: Store::open_to_read(file).await?,
            clock,
            library,
            organisation: OrganisationId::NOBODY,
            who: Arc::new(Who::command()),
            evaluate,
            folder: folder_of(file),
            evidence_store: Arc::default(),
            memory: Arc::new(Memory::default()),
        })
    }

    /// The same program on behalf of another organisation.
    pub fn on_behalf_of(&self, organisation: OrganisationId) -> App {
        App {
            organisation,
            ..self.clone()
        }
    }

    /// The same program, asked by somebody on behalf of their organisation.
    pub fn asked_by(&self, organisation: OrganisationId, who: Arc<Who>) -> App {
        App {
            organisation,
            who,
            ..self.clone()
        }
    }

    /// Finishes the writes that wait and closes the database.
    pub async fn close(&self) {
        self.store.close().await;
    }
}

/// The folder that a data file lies in.
fn folder_of(file: &Path) -> Arc<Path> {
    match file.parent() {
        Some(folder) if folder != Path::new("") => folder.into(),
        _ => Path::new(".").into(),
    }
}
