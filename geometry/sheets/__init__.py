"""What goes on paper: customer, lowering, build and set-out sheets, and full-size patterns."""
