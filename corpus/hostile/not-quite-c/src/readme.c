Don't compile this. It's the shift plan: {monday (tuesday [wednesday
