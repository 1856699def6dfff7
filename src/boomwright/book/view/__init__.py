"""The 3D view of the build book."""
