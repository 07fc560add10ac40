"""What a result has to be held against: the literature, mechanisms, limits that physics sets."""
