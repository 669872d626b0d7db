"""report.html: one page that answers the questions asked at a bench, in the order they are asked."""
