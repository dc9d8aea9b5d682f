"""The domain: wearer, prescription, frame, stock, comparison, advice, care, sheet, return visit. No Flask, no SQL."""
