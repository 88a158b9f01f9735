"""Charts: the only home of pyqtgraph. `chart_data` is free of it, `plot` is imported late."""
