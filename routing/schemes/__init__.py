"""Room: schemes. Route x pipe x count: appraisal, cost, verdict, order."""

from routing.schemes.appraising import Conditions, appraise, crown_offset_m, high_points_m
from routing.schemes.costing import price_scheme
from routing.schemes.judging import judge, list_checks, worst_of
from routing.schemes.limit_checks import SLIM_RESERVE_M
from routing.schemes.matter import Matter
from routing.schemes.ranking import rank
from routing.schemes.unmade import NOT_MADE

__all__ = [
    "NOT_MADE",
    "SLIM_RESERVE_M",
    "Conditions",
    "Matter",
    "appraise",
    "crown_offset_m",
    "high_points_m",
    "judge",
    "list_checks",
    "price_scheme",
    "rank",
    "worst_of",
]
