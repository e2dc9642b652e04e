"""The rules, one idea a file; `commission.review.table` lists them."""
