#include <stdint.h>

enum channel { CH_BATTERY, CH_RAIL, CH_LOGIC };

uint16_t adc_raw(enum channel ch);

static uint32_t channel_mv(enum channel ch)
{
    uint32_t pin_x10 = adc_raw(ch) * 33000u / 4096u;

    switch (ch) {
    case CH_BATTERY:
        return pin_x10 * 11u / 10u;
    case CH_RAIL:
        return pin_x10 * 6u / 10u;
    case CH_LOGIC:
    default:
        break;
    }
    return pin_x10 / 10u;
}

uint32_t battery_mv, rail_mv;

void power_poll(void)
{
    battery_mv = channel_mv(CH_BATTERY);
    rail_mv = channel_mv(CH_RAIL);
}
