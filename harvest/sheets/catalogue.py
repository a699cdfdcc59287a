"""The questions that taking over a sheet can raise: words, answers and cures."""

from __future__ import annotations

from harvest.sheets.questions import Kind, yes

TRANSPOSED = Kind(
    "transposed",
    "The years run from left to right. Turn the table, so that each year is a row?",
    yes("Turn the table"),
    "Turn the table in the spreadsheet (copy it, then paste it transposed), and save.",
)
HIDDEN_SHEET = Kind(
    "hidden sheet",
    "The sheet is hidden in the file. Is it the one to use?",
    yes("Use the hidden sheet"),
    "Choose another sheet, or show this one in the spreadsheet and save.",
)
HIDDEN_COLUMNS = Kind(
    "hidden columns",
    "Columns that are hidden in the file are used. Is this right?",
    yes("Use them"),
    "Leave these columns out here, or show them in the spreadsheet and save.",
)
HIDDEN_ROWS = Kind(
    "hidden rows",
    "Rows are hidden in the file. Do they belong to the history?",
    (("yes", "Take them over like the others"), ("leave out", "Leave the hidden rows out")),
    "Show the hidden rows in the spreadsheet, or delete them, and save.",
)
FORMULAS = Kind(
    "formulas",
    "Cells hold formulas. The values stored when the file was last saved are used; are they up to date?",
    yes("Use the stored values"),
    "Open the file in the spreadsheet program, let it compute, save it, and choose it again.",
)
EMPTY_ROWS = Kind(
    "empty rows",
    "Empty rows stand between the years. Leave them out?",
    yes("Leave them out"),
    "Delete the empty rows in the file.",
)
TOTALS = Kind(
    "totals",
    "Rows hold totals, means or several years together. Leave them out?",
    yes("Leave them out"),
    "Delete these rows in the file, or give them a year if they are one.",
)
LABELLED_TOTALS = Kind(
    "labelled totals",
    "Rows with a year are labelled as a total or mean. Leave them out?",
    (("leave out", "Leave them out"), ("keep", "They are rows like the others")),
    "Delete these rows in the file, or correct their label.",
)
NO_YEAR = Kind(
    "no year",
    "Rows have numbers and no year. What are they?",
    (("leave out", "Leave them out"), ("above", "They belong to the year above them")),
    "Write the year into each of these rows, or delete them.",
)
FOOTNOTES = Kind(
    "footnotes",
    "Rows have neither a year nor numbers, such as titles and footnotes. Leave them out?",
    yes("Leave them out"),
    "Delete these rows in the file, or write the year that they belong to.",
)
DATES = Kind(
    "dates",
    "Years are written as dates. Take the year of each date?",
    yes("Take the year of the date"),
    "Write the year alone, with four digits.",
)
SHOWN_AS_DATES = Kind(
    "years shown as dates",
    "Dates of 1905 are most often years in cells formatted as dates. Which year is meant?",
    (("number", "The number behind the date is the year"), ("date", "The date is right: take its year")),
    "Format the column of years as plain numbers in the spreadsheet, and save.",
)
SEASONS = Kind(
    "seasons",
    "A season spans two years. Which of the two is its year in the history?",
    (("first", "The first year"), ("second", "The second year")),
    "Write one year for each season.",
)
YEAR_TEXT = Kind(
    "text beside year",
    "Words or signs stand beside years. Read the year alone?",
    (("drop", "Take the year, leave the rest out"), ("note", "Take the year, and put the rest into the note")),
    "Write the year alone, and the rest into a column of notes.",
)
MERGED_YEARS = Kind(
    "merged years",
    "A year stands in a merged cell over several rows. Is it the year of all of them?",
    yes("It is the year of all of them"),
    "Undo the merging in the spreadsheet, and write the year into each row.",
)
MERGED_CELLS = Kind(
    "merged cells",
    "A number stands in a merged cell over several rows or columns. Where does it belong?",
    (("first", "To the first of them only; the others stay empty"),),
    "Undo the merging in the spreadsheet, and write each number into its own cell.",
)
NOT_AVAILABLE = Kind(
    "not available",
    "Marks such as n/a stand where a value is missing. Leave these cells empty (not known)?",
    yes("Leave them empty: not known"),
    "Empty these cells, or write the numbers.",
)
NONE = Kind(
    "dash or none",
    "A dash or a word such as none can mean zero or not known. Which is it?",
    (("empty", "Not known: leave the cell empty"), ("zero", "Nothing: count it as 0")),
    "Write 0 where there was nothing, and empty the cells of what is not known.",
)
DECIMAL_COMMA = Kind(
    "decimal comma",
    "Numbers have a decimal comma. Read it as a decimal point?",
    yes("Read the comma as decimal mark"),
    "Write the numbers with a decimal point.",
)
THOUSANDS = Kind(
    "thousands",
    "Numbers have thousands marks. Take the marks out?",
    yes("Take the thousands marks out"),
    "Write the numbers without thousands marks.",
)
THOUSANDS_OR_DECIMAL = Kind(
    "thousands or decimal",
    "A mark before three digits can stand for thousands or for decimals. Which is it?",
    (("thousands", "Thousands: 1.234 or 1,234 is 1234"), ("decimal", "Decimals: 1.234 or 1,234 is a little over 1")),
    "Write whole numbers without marks, and decimals with a point and another number of digits.",
)
NOTES_LOST = Kind(
    "notes lost",
    "Columns that are left out hold remarks. What becomes of these?",
    (("drop", "Leave them out"), ("note", "Put them into the note of the year")),
    "Choose these columns as notes, or empty them in the file.",
)
UNITS = Kind(
    "units",
    "Units stand beside numbers. Take the numbers alone?",
    yes("Take the numbers, leave the units out"),
    "Write the numbers alone, and the unit into the header.",
)
TEXT_AFTER = Kind(
    "text after number",
    "Remarks stand behind numbers in the same cell. What becomes of them?",
    (("note", "Take the number, and put the remark into the note"), ("drop", "Take the number, leave the remark out")),
    "Write the numbers alone, and the remarks into a column of notes.",
)
DOUBTFUL = Kind(
    "doubtful numbers",
    "Signs of doubt (such as ca. or <) stand before numbers. Take the numbers as they are?",
    (("number", "Take the numbers without the signs"), ("empty", "Leave these cells empty: not known")),
    "Write the numbers alone, and the doubt into a column of notes.",
)
PLUS_MINUS = Kind(
    "plus minus",
    "Numbers have a ± behind them. What does it tell?",
    (
        ("standard error", "A standard error (or standard deviation of the estimate)"),
        ("half-width", "Half the width of a 95% confidence interval"),
        ("cv", "A coefficient of variation in percent"),
        ("ignore", "Leave it out"),
    ),
    "Write the counts alone, and their coefficients of variation into a column of their own.",
)
PLUS_MINUS_UNUSED = Kind(
    "plus minus",
    "Numbers have a ± behind them that is not needed here. Leave it out?",
    (("ignore", "Leave it out"),),
    "Write the numbers alone.",
)
PERCENT_CV = Kind(
    "percent cv",
    "Coefficients of variation are in percent. Divide them by 100?",
    yes("Divide by 100: 15 becomes 0.15"),
    "Write the coefficients of variation as proportions, such as 0.15 for 15 percent.",
)
PERCENT_MIXED = Kind(
    "mixed cv",
    "Some coefficients of variation look like percentages, others do not. Which are percentages?",
    (("large", "Those above 2 only: divide them by 100"), ("all", "All of them: divide all by 100")),
    "Write all coefficients of variation as proportions, such as 0.15 for 15 percent.",
)
PERCENT_HEADER = Kind(
    "percent header",
    "The header speaks of percent, but the coefficients of variation look like proportions. Which are they?",
    (("as is", "Proportions: take them as they are"), ("divide", "Percentages: divide them by 100")),
    "Write the coefficients of variation as proportions, such as 0.15 for 15 percent, and correct the header.",
)
STANDARD_ERRORS = Kind(
    "standard errors",
    "Standard errors become coefficients of variation: each is divided by its count. Is this right?",
    yes("Divide the standard errors by the counts"),
    "Write coefficients of variation into a column, and choose it as such.",
)
MISSING_CV = Kind(
    "missing cv",
    "Some counts have no coefficient of variation, and each count of the survey needs one. What stands there?",
    (
        ("largest", "The largest of this survey's others, to be on the safe side"),
        ("leave out", "Leave the column out: I state one for the whole survey"),
    ),
    "Write a coefficient of variation beside each count.",
)
SUM_REMOVALS = Kind(
    "sum removals",
    "Several columns hold removals. Add them up to one number a year?",
    yes("Add them up"),
    "Keep one column of removals, or leave all but one out here.",
)
SUM_COUNTS = Kind(
    "sum counts",
    "Several columns hold counts of one survey. Add them up to one number a year?",
    yes("Add them up"),
    "Keep one column for the survey, or give each column a survey of its own.",
)
EMPTY_PARTS = Kind(
    "empty parts",
    "Some of the numbers to be added up are empty while others are there. What then?",
    (("empty", "Leave the sum empty: not known"), ("zero", "Count the empty ones as zero")),
    "Write 0 where there was nothing; where a part is not known, empty the others too.",
)
TOTAL_COLUMN = Kind(
    "total column",
    "One column of removals is always the sum of the others. Is it their total?",
    (("leave out", "It is the total: leave it out of the sum"), ("add", "It is not: add it too")),
    "Leave the total column out here, or delete it in the file.",
)
NO_REMOVALS = Kind(
    "no removals",
    "No column holds removals. Leave the removals empty (not known)?",
    yes("Leave them empty: not known"),
    "Add a column of the yearly removals (0 where nothing was taken), or choose which column it is.",
)
DUPLICATE_REMOVALS = Kind(
    "duplicates",
    "Years stand in several rows. Add up the removals of each year?",
    (("sum", "Add them up"),),
    "Keep one row for each year.",
)
DUPLICATE_COUNTS = Kind(
    "duplicate counts",
    "Years stand in several rows with counts. What is the year's count?",
    (
        ("leave out", "Leave the counts of these years empty"),
        ("sum", "Add them up: each row is another part, counted on its own"),
    ),
    "Keep one row, with one count, for each year.",
)
#: One more answer where no year has two different numbers.
REPEATED = ("once", "Take the number once: rows repeat it, or only one has it")
ORDER = Kind(
    "order",
    "The years are not in rising order. Sort them?",
    yes("Sort the years, the earliest first"),
    "Sort the rows by year in the spreadsheet, and save.",
)
GAPS = Kind(
    "gaps",
    "Years are missing. Add them with empty cells (not known)?",
    yes("Add the missing years with empty cells"),
    "Add a row for each missing year; write 0 where nothing was taken.",
)
