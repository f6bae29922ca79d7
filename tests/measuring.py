"""Render files by programs from outside and measure what they show, for several tests."""

import io
import subprocess

import numpy as np
from PIL import Image

from core.drawing.sheet import Area, Circle, Line

MM_PER_INCH = 25.4


def run(*command, data):
    """Output of a program that reads a file from its standard input."""
    return subprocess.run(command, input=data, capture_output=True, check=True, timeout=120).stdout


def svg_picture(data, dpi=300):
    """RGB values, row by row from the top, as librsvg shows the file."""
    png = run("rsvg-convert", "-d", str(dpi), "-p", str(dpi), "-b", "white", data=data)
    return np.asarray(Image.open(io.BytesIO(png)).convert("RGB"), dtype=float)


def pdf_picture(data, page=1, dpi=300):
    """RGB values, row by row from the top, as poppler shows the page."""
    options = ("-r", str(dpi), "-f", str(page), "-l", str(page))
    return np.asarray(Image.open(io.BytesIO(run("pdftoppm", *options, "-", data=data))), float)


def pdf_text(data, page):
    """Words of a page, as poppler finds them."""
    options = ("-f", str(page), "-l", str(page), "-layout")
    return run("pdftotext", *options, "-", "-", data=data).decode()


def ink(picture):
    """How much of each pixel is covered, where one colour lies on white."""
    grey = 255.0 - picture.mean(axis=2)
    return grey / grey.max()


def area(covered, dpi):
    """mm²."""
    return covered.sum() * (MM_PER_INCH / dpi) ** 2


def centroid(covered, dpi, left, top, size):
    """Centre of the ink in a square of the page, mm from the page's upper left corner."""
    pixel = MM_PER_INCH / dpi
    x0, y0, n = round(left / pixel), round(top / pixel), round(size / pixel)
    part = covered[y0 : y0 + n, x0 : x0 + n]
    rows, columns = np.indices(part.shape) + 0.5
    return (
        (x0 + (part * columns).sum() / part.sum()) * pixel,
        (y0 + (part * rows).sum() / part.sum()) * pixel,
    )


def items(sheet, purpose, kind=(Area, Circle, Line)):
    """All items of one purpose and kind on a sheet."""
    groups = [group for group in sheet.groups if group.purpose is purpose]
    return [item for group in groups for item in group.items if isinstance(item, kind)]
