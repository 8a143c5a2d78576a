"""What a person or a program reads: tables, results file, sheet contents, issues."""
