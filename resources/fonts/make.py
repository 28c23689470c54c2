#!/usr/bin/env python3
"""Makes the bundled fonts and the table of their letters' widths.

    python3 resources/fonts/make.py SOURCE_FOLDER

SOURCE_FOLDER holds the unchanged fonts, as they lie in the Debian 12 packages fonts-noto-core
(NotoSans-Regular, NotoSans-SemiBold, NotoSerif-Regular, NotoSerif-Italic; version 2.004),
fonts-noto-mono (NotoSansMono-Regular), fonts-noto-extra (NotoSerif-SemiBold) and fonts-dejavu-core (DejaVuSans; version 2.37), in any
subfolders. It needs Python's fonttools (made with 4.68). The same input gives the same bytes.

What is done, and why:
* Only Latin, Greek, Cyrillic, punctuation, superscripts, subscripts, currencies and letter-like
  signs are kept (DejaVu: arrows, operators, shapes and signs as well), without hints: the seven
  files come to about 1.3 MB instead of 4 MB.
* The Noto fonts lack the minus sign U+2212. It is made from the bar of their plus sign, so that
  it has the width of a digit and numbers need only one font.
* Every kind of space gets an outline of one unit by one unit, far too small to leave a trace in any
  pixel. The toolkit of the window remembers the pixels of a letter, but not of one that has none: an
  empty space is worked out anew whenever it is drawn, which took most of the time of a frame.
"""

import os
import sys

from fontTools import subset
from fontTools.pens.ttGlyphPen import TTGlyphPen
from fontTools.ttLib import TTFont

HERE = os.path.dirname(os.path.abspath(__file__))
TABLE = os.path.join(HERE, "..", "..", "src", "figure", "metrics", "table.rs")
MINUS = 0x2212

TEXT = [
    (0x20, 0x7E), (0xA0, 0x24F), (0x259, 0x259), (0x2B0, 0x2FF), (0x300, 0x36F), (0x370, 0x3FF),
    (0x400, 0x4FF), (0x1D2C, 0x1D6A), (0x1E00, 0x1EFF), (0x2000, 0x209F), (0x20A0, 0x20BF), (0x2100, 0x218F),
    (0x2212, 0x2212), (0x2C7C, 0x2C7C), (0xFB00, 0xFB04),
]
SIGNS = [
    (0x20, 0x7E), (0xA0, 0xFF), (0x370, 0x3FF), (0x2000, 0x209F), (0x2100, 0x214F),
    (0x2190, 0x23FF), (0x2500, 0x27BF), (0x2A7D, 0x2A7E),
]
# A font that figures never use: its widths need no table.
BESIDE = [("NotoSansMono-Regular.ttf", TEXT)]
FONTS = [
    ("Sans", "NotoSans-Regular.ttf", TEXT),
    ("SansStrong", "NotoSans-SemiBold.ttf", TEXT),
    ("Serif", "NotoSerif-Regular.ttf", TEXT),
    ("SerifItalic", "NotoSerif-Italic.ttf", TEXT),
    ("SerifStrong", "NotoSerif-SemiBold.ttf", TEXT),
    ("Symbols", "DejaVuSans.ttf", SIGNS),
]


def find(folder, name):
    for where, _, names in sorted(os.walk(folder)):
        if name in names:
            return os.path.join(where, name)
    sys.exit(f"{name} is not in {folder}")


def add_minus(font):
    """A bar as wide and as thick as the plus sign's, on a digit's width."""
    cmap = font.getBestCmap()
    if MINUS in cmap:
        return
    plus = cmap[ord("+")]
    glyphs = font["glyf"]
    points, _, _ = glyphs[plus].getCoordinates(glyphs)
    left, right = min(x for x, _ in points), max(x for x, _ in points)
    # The heights of the bar are those of the outermost points on its left.
    bar = sorted({y for x, y in points if x == left})
    if len(bar) == 1:
        bar = sorted({y for x, y in points if x <= left + 20})
    low, high = bar[0], bar[-1]
    pen = TTGlyphPen(None)
    pen.moveTo((left, low))
    pen.lineTo((left, high))
    pen.lineTo((right, high))
    pen.lineTo((right, low))
    pen.closePath()
    font.setGlyphOrder(font.getGlyphOrder() + ["minus"])
    glyphs["minus"] = pen.glyph()
    font["hmtx"]["minus"] = (font["hmtx"][plus][0], left)
    for table in font["cmap"].tables:
        if table.isUnicode():
            table.cmap[MINUS] = "minus"


def fill_spaces(font):
    """A speck that cannot be seen in every letter that has a width and no outline."""
    glyphs = font["glyf"]
    for name in sorted(set(font.getBestCmap().values())):
        width, _ = font["hmtx"][name]
        if width > 0 and glyphs[name].numberOfContours == 0:
            pen = TTGlyphPen(None)
            pen.moveTo((0, 0))
            pen.lineTo((0, 1))
            pen.lineTo((1, 1))
            pen.lineTo((1, 0))
            pen.closePath()
            glyphs[name] = pen.glyph()
            font["hmtx"][name] = (width, 0)


def make(source, ranges, target):
    options = subset.Options()
    options.hinting = False
    options.name_IDs = ["*"]
    options.name_languages = [0x409]
    options.notdef_outline = True
    options.recalc_timestamp = False
    options.layout_features = ["kern", "mark", "mkmk", "ccmp", "locl", "liga", "calt"]
    font = TTFont(source, recalcTimestamp=False)
    add_minus(font)
    fill_spaces(font)
    letters = [code for first, last in ranges for code in range(first, last + 1)]
    subsetter = subset.Subsetter(options)
    subsetter.populate(unicodes=letters)
    subsetter.subset(font)
    font.save(target)
    return TTFont(target)


def widths(font):
    """Runs of consecutive code points with their widths in thousandths of an em."""
    cmap, per_em = font.getBestCmap(), font["head"].unitsPerEm
    runs = []
    for code in sorted(cmap):
        width = round(font["hmtx"][cmap[code]][0] * 1000 / per_em)
        if runs and code == runs[-1][0] + len(runs[-1][1]):
            runs[-1][1].append(width)
        else:
            runs.append((code, [width]))
    return runs


def main():
    if len(sys.argv) != 2:
        sys.exit(__doc__)
    lines = [
        "//! Widths of the bundled fonts' letters in thousandths of an em. Generated; do not edit.",
        "//!",
        "//! Made together with the fonts by `resources/fonts/make.py`.",
        "",
        "/// Consecutive letters: the first one's code point, and the width of each.",
        "pub(super) type Run = (u32, &'static [u16]);",
    ]
    for face, name, ranges in FONTS:
        font = make(find(sys.argv[1], name), ranges, os.path.join(HERE, name))
        lines.append("")
        lines.append("#[rustfmt::skip]")
        lines.append(f"pub(super) static {snake(face)}: &[Run] = &[")
        for first, run in widths(font):
            line = f"    (0x{first:04X}, &["
            for width in run:
                piece = f"{width}, "
                if len(line) + len(piece) > 118:
                    lines.append(line.rstrip())
                    line = "        "
                line += piece
            lines.append(line.rstrip(", ") + "]),")
        lines.append("];")
    for name, ranges in BESIDE:
        make(find(sys.argv[1], name), ranges, os.path.join(HERE, name))
    os.makedirs(os.path.dirname(TABLE), exist_ok=True)
    with open(TABLE, "w", encoding="utf-8") as out:
        out.write("\n".join(lines) + "\n")


def snake(name):
    return "".join("_" + c if c.isupper() and at else c for at, c in enumerate(name)).upper()


if __name__ == "__main__":
    main()
