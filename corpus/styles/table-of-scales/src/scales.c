#include <stdint.h>

enum { WATER, BATTERY, CHANNELS };

static const struct {
    int32_t mul;
    int32_t div;
    int32_t sub;
} scale[CHANNELS] = {
    [WATER]   = { .mul = 3000,  .div = 4096, .sub = 500 },
    [BATTERY] = { .mul = 33000, .div = 4096, .sub = 0 },
};

volatile uint16_t adc_code[CHANNELS];

static int32_t scaled(int ch)
{
    return (int32_t)adc_code[ch] * scale[ch].mul / scale[ch].div - scale[ch].sub;
}

int32_t battery_mv(void) { return scaled(BATTERY); }
int32_t water_x10(void)  { return scaled(WATER); }
