-- People, what they are to their organisation, what auditors from outside were invited to, sessions of browsers and tokens of
-- scripts. Of every secret only a hash is kept: argon2id for passwords, SHA-256 for what was drawn at random (256 bits).

CREATE TABLE person (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    public_id       TEXT    NOT NULL UNIQUE CHECK (length(public_id) = 36),
    name            TEXT    NOT NULL,
    sign_in_name    TEXT    NOT NULL UNIQUE,         -- small letters; one name, one person, in the whole service
    password_hash   TEXT,                            -- PHC text of argon2id; none: signs in elsewhere, or not yet
    must_change     INTEGER NOT NULL DEFAULT 0 CHECK (must_change IN (0, 1)),
    theme           TEXT    NOT NULL DEFAULT '' CHECK (theme IN ('', 'light', 'dark')),
    created_at      INTEGER NOT NULL,
    disabled_at     INTEGER
) STRICT;
CREATE INDEX person_in_order ON person (organisation_id, id);

-- Several rows a person: what they may do is the union.
CREATE TABLE member (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    person_id       INTEGER NOT NULL REFERENCES person (id),
    role            TEXT    NOT NULL CHECK (role IN ('administrator', 'preparer', 'approver', 'viewer', 'auditor')),
    until           INTEGER,                         -- end of an auditor's invitation
    given_at        INTEGER NOT NULL,
    UNIQUE (person_id, organisation_id, role),
    CHECK ((role = 'auditor') = (until IS NOT NULL))
) STRICT;
CREATE INDEX member_in_order ON member (organisation_id, person_id);

-- What an auditor from outside was invited to look at.
CREATE TABLE invitation (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    person_id       INTEGER NOT NULL REFERENCES person (id),
    kind            TEXT    NOT NULL CHECK (kind IN ('pathway', 'statement')),
    thing           TEXT    NOT NULL CHECK (length(thing) = 36),
    until           INTEGER NOT NULL,
    UNIQUE (person_id, organisation_id, kind, thing)
) STRICT;
CREATE INDEX invitation_in_order ON invitation (organisation_id, person_id);

CREATE TABLE session (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    person_id       INTEGER NOT NULL REFERENCES person (id),
    secret_hash     TEXT    NOT NULL UNIQUE CHECK (length(secret_hash) = 64),
    name            TEXT    NOT NULL,                -- short and public: lists and the audit trail name it so
    created_at      INTEGER NOT NULL,
    expires_at      INTEGER NOT NULL,                -- at the latest; earlier when it is not used
    last_used_at    INTEGER NOT NULL,
    came_from       TEXT    NOT NULL                 -- address it was begun from
) STRICT;
CREATE INDEX session_of_person ON session (person_id, organisation_id);
CREATE INDEX session_by_end ON session (expires_at);

CREATE TABLE token (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    person_id       INTEGER NOT NULL REFERENCES person (id),
    public_id       TEXT    NOT NULL UNIQUE CHECK (length(public_id) = 36),
    secret_hash     TEXT    NOT NULL UNIQUE CHECK (length(secret_hash) = 64),
    label           TEXT    NOT NULL,
    scopes          TEXT    NOT NULL,                -- names of rights, a space between
    created_at      INTEGER NOT NULL,
    expires_at      INTEGER NOT NULL,
    last_used_at    INTEGER,                         -- to the minute
    revoked_at      INTEGER
) STRICT;
CREATE INDEX token_of_person ON token (person_id, organisation_id);

CREATE TRIGGER person_keeps_its_identity
BEFORE UPDATE OF id, organisation_id, public_id, created_at ON person
BEGIN
    SELECT RAISE(ABORT, 'a person keeps their identity');
END;

-- The audit trail and statements name people for good.
CREATE TRIGGER person_is_never_deleted
BEFORE DELETE ON person
BEGIN
    SELECT RAISE(ABORT, 'a person is disabled, never deleted');
END;

CREATE TRIGGER session_keeps_its_identity
BEFORE UPDATE OF id, organisation_id, person_id, secret_hash, name, created_at, expires_at ON session
BEGIN
    SELECT RAISE(ABORT, 'a session belongs to whom it was made for');
END;

CREATE TRIGGER token_keeps_its_identity
BEFORE UPDATE OF id, organisation_id, person_id, public_id, secret_hash, label, scopes, created_at, expires_at ON token
BEGIN
    SELECT RAISE(ABORT, 'a token stays what it was made');
END;

CREATE TRIGGER token_stays_revoked
BEFORE UPDATE OF revoked_at ON token WHEN OLD.revoked_at IS NOT NULL
BEGIN
    SELECT RAISE(ABORT, 'a revoked token stays revoked');
END;

CREATE TRIGGER token_is_never_deleted
BEFORE DELETE ON token
BEGIN
    SELECT RAISE(ABORT, 'a token is revoked, never deleted');
END;
