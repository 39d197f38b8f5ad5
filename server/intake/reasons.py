"""The sentences of every refusal, by their code, in English: they are stored as they were said.

Placeholders: `column`, `found`, `expected`, and `line` for files.
"""

FILE_REASONS: dict[str, str] = {
    "missing": "There is no such file.",
    "folder": "This is a folder; expected {expected}.",
    "empty": "The file is empty; expected {expected}.",
    "too_large": "The file has {found}; files up to {expected} are taken. Split it by date.",
    "other_kind": "This is {found}, not a sheet; expected {expected}.",
    "encoding": "{found} is not UTF-8; expected {expected}.",
    "nul": "There is a NUL byte in the text ({found}); expected {expected}.",
    "long_line": "The line is {found} long; expected {expected}. Is this a sheet?",
    "columns": "The columns do not make up a sheet: found {found}; expected {expected}.",
    "several_kinds": "The columns fit more than one sheet: {found}; expected {expected}.",
    "column_twice": "The column {column} stands twice in the header; expected it once.",
    "delimiter": "It is not clear what separates the fields: {found}; expected {expected}.",
    "decimals_mixed": (
        "Both decimal points and decimal commas are used ({found}); expected {expected}."
    ),
    "decimals_unclear": (
        "It is not clear whether the mark in {found} stands before decimals or between"
        " thousands; expected {expected}."
    ),
    "decimals_unquoted": (
        "Most rows have more fields than the header ({found}), as happens when decimal commas"
        " stand in a file separated by commas; expected {expected}."
    ),
    "workbook_damaged": "The workbook cannot be opened ({found}); expected {expected}.",
    "workbook_locked": "The workbook is protected by a password; expected {expected}.",
    "workbook_swells": (
        "The workbook unpacks to far more than it should ({found}); expected {expected}."
    ),
    "workbook_unsafe": "The workbook holds {found}, which sheets never need; expected {expected}.",
}

ROW_REASONS: dict[str, str] = {
    "fields": "The row has {found} fields; expected {expected}.",
    "quotes": "A quotation mark is opened and not closed; expected {expected}.",
    "long_field": "A field is {found} long; expected {expected}.",
    "cell_unreadable": "The row holds a cell that cannot be read; expected {expected}.",
    "control": "{column} holds a control character; expected {expected}.",
    "empty": "{column} is empty; expected {expected}.",
    "not_a_number": "{column} “{found}” is not a number; expected {expected}.",
    "not_finite": "{column} “{found}” is not a finite number; expected {expected}.",
    "thousands": ("{column} “{found}” seems to have its thousands separated; expected {expected}."),
    "decimal_mark": (
        "{column} “{found}” has another decimal mark than the file; expected {expected}."
    ),
    "too_low": "{column} {found} is too low; expected {expected}.",
    "too_high": "{column} {found} is too high; expected {expected}.",
    "not_whole": "{column} “{found}” is not a whole number; expected {expected}.",
    "choice": "{column} “{found}” is not known; expected {expected}.",
    "section_unknown": "There is no section “{found}”; expected {expected}.",
    "cell_unknown": "There is no cell {found} in that section; expected {expected}.",
    "time_format": "{column} “{found}” is not a time; expected {expected}.",
    "time_no_clock": "{column} “{found}” has no time of day; expected {expected}.",
    "time_number": (
        "{column} “{found}” is a bare number, as Excel shows a date that is not formatted;"
        " expected {expected}."
    ),
    "time_impossible": "{column} “{found}” is not in the calendar; expected {expected}.",
    "time_skipped": (
        "{column} “{found}” does not exist: the clock was put forward over it; expected {expected}."
    ),
    "time_twice": (
        "{column} “{found}” came twice, as the clock was put back; expected {expected}."
    ),
    "time_future": "{column} “{found}” lies in the future; expected {expected}.",
    "time_early": "{column} “{found}” is too long ago; expected {expected}.",
    "cells_format": "{column} “{found}” is not a list of cells; expected {expected}.",
    "cells_date": (
        "{column} “{found}” looks like a date, which Excel makes of a list such as 1-12;"
        " expected {expected}."
    ),
    "cells_reversed": "{column} “{found}” runs backwards; expected {expected}.",
    "cells_twice": "{column} names cell {found} twice; expected {expected}.",
    "cells_zero": "{column} “{found}” names cell 0; expected {expected}.",
    "cells_beyond": "{column} names cell {found}; expected {expected}.",
    "order": "{column} “{found}” does not come in order; expected {expected}.",
    "no_values": "The row holds no measured value; expected {expected}.",
}
