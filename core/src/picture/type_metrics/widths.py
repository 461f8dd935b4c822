#!/usr/bin/env python3
"""Makes widths.rs: advance widths of the sans, from the font files of its npm package.

    npm install @fontsource/atkinson-hyperlegible-next@5.3.0
    pip install fonttools brotli
    python3 widths.py node_modules/@fontsource/atkinson-hyperlegible-next > widths.rs && rustfmt widths.rs

The house sets tabular figures, so a digit has the width of the glyph that `tnum` puts in its place.
"""
import sys
from fontTools.ttLib import TTFont

WEIGHTS = (400, 500, 600, 700)
PARTS = ("latin", "latin-ext")


def tabular(font):
    """What `tnum` puts in place of each glyph."""
    if "GSUB" not in font:
        return {}
    table = font["GSUB"].table
    indices = {i for r in table.FeatureList.FeatureRecord if r.FeatureTag == "tnum" for i in r.Feature.LookupListIndex}
    found = {}
    for i in sorted(indices):
        for sub in table.LookupList.Lookup[i].SubTable:
            found.update(getattr(getattr(sub, "ExtSubTable", sub), "mapping", {}))
    return found


def main(package):
    widths = {}
    for column, weight in enumerate(WEIGHTS):
        for part in PARTS:
            font = TTFont(f"{package}/files/atkinson-hyperlegible-next-{part}-{weight}-normal.woff2")
            assert font["head"].unitsPerEm == 1000
            swap = tabular(font)
            for code, glyph in font.getBestCmap().items():
                row = widths.setdefault(code, [None] * len(WEIGHTS))
                if row[column] is None:
                    row[column] = font["hmtx"][swap.get(glyph, glyph)][0]
    codes = sorted(c for c in widths if c >= 0x20)
    assert all(None not in widths[c] for c in codes)
    print("//! Advance widths of the sans in thousandths of its size, made by `widths.py`; not edited by hand.")
    print("//!")
    print("//! Source: Atkinson Hyperlegible Next (SIL Open Font License 1.1) as shipped by")
    print("//! @fontsource/atkinson-hyperlegible-next 5.3.0, files latin and latin-ext, tabular figures.")
    print()
    print("/// The characters, in order of their code points.")
    print(f"pub(super) const CODES: [u16; {len(codes)}] = [{', '.join(map(str, codes))}];")
    for column, weight in enumerate(WEIGHTS):
        print()
        print(f"/// Widths at weight {weight}.")
        print(f"pub(super) const W{weight}: [u16; {len(codes)}] = [{', '.join(str(widths[c][column]) for c in codes)}];")


main(sys.argv[1])
