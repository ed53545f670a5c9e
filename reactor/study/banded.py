"""The evaluator of a band: each point is the case with its uncertain data moved."""

from reactor.study import rated
from reactor.study.uncertain import Uncertain, factors

columns = rated.columns


def prepare(job):
    """Return the function of one point, whose inputs are standard deviations of the uncertain inputs."""
    from reactor.rating import rate

    case, settings = job.content
    found = [Uncertain(*record) for record in settings["inputs"]]

    def one(point):
        return rated.plain(rate(case, factors(found, point.inputs, settings["rate_scale"])))

    return one
