"""From many records to one recommended permittivity with a range, a grade and a reason."""
