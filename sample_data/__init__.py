"""An invented bridge with six invented visits, for the demo."""
