"""One case in, one `Result` out."""

from reactor.rating.whole import cited, rate, shipped

__all__ = ["cited", "rate", "shipped"]
