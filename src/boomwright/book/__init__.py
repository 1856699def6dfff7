"""The build book: what a builder works from. Chapters are content without layout, one file each."""
