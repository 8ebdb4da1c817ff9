#include "gauge.h"

static const struct gauge_type divided = { .bits = 12, .input = 3, .times = 11 };
struct gauge pack = { .type = &divided };

void app_init(void)
{
    gauge_init(&pack, 2500);
}

void app_turn(void)
{
    gauge_update(&pack);
}
