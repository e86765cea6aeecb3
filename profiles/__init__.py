"""The built-in scenario: aircraft, engines and missions that are nobody's, as TOML files."""
