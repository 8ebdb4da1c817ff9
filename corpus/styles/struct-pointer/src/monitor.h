#ifndef MONITOR_H
#define MONITOR_H
#include <stdint.h>
enum { RAIL, LOGIC, INPUTS };
struct monitor {
    volatile uint16_t raw[INPUTS];
    uint16_t rail_mv;
};
#endif
