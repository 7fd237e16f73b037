"""The drawings of the report, one a module."""

from assess.report.figures import elevation, history, moments, residuals, section, utilisation

__all__ = ["elevation", "history", "moments", "residuals", "section", "utilisation"]
