"""From stored numbers to surface temperatures: plan once per frame set-up, run per frame."""
