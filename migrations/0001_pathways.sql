-- Pathways, their revisions, the rows written from a revision for search, and assessments kept beside it.
-- Time is milliseconds since 1970 UTC; booleans are 0 and 1; public ids are UUID version 7 as text.
-- A document is the record. Every other figure here is written from it and can be written again.

CREATE TABLE organisation (
    id         INTEGER PRIMARY KEY,
    public_id  TEXT    NOT NULL UNIQUE CHECK (length(public_id) = 36),
    name       TEXT    NOT NULL,
    created_at INTEGER NOT NULL
) STRICT;

CREATE TABLE pathway (
    id               INTEGER PRIMARY KEY,
    organisation_id  INTEGER NOT NULL REFERENCES organisation (id),
    public_id        TEXT    NOT NULL UNIQUE CHECK (length(public_id) = 36),
    name             TEXT    NOT NULL,
    name_folded      TEXT    NOT NULL,               -- small letters, for search and order
    feedstock        TEXT    NOT NULL,
    rule_set         TEXT    NOT NULL,
    example          INTEGER NOT NULL CHECK (example IN (0, 1)),
    current_revision INTEGER NOT NULL CHECK (current_revision >= 1),
    created_at       INTEGER NOT NULL,
    updated_at       INTEGER NOT NULL,
    archived_at      INTEGER                         -- hidden from lists, never removed
) STRICT;
CREATE INDEX pathway_in_order ON pathway (organisation_id, id);
CREATE INDEX pathway_by_update ON pathway (organisation_id, updated_at, public_id);
CREATE INDEX pathway_by_name ON pathway (organisation_id, name_folded, public_id);

-- The immutable record: the canonical bytes (RFC 8785), their hash, and why they were saved.
CREATE TABLE revision (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    pathway_id      INTEGER NOT NULL REFERENCES pathway (id) ON DELETE CASCADE,
    number          INTEGER NOT NULL CHECK (number >= 1),
    document        TEXT    NOT NULL,
    hash            TEXT    NOT NULL CHECK (length(hash) = 71),
    rule_set        TEXT    NOT NULL,
    example         INTEGER NOT NULL CHECK (example IN (0, 1)),
    saved_at        INTEGER NOT NULL,
    reason          TEXT,
    UNIQUE (pathway_id, number)
) STRICT;

CREATE TABLE stage (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    revision_id     INTEGER NOT NULL REFERENCES revision (id) ON DELETE CASCADE,
    position        INTEGER NOT NULL,
    key             TEXT    NOT NULL,
    kind            TEXT    NOT NULL,
    name            TEXT,
    material        TEXT    NOT NULL,
    amount          REAL,
    unit            TEXT,
    UNIQUE (revision_id, key)
) STRICT;

CREATE TABLE intake (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    revision_id     INTEGER NOT NULL,
    stage_key       TEXT    NOT NULL,
    position        INTEGER NOT NULL,
    source          TEXT    NOT NULL,                -- key of the stage it takes from
    product         TEXT,                            -- key of a co-product of that stage; none for its output
    amount          REAL,
    unit            TEXT,
    UNIQUE (revision_id, stage_key, position),
    FOREIGN KEY (revision_id, stage_key) REFERENCES stage (revision_id, key) ON DELETE CASCADE
) STRICT;

CREATE TABLE input (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    revision_id     INTEGER NOT NULL,
    stage_key       TEXT    NOT NULL,
    position        INTEGER NOT NULL,
    key             TEXT    NOT NULL,
    label           TEXT,
    way             TEXT    NOT NULL CHECK (way IN ('factor', 'gases', 'model')),
    model           TEXT,                            -- kind of the model
    factors         TEXT    NOT NULL,                -- ids of its factors in order, a space between; own factors have none
    amount          REAL,                            -- as entered
    unit            TEXT,                            -- as entered
    origin          TEXT,
    UNIQUE (revision_id, stage_key, key),
    FOREIGN KEY (revision_id, stage_key) REFERENCES stage (revision_id, key) ON DELETE CASCADE
) STRICT;

CREATE TABLE co_product (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    revision_id     INTEGER NOT NULL,
    stage_key       TEXT    NOT NULL,
    position        INTEGER NOT NULL,
    key             TEXT    NOT NULL,
    name            TEXT    NOT NULL,
    role            TEXT    NOT NULL CHECK (role IN ('co_product', 'residue', 'waste')),
    material        TEXT    NOT NULL,
    amount          REAL,
    unit            TEXT,
    UNIQUE (revision_id, stage_key, key),
    FOREIGN KEY (revision_id, stage_key) REFERENCES stage (revision_id, key) ON DELETE CASCADE
) STRICT;

-- Each place of a revision that names a published row: factors of inputs, vehicles, fuels and stacks of models,
-- what a co-product displaces, default values of the whole pathway.
CREATE TABLE factor_use (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    revision_id     INTEGER NOT NULL REFERENCES revision (id) ON DELETE CASCADE,
    factor          TEXT    NOT NULL,                -- edition/row
    pointer         TEXT    NOT NULL,                -- where the document names it, as a JSON pointer
    stage_key       TEXT,
    input_key       TEXT,
    co_product_key  TEXT,
    UNIQUE (revision_id, pointer)
) STRICT;
-- The factor first: an index that began with the organisation would be taken for searches by revision as well.
CREATE INDEX factor_use_by_factor ON factor_use (factor, organisation_id);

-- A cache: revision, rule set and program make the same bytes again.
CREATE TABLE assessment (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    revision_id     INTEGER NOT NULL REFERENCES revision (id) ON DELETE CASCADE,
    rule_set        TEXT    NOT NULL,
    program         TEXT    NOT NULL,
    document        TEXT    NOT NULL,
    hash            TEXT    NOT NULL CHECK (length(hash) = 71),
    net             REAL    NOT NULL,                -- g CO2e/MJ
    saving          REAL,                            -- %
    thresholds      TEXT    NOT NULL,                -- JSON as the assessment prints it
    blocks          INTEGER NOT NULL,                -- findings by severity
    warnings        INTEGER NOT NULL,
    infos           INTEGER NOT NULL,
    made_at         INTEGER NOT NULL,
    UNIQUE (revision_id, rule_set, program)
) STRICT;

CREATE TRIGGER pathway_keeps_its_identity
BEFORE UPDATE OF id, organisation_id, public_id, created_at ON pathway
BEGIN
    SELECT RAISE(ABORT, 'a pathway keeps its identity');
END;

CREATE TRIGGER pathway_only_goes_forward
BEFORE UPDATE OF current_revision ON pathway WHEN NEW.current_revision < OLD.current_revision
BEGIN
    SELECT RAISE(ABORT, 'a pathway only goes forward');
END;

-- Demonstration data can be removed whole; nothing else can.
CREATE TRIGGER pathway_is_never_deleted
BEFORE DELETE ON pathway WHEN OLD.example = 0
BEGIN
    SELECT RAISE(ABORT, 'a pathway is archived, never deleted');
END;

CREATE TRIGGER revision_never_changes
BEFORE UPDATE ON revision
BEGIN
    SELECT RAISE(ABORT, 'a revision never changes');
END;

-- The cascade from a removed example comes after its pathway is gone; a DELETE of one revision finds it there.
CREATE TRIGGER revision_is_never_deleted
BEFORE DELETE ON revision
WHEN OLD.example = 0 OR EXISTS (SELECT 1 FROM pathway WHERE pathway.id = OLD.pathway_id)
BEGIN
    SELECT RAISE(ABORT, 'a revision is never deleted');
END;
