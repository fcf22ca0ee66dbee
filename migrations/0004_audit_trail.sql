-- Who did what, when, from where, why: one chain an organisation. A line is written in the transaction of the change it
-- records, carries the hash of the line before, and is never changed.

CREATE TABLE audit_line (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    number          INTEGER NOT NULL CHECK (number >= 1),   -- from 1, without gaps
    at              INTEGER NOT NULL,
    person          TEXT,                                    -- public id; none for the command line
    thing           TEXT    NOT NULL,                        -- kind of what was changed
    thing_id        TEXT    NOT NULL,
    did             TEXT    NOT NULL,
    document        TEXT    NOT NULL,                        -- canonical bytes (RFC 8785): the record
    hash            TEXT    NOT NULL CHECK (length(hash) = 71),
    UNIQUE (organisation_id, number)
) STRICT;
CREATE INDEX audit_line_by_thing ON audit_line (organisation_id, thing, thing_id, number);
CREATE INDEX audit_line_by_person ON audit_line (organisation_id, person, number);

-- Where each chain ends: what is missing at the end of a chain cannot be seen in the chain. Kept by the triggers below, in the
-- transaction of the line. Whoever can take lines off and set this back as well leaves no mark in the file: against that only a
-- number and a hash noted elsewhere help (an export, a backup, the closing line of `wheelwort check`).
CREATE TABLE audit_head (
    organisation_id INTEGER PRIMARY KEY REFERENCES organisation (id),
    number          INTEGER NOT NULL CHECK (number >= 1),
    hash            TEXT    NOT NULL CHECK (length(hash) = 71)
) STRICT;

CREATE TRIGGER audit_line_follows_the_last
BEFORE INSERT ON audit_line
WHEN NEW.number <> 1 + COALESCE((SELECT number FROM audit_head WHERE organisation_id = NEW.organisation_id), 0)
BEGIN
    SELECT RAISE(ABORT, 'a line of the audit trail follows the last one');
END;

CREATE TRIGGER audit_line_moves_the_head
AFTER INSERT ON audit_line
BEGIN
    INSERT INTO audit_head (organisation_id, number, hash) VALUES (NEW.organisation_id, NEW.number, NEW.hash)
    ON CONFLICT (organisation_id) DO UPDATE SET number = excluded.number, hash = excluded.hash;
END;

CREATE TRIGGER audit_head_only_goes_forward
BEFORE UPDATE ON audit_head WHEN NEW.number <> OLD.number + 1
BEGIN
    SELECT RAISE(ABORT, 'the head of the audit trail only goes forward');
END;

CREATE TRIGGER audit_head_is_never_deleted
BEFORE DELETE ON audit_head
BEGIN
    SELECT RAISE(ABORT, 'the head of the audit trail is never deleted');
END;

CREATE TRIGGER audit_line_never_changes
BEFORE UPDATE ON audit_line
BEGIN
    SELECT RAISE(ABORT, 'a line of the audit trail never changes');
END;

CREATE TRIGGER audit_line_is_never_deleted
BEFORE DELETE ON audit_line
BEGIN
    SELECT RAISE(ABORT, 'a line of the audit trail is never deleted');
END;
