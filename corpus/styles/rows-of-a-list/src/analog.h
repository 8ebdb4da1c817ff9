#pragma once
/*  input     times */
#define ANALOG_ROWS(ROW) \
    ROW(BATTERY, 11u) \
    ROW(SOLAR, 21u) \
    ROW(RAIL, 2u)
