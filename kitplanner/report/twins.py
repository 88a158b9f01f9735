"""A paper as plain text, as HTML and as CSV, for readers, mail and spreadsheets.

Names typed by people are data: HTML escapes them, and CSV keeps a spreadsheet from taking one for a formula.
"""

from __future__ import annotations

import csv
import html
import io
import re

from kitplanner.report.content import Block, Cell, Heading, PageBreak, Paper, Paragraph, Table
from kitplanner.report.tables import columns
from kitplanner.report.wording import plain

_FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r", "\n", "\uff1d", "\uff0b", "\uff0d", "\uff20")
_PLAIN_NUMBER = re.compile(r"[+-]?[0-9]+([.,][0-9]+)?")


def csv_safe(text: str) -> str:
    """Return the text so that no spreadsheet reads it as a formula; plain signed numbers stay numbers."""
    if _PLAIN_NUMBER.fullmatch(text):
        return text
    return f"'{text}" if text.lstrip(" ").startswith(_FORMULA_STARTS) else text


def csv_text(paper: Paper) -> str:
    """Return the paper as CSV (RFC 4180): every block in order, one empty line between blocks."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow([csv_safe(paper.title)])
    if paper.subtitle:
        writer.writerow([csv_safe(paper.subtitle)])
    for block in paper.blocks:
        rows = _csv_rows(block)
        if rows:
            writer.writerow([])
            writer.writerows([[csv_safe(text) for text in row] for row in rows])
    if paper.foot:
        writer.writerow([])
        writer.writerow([csv_safe(paper.foot)])
    return out.getvalue()


def _csv_rows(block: Block) -> list[list[str]]:
    match block:
        case Heading():
            return [[block.text]]
        case Paragraph():
            return [[_labelled(block)]]
        case Table():
            rows = [[block.title]] if block.title else []
            rows += [_spread(row) for row in (*block.header, *block.rows)]
            return rows + [[note] for note in block.footnotes]
        case PageBreak():
            return []


def _spread(row: tuple[Cell, ...]) -> list[str]:
    """Return the row's texts with empty ones under the columns a cell spans."""
    texts: list[str] = []
    for item in row:
        texts += [item.text, *[""] * (item.span - 1)]
    return texts


def _labelled(block: Paragraph) -> str:
    return f"{block.label}: {block.text}" if block.label else block.text


def plain_text(paper: Paper) -> str:
    """Return the paper as text with aligned tables, in reading order."""
    parts = [_underlined(paper.title, "=")]
    if paper.subtitle:
        parts.append(plain(paper.subtitle))
    for block in paper.blocks:
        match block:
            case Heading():
                parts.append(_underlined(block.text, "-"))
            case Paragraph():
                parts.append(plain(_labelled(block)))
            case Table():
                parts.append(_plain_table(block))
            case PageBreak():
                pass
    if paper.foot:
        parts.append(plain(paper.foot))
    return "\n\n".join(parts) + "\n"


def _underlined(text: str, mark: str) -> str:
    line = plain(text)
    return f"{line}\n{mark * columns(line)}"


def _plain_table(table: Table) -> str:
    rows = [[plain(text) for text in _spread(row)] for row in (*table.header, *table.rows)]
    aligns = [[item.align for item in row for _ in range(item.span)] for row in (*table.header, *table.rows)]
    widths = [max(columns(row[i]) for row in rows) for i in range(table.column_count)] if rows else []
    lines = [
        "  ".join(_padded(text, width, side) for text, width, side in zip(row, widths, sides, strict=True)).rstrip()
        for row, sides in zip(rows, aligns, strict=True)
    ]
    lines.insert(len(table.header), "-" * (sum(widths) + 2 * (len(widths) - 1)))
    head = [plain(table.title), ""] if table.title else []
    return "\n".join([*head, *lines, *map(plain, table.footnotes)])


def _padded(text: str, width: int, align: str) -> str:
    space = width - columns(text)
    left = space if align == "right" else space // 2 if align == "centre" else 0
    return " " * left + text + " " * (space - left)


_STYLE = (
    "body{font-family:sans-serif;color:#000;background:#fff}"
    "table{border-collapse:collapse}th,td{border:1px solid #000;padding:.2em .5em;vertical-align:top}"
    ".right{text-align:right}.centre{text-align:center}.caution{border-left:.3em solid #000;padding-left:.6em}"
)


def html_text(paper: Paper) -> str:
    """Return the paper as one self-contained HTML page that loads nothing from anywhere."""
    title = html.escape(paper.title)
    parts = [f"<h1>{title}</h1>"]
    if paper.subtitle:
        parts.append(f"<p>{html.escape(paper.subtitle)}</p>")
    parts += [text for text in map(_html_block, paper.blocks) if text]
    if paper.foot:
        parts.append(f"<footer>{html.escape(paper.foot)}</footer>")
    body = "\n".join(parts)
    return (
        f'<!DOCTYPE html>\n<html>\n<head><meta charset="utf-8"><title>{title}</title>'
        f"<style>{_STYLE}</style></head>\n<body>\n{body}\n</body>\n</html>\n"
    )


def _html_block(block: Block) -> str:
    match block:
        case Heading():
            level = min(block.level + 1, 6)
            return f"<h{level}>{html.escape(block.text)}</h{level}>"
        case Paragraph():
            return f'<p class="{block.style}">{html.escape(_labelled(block))}</p>'
        case Table():
            return _html_table(block)
        case PageBreak():
            return ""


def _html_table(table: Table) -> str:
    caption = f"<caption>{html.escape(table.title)}</caption>" if table.title else ""
    head = "".join(f"<tr>{''.join(_html_cell(item, 'col') for item in row)}</tr>" for row in table.header)
    body = "".join(f"<tr>{_html_row(row, table.head_columns)}</tr>" for row in table.rows)
    notes = "".join(f'<p class="note">{html.escape(note)}</p>' for note in table.footnotes)
    return f"<table>{caption}<thead>{head}</thead><tbody>{body}</tbody></table>{notes}"


def _html_row(row: tuple[Cell, ...], head_columns: int) -> str:
    return "".join(_html_cell(item, "row" if i < head_columns else "") for i, item in enumerate(row))


def _html_cell(item: Cell, scope: str) -> str:
    name = "th" if scope else "td"
    marks = f' scope="{scope}"' if scope else ""
    marks += f' colspan="{item.span}"' if item.span > 1 else ""
    marks += f' class="{item.align}"' if item.align != "left" else ""
    text = "<br>".join(html.escape(line) for line in item.lines)
    return f"<{name}{marks}>{f'<strong>{text}</strong>' if item.strong else text}</{name}>"
