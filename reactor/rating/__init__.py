"""One case in, one `Result` out."""

from reactor.rating.varied import Factors
from reactor.rating.whole import cited, rate, shipped

__all__ = ["Factors", "cited", "rate", "shipped"]
