"""What is given: liquids, vessels, motions, drives, tables; units are checked here."""
