"""Widgets: thin views over what `kt_widgets.figures` makes, linked in the browser."""
