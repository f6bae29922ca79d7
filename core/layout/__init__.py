"""From a Design to its Layout: named pieces, ports, holes, marks and dimensions."""
