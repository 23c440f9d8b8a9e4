"""Floor 6: drafts of papers.  Finds formulas in a draft, reads them and says what is wrong with them."""
