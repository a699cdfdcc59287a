"""The quota table with its lookup card, reasons and files; loaded when first used, as its words alone are light."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from harvest.plan.table import QuotaTable, make_quota_table

__all__ = ["QuotaTable", "make_quota_table"]


def __getattr__(name: str) -> Any:
    if name not in __all__:
        raise AttributeError(f"module 'harvest.plan' has no attribute {name!r}")
    from harvest.plan import table

    return getattr(table, name)
