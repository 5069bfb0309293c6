"""What leaves the office: schedule workbook, drawings, machine-readable result."""
