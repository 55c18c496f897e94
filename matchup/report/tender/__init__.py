"""The tender report: one set of sections, written as web page, paper, workbook and data."""
