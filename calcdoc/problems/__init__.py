"""What is wrong with a text, as data: findings, their codes and how they are shown."""

from calcdoc.problems.finding import Finding, Mistake, Place, Severity, error, warning

__all__ = ["Finding", "Mistake", "Place", "Severity", "error", "warning"]
