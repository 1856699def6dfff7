"""How the antenna radiates: metres, hertz and arrays; knows no files, no CAD."""
