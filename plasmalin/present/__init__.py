"""Present: what a person reads. Figures, labelled data, archives, reports."""
