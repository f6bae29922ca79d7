"""Microstrip lines, their junctions and bends, and two-port algebra; knows no Design."""
