"""The Mat: plan and edge-on views, their handles and how they are painted."""
