"""Rules of control charts and how often they cry wolf."""

from sheetqc.stats.stability.false_alarms import average_run_length, false_alarm_share
from sheetqc.stats.stability.rules import RULES, Rule, places

__all__ = ["RULES", "Rule", "average_run_length", "false_alarm_share", "places"]
