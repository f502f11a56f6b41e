"""Documentation of the probes."""
from .operations import documented, found, problems
from .schemas import Alive, Ready


def alive(made, view):
    """GET /healthz."""
    return documented(made, view, operationId="isAlive", summary="Is the process alive?", description="Checks nothing else.",
                      responses={**found("It is", Alive), **problems(422)})


def ready(made, view):
    """GET /readyz."""
    return documented(made, view, operationId="isReady", summary="Does it answer known questions as its rule set says?",
                      description="Answers one worked case of every check and compares every number.",
                      responses={**found("It does", Ready), **problems(422, 503)})
