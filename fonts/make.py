#!/usr/bin/env python3
"""Make the two font files of this folder from Noto Sans and Noto Sans Math.

usage: make.py FOLDER-OF-NOTO      (Debian: apt-get install fonts-noto-core; /usr/share/fonts/truetype/noto)
Needs fonttools 4. The same input gives the same bytes.
"""
import sys
from pathlib import Path
from fontTools.misc.transform import Offset
from fontTools.pens.transformPen import TransformPen
from fontTools.pens.ttGlyphPen import TTGlyphPen
from fontTools.subset import Options, Subsetter
from fontTools.ttLib import TTFont

# Latin with its extensions, African and phonetic letters, modifier letters, combining marks, Greek with its
# extension, Cyrillic with its extensions, punctuation, super- and subscripts, currency, letter-like signs, number forms.
KEPT = """0020-007E 00A0-02FF 0300-036F 0370-03FF 0400-052F 1C80-1C88 1DC4-1DC7 1E00-1EFF 1F00-1FFF 2010-2027 2030-203A
2044 2070-209C 20A0-20BF 2116 2122 2150-215F 2C60-2C7F A640-A66F A67C-A69F A720-A7BF A7F7-A7FF FFFD"""
# What Noto Sans leaves to Noto Sans Math.
SIGNS = "−√≠≈≤≥←↑→↓"


def kept():
    for part in KEPT.split():
        first, _, last = part.partition("-")
        yield from range(int(first, 16), int(last or first, 16) + 1)


def draw(pen, font, character, dy=0):
    font.getGlyphSet()[font.getBestCmap()[ord(character)]].draw(TransformPen(pen, Offset(0, dy)))


def bar(pen, font, middle):
    """The bar of the face's own plus sign, at another height."""
    plus = font["glyf"][font.getBestCmap()[ord("+")]]
    heights = sorted({y for _, y in plus.coordinates})
    half = (heights[2] - heights[1]) / 2
    left, right = plus.xMin, plus.xMax
    pen.moveTo((left, middle - half))
    pen.lineTo((left, middle + half))
    pen.lineTo((right, middle + half))
    pen.lineTo((right, middle - half))
    pen.closePath()


def bold_sign(pen, font, math, character):
    """Bold has no sibling with the signs: they are put together from its own, the rest is as in Regular."""
    plus = font["glyf"][font.getBestCmap()[ord("+")]]
    axis = (plus.yMin + plus.yMax) // 2
    if character == "−":
        bar(pen, font, axis)
    elif character in "≤≥":
        draw(pen, font, "<" if character == "≤" else ">", 60)
        bar(pen, font, 54)
    elif character == "≈":
        draw(pen, font, "~", 100)
        draw(pen, font, "~", -100)
    else:
        draw(pen, math, character)
        return math["hmtx"][math.getBestCmap()[ord(character)]][0]
    return font["hmtx"][font.getBestCmap()[ord("+")]][0]


def make(noto, weight):
    font = TTFont(noto / f"NotoSans-{weight}.ttf", recalcTimestamp=False)
    math = TTFont(noto / "NotoSansMath-Regular.ttf")
    assert font["head"].unitsPerEm == math["head"].unitsPerEm == 1000
    options = Options(layout_features=[], hinting=False, notdef_outline=True, glyph_names=False)
    options.name_IDs = [0, 1, 2, 3, 4, 5, 6, 13, 14]
    options.drop_tables += ["GDEF", "GPOS", "GSUB"]
    subsetter = Subsetter(options)
    subsetter.populate(unicodes=kept())
    subsetter.subset(font)
    for character in SIGNS:
        pen = TTGlyphPen(None)
        if weight == "Bold":
            width = bold_sign(pen, font, math, character)
        else:
            draw(pen, math, character)
            width = math["hmtx"][math.getBestCmap()[ord(character)]][0]
        name = f"uni{ord(character):04X}"
        glyph = pen.glyph()
        glyph.recalcBounds(font["glyf"])
        font.setGlyphOrder(font.getGlyphOrder() + [name])
        font["glyf"].glyphs[name] = glyph
        font["glyf"].glyphOrder = font.getGlyphOrder()
        font["hmtx"][name] = (width, glyph.xMin)
        for table in font["cmap"].tables:
            if table.isUnicode():
                table.cmap[ord(character)] = name
    font["maxp"].numGlyphs = len(font.getGlyphOrder())
    font.save(Path(__file__).parent / f"NotoSans-{weight}.ttf", reorderTables=True)


for weight in ("Regular", "Bold"):
    make(Path(sys.argv[1]), weight)
