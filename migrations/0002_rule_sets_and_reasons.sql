-- What an organisation adds to the published rules: rule sets of its own, tolerances of the checks, written reasons for
-- warnings. All three only grow: a row is a version, the last one counts.

-- A version of a rule set of one's own: the canonical bytes (RFC 8785) and their hash.
CREATE TABLE own_rule_set (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    name            TEXT    NOT NULL,                -- its id in documents
    version         TEXT    NOT NULL,
    document        TEXT    NOT NULL,
    hash            TEXT    NOT NULL CHECK (length(hash) = 71),
    saved_at        INTEGER NOT NULL,
    UNIQUE (organisation_id, name, version)
) STRICT;
CREATE INDEX own_rule_set_in_order ON own_rule_set (organisation_id, id);

-- What the checks tolerate for an organisation; where it has no row, the standard settings.
CREATE TABLE check_settings (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    document        TEXT    NOT NULL,
    hash            TEXT    NOT NULL CHECK (length(hash) = 71),
    saved_at        INTEGER NOT NULL
) STRICT;
CREATE INDEX check_settings_in_order ON check_settings (organisation_id, id);

-- The reasons of a pathway: the whole list each time it is saved.
CREATE TABLE reasons (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    pathway_id      INTEGER NOT NULL REFERENCES pathway (id) ON DELETE CASCADE,
    number          INTEGER NOT NULL CHECK (number >= 1),
    document        TEXT    NOT NULL,
    hash            TEXT    NOT NULL CHECK (length(hash) = 71),
    saved_at        INTEGER NOT NULL,
    UNIQUE (pathway_id, number)
) STRICT;

-- The settings of the checks that an assessment was made with: the hash of their document, empty for the standard ones.
ALTER TABLE assessment ADD COLUMN settings TEXT NOT NULL DEFAULT '';

CREATE TRIGGER own_rule_set_never_changes
BEFORE UPDATE ON own_rule_set
BEGIN
    SELECT RAISE(ABORT, 'a version of a rule set never changes');
END;

CREATE TRIGGER own_rule_set_is_never_deleted
BEFORE DELETE ON own_rule_set
BEGIN
    SELECT RAISE(ABORT, 'a version of a rule set is never deleted');
END;

CREATE TRIGGER check_settings_never_change
BEFORE UPDATE ON check_settings
BEGIN
    SELECT RAISE(ABORT, 'settings never change, new ones are added');
END;

CREATE TRIGGER check_settings_are_never_deleted
BEFORE DELETE ON check_settings
BEGIN
    SELECT RAISE(ABORT, 'settings are never deleted');
END;

CREATE TRIGGER reasons_never_change
BEFORE UPDATE ON reasons
BEGIN
    SELECT RAISE(ABORT, 'reasons never change, new ones are added');
END;

-- Those of a removed example go after its pathway is gone.
CREATE TRIGGER reasons_are_never_deleted
BEFORE DELETE ON reasons
WHEN EXISTS (SELECT 1 FROM pathway WHERE pathway.id = OLD.pathway_id)
BEGIN
    SELECT RAISE(ABORT, 'reasons are never deleted');
END;
