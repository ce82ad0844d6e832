"""What may be concluded: gross slip, standards, stiffness, fretting, loosening."""
