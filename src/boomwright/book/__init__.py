"""The build book."""

NAME = "build-book"
PURPOSE = "what to buy, cut, print, glue, solder and measure, step by step, with the figures of this run"
