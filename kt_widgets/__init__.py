"""kt_widgets: checked Alexander modules of knots, links and groups, with their figures."""
