#include "monitor.h"

void monitor_scale(struct monitor *m)
{
    uint16_t code = m->raw[RAIL];

    m->rail_mv = (uint16_t)(code * 15000u / 4096u);
}
