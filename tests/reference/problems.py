"""What can stop a recomputation: a document this check does not cover, or one that is wrong."""


class Unsupported(Exception):
    """The document uses something this independent check does not recompute (exit 3)."""


class Refused(Exception):
    """The document breaks a rule of the accounting (exit 2). `where` is a JSON pointer or a key."""

    def __init__(self, where, why):
        super().__init__(f"{where}: {why}")
        self.where = where
        self.why = why
