"""The field solver: a method of moments on a triangle mesh of the layout's own polygons."""
