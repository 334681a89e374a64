"""Words, presentations with Tietze moves, and Fox's free derivatives as lists of visits."""
