"""Makes the fonts of this folder from the npm package @fontsource/atkinson-hyperlegible-next 5.3.0.

    npm pack @fontsource/atkinson-hyperlegible-next@5.3.0 && tar xzf fontsource-*.tgz
    python3 -m pip install fonttools==4.68.0 brotli
    python3 make_fonts.py package/files

Per weight the Latin and extended Latin parts become one file, and the digits become the tabular
ones by default, so that columns of numbers line up in renderers that know no font features.
"""
import sys
from pathlib import Path

from fontTools.merge import Merger, Options
from fontTools.ttLib import TTFont

FAMILY = "atkinson-hyperlegible-next"


def tabular_digits(font):
    lookups = font["GSUB"].table
    swap = {}
    for record in lookups.FeatureList.FeatureRecord:
        if record.FeatureTag == "tnum":
            for index in record.Feature.LookupListIndex:
                for table in lookups.LookupList.Lookup[index].SubTable:
                    swap.update(getattr(table, "ExtSubTable", table).mapping)
    for table in font["cmap"].tables:
        for code in range(ord("0"), ord("9") + 1):
            table.cmap[code] = swap[table.cmap[code]]


def main(source):
    for weight, name in ((400, "Regular"), (600, "SemiBold")):
        parts = []
        for script in ("latin", "latin-ext"):
            part = TTFont(Path(source) / f"{FAMILY}-{script}-{weight}-normal.woff2")
            part.flavor = None
            parts.append(Path(source) / f"{FAMILY}-{script}-{weight}.ttf")
            part.save(parts[-1])
        font = Merger(options=Options(drop_tables=["GlyphOrder", "prep", "gasp", "STAT"])).merge(parts)
        tabular_digits(font)
        target = Path(__file__).parent / f"AtkinsonHyperlegibleNext-{name}"
        font.save(target.with_suffix(".ttf"))
        font.flavor = "woff2"
        font.save(target.with_suffix(".woff2"))


main(sys.argv[1])
