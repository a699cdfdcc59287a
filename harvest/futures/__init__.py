"""What happens to each draw under a rule, and the quota that the risk allows."""

from harvest.futures.find import find_quota
from harvest.futures.project import Future, project
from harvest.futures.recommend import Recommendation, pick_question, recommend_quota
from harvest.futures.risk import RiskCurve, trace_risk
from harvest.futures.rules import Rule, fixed_quota, rule_from

__all__ = [
    "Future",
    "Recommendation",
    "RiskCurve",
    "Rule",
    "find_quota",
    "fixed_quota",
    "pick_question",
    "project",
    "recommend_quota",
    "rule_from",
    "trace_risk",
]
