-- Requests that carry an Idempotency-Key: what was asked, whether its change was made, and what was answered. Kept for a day.
-- `made` is set in the transaction of the change itself; the answer comes after it. A row without an answer whose request is
-- gone (the program was killed) therefore says whether the change was made.

CREATE TABLE idempotency (
    id              INTEGER PRIMARY KEY,
    organisation_id INTEGER NOT NULL REFERENCES organisation (id),
    person          TEXT    NOT NULL,                -- public id of the person; empty for the command line
    key             TEXT    NOT NULL,
    request         TEXT    NOT NULL CHECK (length(request) = 71),   -- hash of method, address, content type and body
    at              INTEGER NOT NULL,
    made            INTEGER NOT NULL DEFAULT 0 CHECK (made IN (0, 1)),
    status          INTEGER,                         -- of the answer; none while there is none
    headers         TEXT,                            -- those that are repeated, as a JSON object
    body            BLOB,                            -- none where the answer was too long to keep
    UNIQUE (organisation_id, person, key)
) STRICT;
CREATE INDEX idempotency_by_time ON idempotency (organisation_id, at);
