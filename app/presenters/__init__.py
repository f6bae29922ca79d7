"""From the document to what a panel shows, and from what it asks to an edit."""
