"""Geometry and the object's own contrast: stations, targets, delays, delay lines, visibility."""

__all__: list[str] = []
