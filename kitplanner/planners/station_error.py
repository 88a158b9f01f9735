"""The fault of a station without a chain, apart from the chain itself so that it can be caught without loading it."""


class StationError(ValueError):
    """A station that has no chain: the message is one sentence with place, reason and remedy."""
