"""One file a rule; the folder is the register.  Each file holds one `RULE` (opslang.lint.rule.LintRule)."""
