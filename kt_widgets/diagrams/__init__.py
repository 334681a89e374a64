"""Oriented link diagrams: planar maps, one file per notation, and what a diagram determines."""

from __future__ import annotations

from kt_widgets.diagrams.diagram import Arc, Component, Crossing, Diagram, Face, Relabelling

__all__ = ["Arc", "Component", "Crossing", "Diagram", "Face", "Relabelling"]
