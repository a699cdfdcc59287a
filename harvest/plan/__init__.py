"""The quota table with its lookup card, its reasons and its files."""

from harvest.plan.table import QuotaTable, make_quota_table

__all__ = ["QuotaTable", "make_quota_table"]
