"""socibrain: does where people stand among others go with how their brains are organised?"""

from socibrain.run.stages import audit, begin, catalogue, link, measure, report
from socibrain.sources.study import read_study

__all__ = ["audit", "begin", "catalogue", "link", "measure", "read_study", "report"]
