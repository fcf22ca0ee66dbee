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
CREATE INDEX audit_line_by_time ON audit_line (organisation_id, at, number);

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
