"""From the electrical figures of a small beam antenna to checked fabrication files."""

__version__ = "0.1.0"
