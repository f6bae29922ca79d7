"""The stock table: dielectrics, conductors and processes, with their sources."""
