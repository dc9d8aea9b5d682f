"""The migrations, oldest first in ``versions``; ``advisor.records.schema`` runs them."""
