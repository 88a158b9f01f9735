"""The rota: who turns which station when, who watches, and how near to the best that is."""
