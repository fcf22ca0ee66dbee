-- Files that back figures, and where revisions name them. The bytes lie outside, under their hash: the same bytes once,
-- whoever attached them. A record never changes; demonstration records go with the demonstration.

CREATE TABLE evidence (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    public_id       TEXT    NOT NULL CHECK (length(public_id) BETWEEN 1 AND 64),
    number          INTEGER CHECK (number >= 1),     -- of an id that was counted; none where one was wished
    file_name       TEXT    NOT NULL,                -- shown, never a path
    media_type      TEXT    NOT NULL,                -- as declared, for show alone
    size            INTEGER NOT NULL CHECK (size >= 0),
    hash            TEXT    NOT NULL CHECK (length(hash) = 71),
    note            TEXT,
    example         INTEGER NOT NULL CHECK (example IN (0, 1)),
    person          TEXT,                            -- public id; none for the command line
    by_name         TEXT    NOT NULL,                -- their name at the time
    attached_at     INTEGER NOT NULL,
    UNIQUE (organisation_id, public_id),
    UNIQUE (organisation_id, number)
) STRICT;
CREATE INDEX evidence_in_order ON evidence (organisation_id, id);
CREATE INDEX evidence_by_hash ON evidence (hash);

-- Each place of a revision that names evidence: written from its document, like the rows beside it.
CREATE TABLE evidence_use (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    revision_id     INTEGER NOT NULL REFERENCES revision (id) ON DELETE CASCADE,
    evidence        TEXT    NOT NULL,                -- public id
    pointer         TEXT    NOT NULL,                -- where the document names it, as a JSON pointer
    stage_key       TEXT,                            -- none where it backs an audit of the whole pathway
    input_key       TEXT,                            -- none where it backs a meter, an audit, or what a supplier stated
    UNIQUE (revision_id, pointer)
) STRICT;
-- The id first: an index that began with the organisation would be taken for searches by revision as well.
CREATE INDEX evidence_use_by_evidence ON evidence_use (evidence, organisation_id, revision_id);

CREATE TRIGGER evidence_never_changes
BEFORE UPDATE ON evidence
BEGIN
    SELECT RAISE(ABORT, 'evidence never changes');
END;

CREATE TRIGGER evidence_is_never_deleted
BEFORE DELETE ON evidence
WHEN OLD.example = 0 OR EXISTS (
    SELECT 1 FROM evidence_use u WHERE u.evidence = OLD.public_id AND u.organisation_id = OLD.organisation_id)
BEGIN
    SELECT RAISE(ABORT, 'evidence is never deleted');
END;

CREATE TRIGGER evidence_use_never_changes
BEFORE UPDATE ON evidence_use
BEGIN
    SELECT RAISE(ABORT, 'a place that names evidence never changes');
END;

CREATE TRIGGER evidence_use_is_never_deleted
BEFORE DELETE ON evidence_use
WHEN EXISTS (SELECT 1 FROM revision WHERE revision.id = OLD.revision_id)
BEGIN
    SELECT RAISE(ABORT, 'a place that names evidence is never deleted');
END;
