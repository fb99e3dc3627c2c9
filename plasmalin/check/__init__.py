"""A hand derivation judged: a claim is read, compared exactly, its slips located, its ordering found."""
