"""Colours and sizes that hold on light and dark pages: mid-tone, told apart without colour by line style or width as well."""

RECORDED = "#56B4E9"
FITTED = "#D55E00"
PREDICTED = "#009E73"
CURSOR = "#CC79A7"
AXIS = "#808080"

GOOD, BAD, OPEN = "#009E73", "#D55E00", "#E69F00"
OUTCOME_COLOURS = {"inside": GOOD, "outside": BAD, "undecided": OPEN, "not measured": OPEN}
OUTCOME_MARKS = {"inside": "✓", "outside": "✗", "undecided": "?", "not measured": "–"}

FIGURE_MARGIN = {"top": 14, "bottom": 42, "left": 62, "right": 14}
LABEL_WIDTH = "170px"
MOST_POINTS = 4000
"""Points per plotted line; longer curves are thinned keeping their extremes."""
