"""What people see: command line, screens, reports, studies."""
