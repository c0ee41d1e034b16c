#!/usr/bin/env python3
"""Turns a screen as `tmux capture-pane -e -p` prints it into an SVG picture.

Reads the screen from standard input and writes the picture to standard output. Every run of
one colour is fitted to its columns, so that the picture keeps its shape in any font.
"""

import html
import re
import sys
import unicodedata
from collections import Counter
from dataclasses import dataclass, replace

WIDTH, HEIGHT = 8.127, 18  # of one character
MARGIN, BAR = 14, 30
INK = "#e0e2ea"  # where the screen says nothing
FONTS = "'DejaVu Sans Mono', Menlo, Consolas, 'Liberation Mono', monospace"
BASIC = ["#07080d", "#ffc0b9", "#b3f6c0", "#fce094", "#a6dbff", "#ffcaff", "#8cf8f7", "#eef1f8"]


@dataclass(frozen=True)
class Look:
    ink: str | None = None
    paper: str | None = None
    line: str | None = None  # the colour of the underline
    under: str | None = None  # None, "straight" or "curly"
    bold: bool = False
    italic: bool = False
    reverse: bool = False


def indexed(number: int) -> str:
    if number < 16:
        return BASIC[number % 8]
    if number >= 232:
        return "#" + f"{8 + 10 * (number - 232):02x}" * 3
    parts = [(number - 16) // 36, (number - 16) // 6 % 6, (number - 16) % 6]
    return "#" + "".join(f"{55 + 40 * part if part else 0:02x}" for part in parts)


def colour(codes: list[str]) -> str:
    """Takes `2;r;g;b` or `5;n` off the front of the codes."""
    kind = codes.pop(0)
    if kind == "5":
        return indexed(int(codes.pop(0)))
    red, green, blue = (int(codes.pop(0)) for _ in range(3))
    return f"#{red:02x}{green:02x}{blue:02x}"


def changed(look: Look, sequence: str) -> Look:
    # `4:3` is one code; `38:2::r:g:b` means what `38;2;r;g;b` does.
    codes = []
    for code in (sequence or "0").split(";"):
        if ":" in code and not code.startswith("4:"):
            codes.extend(part for part in code.split(":") if part)
        else:
            codes.append(code)
    while codes:
        code = codes.pop(0)
        if code in ("", "0"):
            look = Look()
        elif code == "1":
            look = replace(look, bold=True)
        elif code == "22":
            look = replace(look, bold=False)
        elif code in ("3", "23"):
            look = replace(look, italic=code == "3")
        elif code in ("7", "27"):
            look = replace(look, reverse=code == "7")
        elif code in ("24", "4:0"):
            look = replace(look, under=None)
        elif code == "4" or code.startswith("4:"):
            look = replace(look, under="curly" if code == "4:3" else "straight")
        elif code in ("38", "48", "58"):
            field = {"38": "ink", "48": "paper", "58": "line"}[code]
            look = replace(look, **{field: colour(codes)})
        elif code in ("39", "49", "59"):
            field = {"39": "ink", "49": "paper", "59": "line"}[code]
            look = replace(look, **{field: None})
        elif 30 <= int(code) <= 37 or 90 <= int(code) <= 97:
            look = replace(look, ink=BASIC[int(code) % 10])
        elif 40 <= int(code) <= 47 or 100 <= int(code) <= 107:
            look = replace(look, paper=BASIC[int(code) % 10])
    return look


def cells(row: str, look: Look):
    """The characters of a row with their looks, and the look at its end."""
    found = []
    for part in re.split(r"(\x1b\[[0-9;:]*m)", row):
        if part.startswith("\x1b["):
            look = changed(look, part[2:-1])
        else:
            for character in part:
                if unicodedata.combining(character) and found:
                    found[-1] = (found[-1][0] + character, found[-1][1])
                else:
                    found.append((character, look))
    return found, look


def runs(row):
    """Neighbours that look the same, with the column of the first."""
    start = 0
    for column in range(1, len(row) + 1):
        if column == len(row) or row[column][1] != row[start][1]:
            yield start, "".join(text for text, _ in row[start:column]), row[start][1], column
            start = column


def number(value: float) -> str:
    return f"{value:.2f}".rstrip("0").rstrip(".")


def wave(left: float, right: float, y: float) -> str:
    path, x, up = f"M{number(left)} {number(y)}", left, True
    while x < right - 0.1:
        step = min(3, right - x)
        path += f"q{number(step / 2)} {-2.4 if up else 2.4} {number(step)} 0"
        x, up = x + step, not up
    return path


def drawn(row, top: float, background: str):
    for start, text, look, end in runs(row):
        ink, paper = look.ink or INK, look.paper
        if look.reverse:
            ink, paper = paper or background, look.ink or INK
        left, right = MARGIN + start * WIDTH, MARGIN + end * WIDTH
        if paper and paper != background:
            yield (f'<rect x="{number(left)}" y="{number(top)}" width="{number(right - left)}" '
                   f'height="{HEIGHT}" fill="{paper}"/>')
        if look.under:
            line = look.line or ink
            y = top + HEIGHT - 2.5
            path = wave(left, right, y) if look.under == "curly" else f"M{number(left)} {number(y)}H{number(right)}"
            yield f'<path d="{path}" fill="none" stroke="{line}" stroke-width="1.3"/>'
        # Each word by itself: white space between words is not fitted alike everywhere.
        for word in re.finditer(r"\S+(?: \S+)*", text):
            x = left + word.start() * WIDTH
            style = f' fill="{ink}"' if ink != INK else ""
            style += ' font-weight="bold"' if look.bold else ""
            style += ' font-style="italic"' if look.italic else ""
            length = len(word.group()) * WIDTH
            yield (f'<text x="{number(x)}" y="{number(top + 13)}" textLength="{number(length)}"{style}>'
                   f"{html.escape(word.group(), quote=False)}</text>")


def main() -> None:
    title = sys.argv[1]
    rows, look = [], Look()
    for line in sys.stdin.read().rstrip("\n").split("\n"):
        row, look = cells(line, look)
        rows.append(row)
    columns = int(sys.argv[2])
    papers = Counter(look.paper for row in rows for _, look in row if look.paper)
    background = papers.most_common(1)[0][0] if papers else "#14161b"
    width = number(2 * MARGIN + columns * WIDTH)
    height = number(BAR + len(rows) * HEIGHT + MARGIN)
    print(f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {width} {height}" '
          f'width="{width}" height="{height}" font-family="{FONTS}" font-size="13.5" '
          f'fill="{INK}" xml:space="preserve">')
    print(f"<title>{html.escape(title)}</title>")
    print(f'<rect width="100%" height="100%" rx="8" fill="{background}"/>')
    for index, shade in enumerate(["#5a5f6b", "#5a5f6b", "#5a5f6b"]):
        print(f'<circle cx="{20 + 18 * index}" cy="15" r="5" fill="{shade}"/>')
    print(f'<text x="50%" y="19" text-anchor="middle" fill="#9b9ea4" font-size="12">{html.escape(title)}</text>')
    for index, row in enumerate(rows):
        for shape in drawn(row, BAR + index * HEIGHT, background):
            print(shape)
    print("</svg>")


main()
