"""What leaves the program on paper or as a picture: painters, printers and page files."""
