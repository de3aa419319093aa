"""The event report: findings described as content elements, then rendered to one offline HTML file."""
